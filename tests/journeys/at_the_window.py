"""Sitting at a machine: its own settings, its window as the program opens it, keys to whatever has the focus."""

import os
from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import Path

import pytest
import shiboken6
from PySide6.QtCore import Qt
from PySide6.QtGui import QAccessible
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QLineEdit, QListView, QTableView, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.gui.preferences import Preferences
from clinicalc.library.machine import uses_library
from clinicalc.operations.library_reading import now
from clinicalc.settings import change_settings, read_settings, write_settings
from tests.journeys.keyboard import ENTER, NO, TAB, focused_name, hit

LONG = 20_000
_MANY = 200


@dataclass
class Seat:
    """One machine and who sits at it. `chosen` is what the system's dialogs answer, one after the other."""

    qtbot: QtBot
    patch: pytest.MonkeyPatch
    settings: Path
    clock: Callable[[], datetime] = now
    chosen: list[Path] = field(default_factory=list)
    window: MainWindow | None = None

    @property
    def at(self) -> MainWindow:
        """The window in front."""
        assert self.window is not None
        return self.window

    def sit_down(self) -> None:
        """Work at this machine from now on; its window comes to the front, or is opened."""
        self.patch.setenv("CLINICALC_SETTINGS", os.fspath(self.settings))
        if self.window is None:
            self._open()
        self.at.activateWindow()
        self.qtbot.waitUntil(lambda: QApplication.activeWindow() is self.window, timeout=LONG)
        self.rest()

    def leave(self) -> None:
        """Close the window."""
        if self.window is not None and shiboken6.isValid(self.window):
            self.window.close()

    def rest(self) -> None:
        """Until nothing is being done in the window any more."""
        for _ in range(3):
            self.qtbot.waitUntil(lambda: not self._is_busy(), timeout=LONG)
            QTest.qWait(5)

    def hit(self, key: Qt.Key, modifier: Qt.KeyboardModifier = NO) -> None:
        """One key, and what comes of it."""
        menu = QApplication.activePopupWidget()
        if menu is not None:
            QTest.keyClick(menu, key, modifier)
        elif QApplication.focusWidget() is None:  # as after a press on bare ground: the window takes keys itself
            QTest.keyClick(self.at, key, modifier)
        else:
            hit(key, modifier)
        QTest.qWait(1)
        self.rest()

    def alt(self, letter: str) -> None:
        """A letter with Alt: a button goes down, and what it does has begun when this returns."""
        self.hit(Qt.Key(ord(letter.upper())), Qt.KeyboardModifier.AltModifier)
        QTest.qWait(150)  # a button pressed by its letter is seen to go down first
        self.rest()

    def enter(self, *lines: str) -> None:
        """Each line in place of what stands in the field with the focus, then Enter."""
        for line in lines:
            focused = QApplication.focusWidget()
            assert isinstance(focused, QLineEdit), (focused_name(), focused, self.words())
            if line:
                hit(Qt.Key.Key_A, Qt.KeyboardModifier.ControlModifier)
                QTest.keyClicks(focused, line)
            self.hit(ENTER)

    def tab_to(self, name: str) -> None:
        """The tab key until this has the focus."""
        for _ in range(_MANY):
            if spoken_name().startswith(name):
                return
            self.hit(TAB)
        raise AssertionError(f"{name} is not reached by the tab key; the focus is at {spoken_name()}")

    def wait_for(self, words: str) -> None:
        """Until these words are on screen."""

        def is_there() -> None:
            assert words in self.words(), f"{words!r} is not in: {self.words()}"

        self.qtbot.waitUntil(is_there, timeout=LONG)

    def words(self) -> str:
        """All that is to be read on the page in front, from top to bottom as it was made."""
        return words_on(self.at)

    def _open(self) -> None:
        """The window as the program opens it for this machine."""
        reading = read_settings()
        state = EntryState()
        preferences = Preferences(
            reading.settings, change_settings, read=read_settings, write=write_settings, problems=reading.problems
        )
        library = ModelLibrary(state, clock=self.clock) if uses_library() else None
        choices = FileChoices(self._which, self._where, self._folder)
        self.window = window = MainWindow(
            state, preferences=preferences, library=library, choose_save=self._print, choose_files=choices
        )
        self.qtbot.addWidget(window)
        window.resize(1280, 800)
        if library is not None:
            library.start_beside()
        with self.qtbot.waitExposed(window):
            window.show()

    def _is_busy(self) -> bool:
        window = self.at
        models, library = window.others._models, window.library
        return (models is not None and models.errands.is_busy) or (library is not None and library._errands.is_busy)

    def _next(self) -> Path | None:
        return self.chosen.pop(0) if self.chosen else None

    def _which(self, _: QWidget, __: Wanted) -> Path | None:
        return self._next()

    def _where(self, _: QWidget, __: Wanted, ___: str) -> Path | None:
        return self._next()

    def _folder(self, _: QWidget) -> Path | None:
        return self._next()

    def _print(self, _: QWidget, __: str) -> Path | None:
        return self._next()


def spoken_name() -> str:
    """What a screen reader calls what has the focus, by its words where it has no name besides; "" for nothing."""
    focused = QApplication.focusWidget()
    spoken = None if focused is None else QAccessible.queryAccessibleInterface(focused)
    return "" if spoken is None else spoken.text(QAccessible.Text.Name)


def words_on(window: MainWindow) -> str:
    """The words of labels, lists and tables that are shown, one to a line."""
    said: list[str] = []
    for widget in window.findChildren(QWidget):
        if not widget.isVisible() or widget.window() is not window:
            continue
        if isinstance(widget, QLabel):
            said.append(widget.text().replace("\u200b", ""))
        elif isinstance(widget, QListView | QTableView):
            said += _rows(widget)
    return "\n".join(line for line in said if line.strip())


def _rows(view: QListView | QTableView) -> list[str]:
    """What a list says of its rows to a screen reader, or the cells of a table."""
    model = view.model()
    is_list = isinstance(view, QListView)
    role = Qt.ItemDataRole.AccessibleTextRole if is_list else Qt.ItemDataRole.DisplayRole
    columns = range(1 if is_list else model.columnCount())
    rows = ([model.index(row, column).data(role) for column in columns] for row in range(model.rowCount()))
    return [" | ".join(str(cell) for cell in cells if cell) for cells in rows]
