"""A machine and a person at the keyboard: settings of its own, dialogs that answer what the test says."""

import hashlib
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import TypeVar

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QPushButton, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.practice.first_run import FirstRun
from clinicalc.gui.practice.publishers_form import PublishersForm

_Page = TypeVar("_Page")
PASSPHRASE = "four words nobody guesses"


@dataclass
class Person:
    """Sits at one window; `chosen` is what the system's dialogs are answered with, one after the other."""

    qtbot: QtBot
    errands: Errands = field(default_factory=Errands)
    chosen: list[Path] = field(default_factory=list)

    def choose(self, *_: object) -> Path | None:
        """The answer to a dialog."""
        return self.chosen.pop(0) if self.chosen else None

    def sit_down(self) -> FirstRun:
        """A window with the first run, as it is shown for the first time."""
        run = FirstRun(self.errands, self.choose, self.choose, self.choose)
        self.show(run)
        run.begin()
        run.focus_first()
        return run

    def show(self, widget: QWidget) -> None:
        """Show a widget as the window."""
        self.qtbot.addWidget(widget)
        widget.resize(880, 700)
        with self.qtbot.waitExposed(widget):
            widget.show()
        widget.activateWindow()

    def rest(self) -> None:
        """Until nothing is being done any more."""
        for _ in range(3):
            self.qtbot.waitUntil(lambda: not self.errands.is_busy, timeout=20_000)
            QTest.qWait(5)

    def type(self, *lines: str) -> None:
        """Each line into the field that has the focus, then Enter, which leads to the next one."""
        for line in lines:
            focused = QApplication.focusWidget()
            assert focused is not None
            QTest.keyClicks(focused, line)
            self.press(Qt.Key.Key_Return)

    def press(self, key: Qt.Key) -> None:
        """One key, and what it brings about."""
        focused = QApplication.focusWidget()
        assert focused is not None
        QTest.keyClick(focused, key)
        self.rest()


def at(shown: FirstRun | PublishersForm, kind: type[_Page]) -> _Page:
    """The page that is shown, which must be of this kind."""
    page: object = shown.page
    assert isinstance(page, kind), f"{page!r} {refusal_in(shown)}"
    return page


def form_in(page: QWidget | None) -> Form | None:
    """The form that is shown, None where there is none."""
    assert page is not None
    return next((form for form in page.findChildren(Form) if form.isVisible()), None)


def refusal_in(page: QWidget | None) -> str:
    """What is said over the buttons, "" where nothing is."""
    form = form_in(page)
    return form.refusal.text() if form is not None and form.refusal.isVisible() else ""


def buttons_in(page: QWidget) -> Iterator[QPushButton]:
    """The buttons that can be seen."""
    yield from (button for button in page.findChildren(QPushButton) if button.isVisible())


def tree_of(folder: Path) -> dict[str, str]:
    """Every file below a folder with the digest of its bytes, and every folder."""
    return {
        str(path.relative_to(folder)): hashlib.sha256(path.read_bytes()).hexdigest() if path.is_file() else ""
        for path in sorted(folder.rglob("*"))
    }
