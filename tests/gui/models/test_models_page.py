"""The Models page: reading, choosing, keys, forms, and what stays while pages are left."""

import shutil
import threading
from collections.abc import Callable, Iterator
from datetime import datetime, timedelta
from pathlib import Path

import pytest
import shiboken6
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLabel, QLineEdit
from pytestqt.qtbot import QtBot

from clinicalc.gui.form_fields import SecretField
from clinicalc.gui.main_window import NARROWEST, MainWindow
from clinicalc.gui.models.deeds.given import LibraryDeed
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.gui.page_tabs import Page
from clinicalc.operations.model_card import Deed
from clinicalc.operations.vetting_desk import VettingDesk
from tests.assessment.cases import DEMO
from tests.gui.approving import fill
from tests.gui.bedside_hands import click, press
from tests.gui.models.conftest import wait_until_read
from tests.gui.models.shelves import HELD, IN_USE, REFUSED, WAITING, WITHDRAWN, FullShelf, page_of
from tests.gui.walking import settle

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu or a window beside ours opens
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


def choose(qtbot: QtBot, page: ModelsPage, fingerprint: str) -> None:
    """Choose a model with the arrow keys and wait until it is shown."""
    press(page.side.list, Qt.Key.Key_Home)
    for _ in page.side.list.entries.rows:
        if page.side.list.fingerprint == fingerprint:
            break
        press(page.side.list, Qt.Key.Key_Down)
    assert page.side.list.fingerprint == fingerprint
    qtbot.waitUntil(lambda: page.card.shown is not None and page.card.shown.fingerprint == fingerprint, timeout=20_000)
    qtbot.waitUntil(lambda: not page.errands.is_busy, timeout=20_000)


def deeds_on_screen(page: ModelsPage) -> set[Deed]:
    return {deed for deed, button in page.foot.deeds.items() if button.isVisible()}


def is_form_open(page: ModelsPage) -> bool:
    return page.deeds.is_open


def is_at_right(page: ModelsPage) -> bool:
    """Whether the right side has the focus."""
    focused = QApplication.focusWidget()
    return focused is not None and page.right.isAncestorOf(focused)


def words_on(page: ModelsPage) -> str:
    """Every label on the page."""
    return " ".join(label.text() for label in page.findChildren(QLabel) if label.isVisibleTo(page))


def test_the_library_is_listed_with_its_place_and_count(page: ModelsPage, full: FullShelf) -> None:
    assert page.side.count.text() == "6 files"
    assert str(full.shelf.place) in page.side.place.accessibleName()
    assert [row.title for row in page.side.list.entries.rows][:2] == [IN_USE, WAITING]
    assert page.card.shown is not None
    assert page.card.shown.title == IN_USE


def test_each_state_offers_its_own_deeds(qtbot: QtBot, page: ModelsPage, full: FullShelf) -> None:
    page.side.list.setFocus()
    for title in (IN_USE, WAITING, REFUSED, HELD, WITHDRAWN):
        choose(qtbot, page, full.fingerprints[title])
        assert page.card.shown is not None
        assert deeds_on_screen(page) == set(page.card.shown.may) != set()
    choose(qtbot, page, full.fingerprints[HELD])
    assert Deed.RELEASE in deeds_on_screen(page)
    assert Deed.HOLD not in deeds_on_screen(page)


def test_nothing_of_another_model_stands_beside_the_one_that_is_chosen(page: ModelsPage, full: FullShelf) -> None:
    page.side.list.setFocus()
    press(page.side.list, Qt.Key.Key_Down)
    assert page.card.shown is None
    assert deeds_on_screen(page) == set()
    assert page.card.note.title.text().startswith(WAITING)
    assert page.right.currentWidget() is page.card.note


def test_many_arrow_keys_end_at_the_last_one(qtbot: QtBot, page: ModelsPage, full: FullShelf) -> None:
    page.side.list.setFocus()
    for _ in range(5):
        press(page.side.list, Qt.Key.Key_Down)
    qtbot.waitUntil(lambda: page.card.shown is not None, timeout=20_000)
    assert page.card.shown is not None
    assert page.card.shown.fingerprint == page.side.list.fingerprint == full.fingerprints[WITHDRAWN]


def test_keys_lead_through_the_page(models_window: MainWindow, page: ModelsPage) -> None:
    handle = models_window.windowHandle()
    page.side.list.setFocus()
    QTest.keyClick(handle, Qt.Key.Key_F6)
    assert is_at_right(page)
    QTest.keyClick(handle, Qt.Key.Key_F6)
    assert page.side.list.hasFocus()
    press(page.side.list, Qt.Key.Key_Return)
    assert is_at_right(page)
    QTest.keyClick(handle, Qt.Key.Key_Escape)
    assert page.side.list.hasFocus()
    QTest.keyClick(handle, Qt.Key.Key_F, Qt.KeyboardModifier.ControlModifier)
    assert page.side.filter.edit.hasFocus()
    QTest.keyClicks(page.side.filter.edit, "held")
    assert page.side.count.text() == "1 of 6 files"
    press(page.side.filter.edit, Qt.Key.Key_Return)
    assert page.side.list.hasFocus()
    QTest.keyClick(handle, Qt.Key.Key_F, Qt.KeyboardModifier.ControlModifier)
    press(page.side.filter.edit, Qt.Key.Key_Escape)
    assert page.side.count.text() == "6 files"


