"""Deeds in a window of their own, on a real library with real keys, driven by the keyboard."""

from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path
from typing import TypeVar

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QTextEdit, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import Wanted
from clinicalc.gui.models.deeds.given import Given, LastKey, LibraryDeed
from clinicalc.gui.models.deeds.opening import open_deed
from clinicalc.operations.course import Course
from clinicalc.operations.model_card import Deed, ModelCard
from clinicalc.operations.vetting_desk import VettingDesk
from tests.cli.practices import FINGERPRINT
from tests.cli.practices import Desk as Practice
from tests.library.keys_at_hand import PASSPHRASE

_Deed = TypeVar("_Deed", bound=Deedlike)
_LONG = 20_000


@dataclass
class DeedRoom:
    """A practice, its library, and a place where its deeds are opened one after the other."""

    practice: Practice
    qtbot: QtBot
    desk: VettingDesk = field(default_factory=VettingDesk)
    errands: Errands = field(default_factory=Errands)
    last_key: LastKey = field(default_factory=LastKey)
    chosen: Path | None = None
    """What the next dialog for a file answers."""

    def card(self, fingerprint: str = FINGERPRINT) -> ModelCard:
        """The card of a model as it stands now."""
        return self.desk.card(self.desk.read(Course()), fingerprint, Course())

    def open(
        self,
        deed: Deed | LibraryDeed,
        kind: type[_Deed],
        card: ModelCard | None = None,
        given: Given | None = None,
    ) -> _Deed:
        """A deed on screen with the focus where typing begins."""
        opened = open_deed(
            deed, card, self.desk, self.errands, self._which, self._where, last_key=self.last_key,
            given=given or Given(),
        )  # fmt: skip
        assert isinstance(opened, kind)
        self.qtbot.addWidget(opened)
        opened.resize(880, 700)
        with self.qtbot.waitExposed(opened):
            opened.show()
        opened.activateWindow()
        opened.focus_first()
        self.settle()
        return opened

    def settle(self) -> None:
        """Wait until nothing is being done."""
        self.qtbot.waitUntil(lambda: not self.errands.is_busy, timeout=_LONG)
        for _ in range(4):
            QApplication.processEvents()

    def done(self, deed: Deedlike, press: Callable[[], None]) -> object:
        """What a deed says it did after this."""
        with self.qtbot.waitSignal(deed.done, timeout=_LONG) as told:
            press()
        self.settle()
        found: object = told.args[0] if told.args else None
        return found

    def _which(self, _: QWidget, __: Wanted) -> Path | None:
        return self.chosen

    def _where(self, _: QWidget, __: Wanted, ___: str) -> Path | None:
        return self.chosen


def type_in(text: str) -> None:
    """Type into what has the focus, in place of what stood there."""
    focused = QApplication.focusWidget()
    assert isinstance(focused, QLineEdit), focused
    focused.selectAll()
    QTest.keyClicks(focused, text)
    if not text:
        QTest.keyClick(focused, Qt.Key.Key_Delete)


def enter(text: str | None = None) -> None:
    """Type, then Enter: on to the next field, or from the last one the deed itself."""
    if text is not None:
        type_in(text)
    press(Qt.Key.Key_Return)


def press(key: Qt.Key, modifier: Qt.KeyboardModifier = Qt.KeyboardModifier.NoModifier) -> None:
    """A key on what has the focus."""
    focused = QApplication.focusWidget()
    assert focused is not None, (
        QApplication.activeWindow(),
        QApplication.focusWindow(),
        [w for w in QApplication.topLevelWidgets() if w.isVisible()],
    )
    QTest.keyClick(focused, key, modifier)


def type_key(file: str, passphrase: str = PASSPHRASE) -> None:
    """Key file and passphrase, from the field of the key file on; the last Enter asks for the deed."""
    enter(file)
    enter(passphrase)


def require_no_secret(deed: QWidget, *secrets: str) -> None:
    """No widget of the deed holds a passphrase, nor can bring one back."""
    for widget in deed.findChildren(QWidget):
        texts = [widget.accessibleName(), widget.accessibleDescription(), widget.toolTip(), widget.windowTitle()]
        if isinstance(widget, QLineEdit):
            texts.append(widget.text())
            if widget.echoMode() == QLineEdit.EchoMode.Password:
                widget.setEchoMode(QLineEdit.EchoMode.Normal)  # only then Qt lets anything be undone
                widget.undo()
                texts.append(widget.text())
                widget.setEchoMode(QLineEdit.EchoMode.Password)
        if isinstance(widget, QTextEdit):
            texts.append(widget.toPlainText())
        words = getattr(widget, "text", None)
        texts.append(str(words()) if callable(words) else "")
        for secret in secrets or (PASSPHRASE,):
            assert not any(secret in text for text in texts), widget
    for secret in secrets or (PASSPHRASE,):
        assert secret not in QApplication.clipboard().text()
