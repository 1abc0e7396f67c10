"""Walks over the pages of a window at random, as a person in a hurry does, and what must hold after every step."""

import hashlib
import os
import random
from collections.abc import Callable
from dataclasses import dataclass, field
from datetime import timedelta
from pathlib import Path

import pytest
from PySide6.QtCore import QCoreApplication, QEvent, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QLineEdit, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.form import Form
from clinicalc.gui.main_window import NARROWEST, SMALLEST, MainWindow
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.gui.models.deeds.given import LibraryDeed
from clinicalc.gui.models.list_entries import ENTRY
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.gui.page_tabs import Page
from clinicalc.library import key_files
from clinicalc.library.opening import open_library
from clinicalc.library.standing import Standing
from clinicalc.operations.bedside import assess_patient
from clinicalc.operations.course import Course
from clinicalc.operations.model_card import Deed
from clinicalc.operations.vetting_desk import VettingDesk
from clinicalc.settings import Settings, ThemeChoice, write_settings
from clinicalc.settings.folder import VARIABLE
from tests.assessment.cases import DEMO
from tests.gui.models.shelves import FullShelf, page_of
from tests.gui.practice.settings_hands import kept
from tests.gui.test_layout import cut_labels
from tests.gui.walking import settle
from tests.library.keys_at_hand import key_file
from tests.library.records_kit import ADA, BEN

SECRET, NOT_IT = "four words nobody guesses", "four words nobody guessed"
_PASSWORD = QLineEdit.EchoMode.Password
_SIZES = ((1280, 800), (SMALLEST.width(), SMALLEST.height()), (NARROWEST.width(), NARROWEST.height()))
_LONG = 20_000