def test_a_filter_that_finds_nothing_says_so(page: ModelsPage) -> None:
    page.side.filter.edit.setText("no such model")
    settle()
    assert page.side.note.isVisible()
    assert "Escape" in page.side.note.text()
    page.side.filter.edit.clear()
    assert page.side.list.isVisible()


def test_the_patient_stays_and_no_number_stands_on_another_page(qtbot: QtBot, full: FullShelf) -> None:
    window = full.open()
    qtbot.addWidget(window)
    window.resize(1280, 800)
    fill(window, DEMO)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    handle = window.windowHandle()
    figure = window.sheet.number.figure
    assert figure
    QTest.keyClick(handle, Qt.Key.Key_F3)
    wait_until_read(qtbot, page_of(window))
    assert not window.bedside.isVisible()
    assert window.windowTitle() == "Models"
    assert figure not in words_on(page_of(window))
    before = dict(window.state.entry.typed)
    for key in (Qt.Key.Key_1, Qt.Key.Key_2, Qt.Key.Key_Y):
        QTest.keyClick(handle, key)
    QTest.keyClick(handle, Qt.Key.Key_N, Qt.KeyboardModifier.AltModifier)  # New patient, on the patient's page
    assert dict(window.state.entry.typed) == before
    QTest.keyClick(handle, Qt.Key.Key_F2)
    assert window.bedside.isVisible()
    assert window.sheet.number.figure == figure
    window.close()


def test_a_hold_by_the_form_takes_the_number_away(qtbot: QtBot, full: FullShelf) -> None:
    """From the button to the patient's page, which reads again and withholds."""
    window = full.open()
    qtbot.addWidget(window)
    window.resize(1280, 800)
    fill(window, DEMO)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.show_page(Page.MODELS)
    page = page_of(window)
    wait_until_read(qtbot, page)
    click(page.foot.deeds[Deed.HOLD])
    assert page.deeds.is_open
    assert not page.foot.isVisible()
    edit = QApplication.focusWidget()
    assert isinstance(edit, QLineEdit)
    QTest.keyClicks(edit, "its paper was withdrawn")
    press(edit, Qt.Key.Key_Return)
    qtbot.waitUntil(lambda: not page.deeds.is_open, timeout=20_000)
    wait_until_read(qtbot, page)
    row = next(row for row in page.side.list.entries.rows if row.title == IN_USE)
    assert row.says.startswith("Held here since")
    assert page.side.list.fingerprint == row.fingerprint
    assert Deed.RELEASE in deeds_on_screen(page)
    assert IN_USE in page.side.strip.words.text()
    assert window.state.withheld
    assert window.sheet.number.figure == ""
    window.close()


def test_a_form_is_left_with_escape_and_a_passphrase_goes_with_the_page(
    models_window: MainWindow, page: ModelsPage
) -> None:
    handle = models_window.windowHandle()
    click(page.foot.deeds[Deed.WITHDRAW])
    assert not page.side.list.isEnabled()
    secret = next(field for field in page.findChildren(SecretField) if field.isVisible())
    secret.edit.setText("nobody may see this")
    QTest.keyClick(handle, Qt.Key.Key_F2)
    QTest.keyClick(handle, Qt.Key.Key_F3)
    assert is_form_open(page)
    assert secret.edit.text() == ""
    QTest.keyClick(handle, Qt.Key.Key_Escape)
    assert not is_form_open(page)
    assert page.side.list.isEnabled()
    assert page.side.list.hasFocus()
    assert page.foot.isVisible()


def test_a_deed_asked_for_while_the_model_is_read_opens_afterwards(qtbot: QtBot, page: ModelsPage) -> None:
    page.read_again()
    assert page.errands.is_busy
    page.open_deed(LibraryDeed.PEOPLE, is_about_model=False)
    assert not page.deeds.is_open
    qtbot.waitUntil(lambda: page.deeds.is_open, timeout=20_000)


def test_what_concerns_the_whole_library_stands_over_the_list(qtbot: QtBot, page: ModelsPage, full: FullShelf) -> None:
    full.lose()
    full.now += timedelta(hours=2)
    page.read_again()
    wait_until_read(qtbot, page)
    assert "library" in words_on(page)
    said = page.reading.view
    assert said is not None
    assert said.caution
    assert said.caution in words_on(page)
    assert deeds_on_screen(page) <= {Deed.HOLD, Deed.RELEASE}


def test_a_library_that_cannot_be_read_says_so_in_place_of_the_list(
    qtbot: QtBot, page: ModelsPage, full: FullShelf
) -> None:
    shutil.rmtree(full.shelf.place)
    shutil.rmtree(full.machine.folder)
    full.machine.folder.mkdir()
    page.read_again()
    qtbot.waitUntil(lambda: page.side.note.isVisible(), timeout=20_000)
    assert not page.side.list.isVisible()
    assert len(page.side.note.text()) > 40
    assert deeds_on_screen(page) == set()
    assert page.card.shown is None
    assert not page.foot.install.isEnabled()


def test_a_second_window_reads_for_itself(qtbot: QtBot, open_full: Callable[[], MainWindow]) -> None:
    one, two = open_full(), open_full()
    page_of(one).read_again()
    page_of(two).read_again()
    for window in (one, two):
        wait_until_read(qtbot, page_of(window))
        assert page_of(window).side.count.text() == "6 files"


def test_a_window_closed_while_something_is_read_is_left_in_peace(qtbot: QtBot, full: FullShelf) -> None:
    window = full.open()
    window.show()
    window.show_page(Page.MODELS)
    page = page_of(window)
    wait_until_read(qtbot, page)
    page.read_again()
    page.reading.read_card(full.fingerprints[WAITING])
    window.close()
    errands = page.errands
    shiboken6.delete(window)
    QTest.qWait(300)
    assert not errands.is_busy


def test_narrow_windows_show_the_list_or_the_model(qtbot: QtBot, models_window: MainWindow, page: ModelsPage) -> None:
    models_window.resize(NARROWEST)
    settle()
    assert page.side.isVisible()
    assert not page.right.isVisible()
    press(page.side.list, Qt.Key.Key_Return)
    settle()
    assert page.right.isVisible()
    assert not page.side.isVisible()
    assert page.foot.more.isVisible()
    assert page.foot.deeds[Deed.APPROVE].isVisible()
    click(page.foot.back)
    assert page.side.list.hasFocus()
    models_window.resize(1280, 800)
    settle()
    assert page.side.isVisible()
    assert page.right.isVisible()


def test_a_machine_without_a_library_is_led_to_one(
    qtbot: QtBot, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setenv("CLINICALC_SETTINGS", str(tmp_path))
    window = MainWindow()
    qtbot.addWidget(window)
    with qtbot.waitExposed(window):
        window.show()
    window.show_page(Page.MODELS)
    settle()
    page = page_of(window)
    assert page.first.is_shown
    assert "no model library" in page.side.note.text()
    assert not page.foot.isVisible()
    window.close()


class Clock:
    """A clock of the machine at which the library is read: it can be made to keep people waiting, or to break."""

    def __init__(self, full: FullShelf) -> None:
        self._full = full
        self.gate = threading.Event()
        self.gate.set()
        self.is_broken = False

    def __call__(self) -> datetime:
        self.gate.wait(10)
        if self.is_broken:
            raise KeyError("a secret word")
        return self._full.now


@pytest.fixture
def clock(full: FullShelf) -> Clock:
    return Clock(full)


@pytest.fixture
def timed(qtbot: QtBot, full: FullShelf, clock: Clock) -> Iterator[ModelsPage]:
    """The page in a window of its own, read once by that clock."""
    made = ModelsPage(VettingDesk(lambda: full.machine, clock))
    qtbot.addWidget(made)
    made.resize(1280, 700)
    with qtbot.waitExposed(made):
        made.show()
    made.enter()
    wait_until_read(qtbot, made)
    yield made
    clock.gate.set()
    made.leave()


def test_long_reading_can_be_cancelled_and_the_list_stays(qtbot: QtBot, timed: ModelsPage, clock: Clock) -> None:
    before = timed.side.list.entries.rows
    clock.gate.clear()
    timed.read_again()
    qtbot.waitUntil(lambda: timed.side.strip.cancel.isVisible(), timeout=5_000)
    assert timed.side.strip.words.text()
    timed.side.strip.cancel.click()
    clock.gate.set()
    qtbot.waitUntil(lambda: not timed.errands.is_busy, timeout=5_000)
    assert timed.side.list.entries.rows == before
    assert timed.side.strip.words.text() == "It was stopped. The list is as it was read before."
    assert not timed.side.strip.cancel.isVisible()


def test_what_is_over_at_once_shows_no_progress(qtbot: QtBot, page: ModelsPage) -> None:
    page.read_again()
    settle()
    assert not page.side.strip.isVisible()
    wait_until_read(qtbot, page)
    assert not page.side.strip.isVisible()


def test_a_fault_of_the_program_is_said_in_place_of_the_list(qtbot: QtBot, timed: ModelsPage, clock: Clock) -> None:
    clock.is_broken = True
    with qtbot.capture_exceptions() as caught:
        timed.read_again()
        qtbot.waitUntil(lambda: not timed.errands.is_busy, timeout=5_000)
    assert [kind for kind, _, _ in caught] == [KeyError]
    assert "a fault of its own (KeyError)" in timed.side.note.text()
    assert "secret" not in words_on(timed)
    assert timed.card.shown is None