class WalkedRoom(FullShelf):
    """A library with a model in every standing, a machine that has joined it by its settings, and two people's keys."""

    def __init__(self, folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
        monkeypatch.setenv(VARIABLE, os.fspath(folder / "machine"))
        super().__init__(folder)
        practice_key = self.shelf.practice.key.id
        write_settings(Settings(library=os.fspath(self.shelf.place), practice_key=practice_key))
        self.keys: list[Path] = []
        for name in (ADA, BEN):
            secret = hashlib.sha256(name.encode()).digest()
            monkeypatch.setattr(key_files, "make_private", lambda secret=secret: secret)
            self.keys.append(folder / f"{name}.key")
            key_file(self.keys[-1], name)

    def open_at_desk(self) -> MainWindow:
        """A window as the program opens it, with settings that are kept."""
        state = EntryState()
        library = ModelLibrary(state, lambda: self.machine, lambda: self.now)
        window = MainWindow(state, preferences=kept(), library=library, choose_open=lambda _: None)
        library.start()
        return window


@dataclass
class PageWalker:
    """Takes steps in a window; `walked` says which, so that a failure can be read."""

    room: WalkedRoom
    window: MainWindow
    qtbot: QtBot
    chance: random.Random
    walked: list[str] = field(default_factory=list)

    @property
    def page(self) -> ModelsPage:
        """The Models page."""
        return page_of(self.window)

    def step(self) -> None:
        """One step, and often no wait for what it began."""
        acts = [self._turn_page, self._choose_row, self._do_deed, self._do_deed, self._type_patient]
        acts += [self._resize, self._change_theme, self._write_elsewhere, self._move_library, self._press_key]
        act = self.chance.choice(acts)
        self.walked.append(f"{act.__name__.strip('_')}: {act() or ''}")
        if self.chance.random() < 0.4:
            self.rest()
        settle()
        QCoreApplication.sendPostedEvents(None, QEvent.Type.DeferredDelete.value)

    def rest(self) -> None:
        """Until nothing is being done."""
        self.qtbot.waitUntil(lambda: not self.page.errands.is_busy, timeout=_LONG)

    # steps

    def _turn_page(self) -> str:
        page = self.chance.choice(list(Page))
        self.window.show_page(page)
        return page.name

    def _choose_row(self) -> str:
        self.window.show_page(Page.MODELS)
        models = self.page.side.list
        if models.isVisible() and models.isEnabled() and models.entries.rows:
            row = self.chance.choice(models.entries.rows)
            models.setCurrentIndex(models.entries.place_of(row.fingerprint))
            return row.title
        return ""

    def _do_deed(self) -> str:
        """Open a form, fill it as well as can be, and ask for the deed, leave it or go elsewhere."""
        self.window.show_page(Page.MODELS)
        page = self.page
        if not page.deeds.is_open:
            self.rest()
            card = page.card.shown
            about_model = [] if card is None or page.first.is_shown else sorted(card.may, key=str)
            deed = self.chance.choice([*about_model, *about_model, *LibraryDeed, Deed.INSTALL])
            page.open_deed(deed, is_about_model=deed in about_model)
        form = page.deeds._deed
        if form is None:
            return ""
        for edit in form.findChildren(QLineEdit):
            if edit.isVisible() and edit.isEnabled():
                edit.setText(self._words_for(edit))
        self._end_form(form)
        return type(form).__name__

    def _end_form(self, form: QWidget) -> None:
        faces = [face for face in form.findChildren(Form) if face.isVisible()]
        ways: list[Callable[[], object]] = [lambda: QTest.keyClick(form, Qt.Key.Key_Escape), self._turn_page]
        ways += [face.deed.click for face in faces] * 3
        self.chance.choice(ways)()
        if self.chance.random() < 0.3:
            self._turn_page()

    def _words_for(self, edit: QLineEdit) -> str:
        name = edit.accessibleName().casefold()
        if edit.echoMode() == _PASSWORD:
            return self.chance.choice((SECRET, SECRET, NOT_IT, ""))
        if "key file" in name:
            return os.fspath(self.chance.choice([*self.room.keys, self.room.folder / "none.key"]))
        if "until" in name:
            return (self.room.now.date() + timedelta(days=self.chance.randrange(-5, 300))).isoformat()
        return self.chance.choice(("agreed at the meeting", "<b>words</b> & more", "", "x" * 300))

    def _type_patient(self) -> str:
        window = self.window
        window.show_page(Page.PATIENT)
        if self.chance.random() < 0.3:
            window.foot.new_patient.click()
            return "new"
        for id, typed in entry_from_texts(DEMO).typed.items():
            if id in window.values.rows:
                window.state.type_value(id, typed)
        return "typed"

    def _resize(self) -> str:
        self.window.resize(*self.chance.choice(_SIZES))
        return str(self.window.width())

    def _change_theme(self) -> str:
        choice = self.chance.choice(list(ThemeChoice))
        self.window.page_bar.theme_chosen.emit(choice)
        return choice.name

    def _write_elsewhere(self) -> str:
        """Another window of this machine holds a model, or releases it."""
        if not self.room.shelf.place.exists():
            return ""
        desk = VettingDesk(lambda: self.room.machine, lambda: self.room.now)
        row = self.chance.choice(desk.read(Course()).rows)
        if row.standing is Standing.IN_USE:
            desk.hold(row.fingerprint, "its printer is broken")
        elif row.standing is Standing.HELD:
            desk.release(row.fingerprint)
        return row.title

    def _move_library(self) -> str:
        if not self.room.shelf.place.exists():
            self.room.find_again()
            return "back"
        if self.chance.random() < 0.4:
            self.room.lose()
            return "gone"
        return ""

    def _press_key(self) -> str:
        keys = (Qt.Key.Key_Tab, Qt.Key.Key_Backtab, Qt.Key.Key_F6, Qt.Key.Key_Escape, Qt.Key.Key_Down)
        key = self.chance.choice(keys)
        QTest.keyClick(QApplication.focusWidget() or self.window, key)
        return key.name


def require_all(walker: PageWalker) -> None:
    """Everything that holds after any step."""
    require_focus_in_sight(walker.window)
    require_no_secret_out_of_sight(walker.window)
    require_pages_apart(walker.window)
    require_card_of_row(walker.page)
    require_number_of_screen(walker.window)
    require_number_in_use(walker)
    require_nothing_cut(walker)


def require_nothing_cut(walker: PageWalker) -> None:
    """No label stays cut off; what an errand just said takes its place with the next events."""

    def is_whole() -> bool:  # the mark of an access letter takes no room
        return not [text for text in cut_labels(walker.window) if "&" not in text]

    walker.qtbot.waitUntil(is_whole, timeout=2_000)


def require_focus_in_sight(window: MainWindow) -> None:
    """What is typed goes where it can be seen."""
    focused = QApplication.focusWidget()
    assert focused is None or (focused.isVisible() and focused.isEnabled()), (focused, window.page)


def require_no_secret_out_of_sight(window: MainWindow) -> None:
    """Passphrases stand in fields on screen and in no words at all."""
    for edit in window.findChildren(QLineEdit):
        if edit.echoMode() == _PASSWORD:
            assert edit.isVisible() or not edit.text(), (edit.accessibleName(), window.page)
        else:
            assert SECRET not in edit.text()
    assert not [label.text() for label in window.findChildren(QLabel) if SECRET in label.text()]


def require_no_secret_on_disk(room: WalkedRoom) -> None:
    """In the library, in this machine's settings and in its memory of the library."""
    for file in (path for path in room.folder.rglob("*") if path.is_file()):
        assert SECRET.encode() not in file.read_bytes(), file


def require_pages_apart(window: MainWindow) -> None:
    """No number of a patient on another page."""
    shown = window.sheet.number.percentage
    if window.page is Page.PATIENT:
        return
    assert not window.bedside.isVisible()
    labels = [label.text() for label in window.findChildren(QLabel) if label.isVisible()]
    assert not shown or not [text for text in labels if shown in text]


def require_card_of_row(page: ModelsPage) -> None:
    """The card at the right is that of the row which is chosen, and the foot offers what that card allows."""
    card, chosen = page.card.shown, page.side.list.fingerprint
    current = page.side.list.currentIndex()
    assert not current.isValid() or current.data(ENTRY).fingerprint == chosen
    assert card is None or page.card.is_candidate or card.fingerprint == chosen
    viewed = page.card.view.card
    assert (viewed and viewed.fingerprint) == (card and card.fingerprint), (viewed, card)
    offered = {deed for deed, button in page.foot.deeds.items() if button.isVisible()}
    assert offered <= (frozenset() if card is None or page.deeds.is_open else card.may)


def require_number_of_screen(window: MainWindow) -> None:
    """The number is that of a new assessment of what is typed, and there is none while the model is withheld."""
    state, shown = window.state, window.sheet.number.percentage
    if state.model is None or state.withheld or state.assessment is None or state.assessment.estimate is None:
        assert shown == ""
        return
    fresh = assess_patient(
        state.model, state.entry, span=state.span, recalibration=state.recalibration, vetting=state.vetting,
        level=window.preferences.settings.level, practice_points=state._points_in_force(),
        matching_age=state.matching_age, at=state.assessment.at,
    )  # fmt: skip
    assert fresh.estimate is not None
    assert fresh.estimate.probability == state.assessment.estimate.probability


def require_number_in_use(walker: PageWalker) -> None:
    """After the window's next reading there is a number only of a model that a new reading calls in use."""
    window = walker.window
    if window.library is None or window.state.approved is None:
        return
    window.library.check()
    state = open_library(walker.room.machine, walker.room.now).state(window.state.approved.model.fingerprint)
    if state is None or state.standing is not Standing.IN_USE:
        assert window.sheet.number.percentage == ""
