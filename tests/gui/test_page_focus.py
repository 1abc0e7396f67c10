"""What is typed on one page ends in no field of another, and in none that nobody sees."""

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import QEvent, QObject, Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QLineEdit, QStackedWidget, QVBoxLayout, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.errors import LibraryError
from clinicalc.gui.errands import Errands
from clinicalc.gui.main_window import NARROWEST, MainWindow
from clinicalc.gui.models.deeds.given import LibraryDeed
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.gui.page_focus import PageFocus
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.progress_strip import PATIENCE, ProgressStrip
from clinicalc.operations.model_card import Deed
from tests.gui.models.conftest import wait_until_read
from tests.gui.models.shelves import IN_USE, FullShelf, page_of
from tests.gui.walking import settle

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@pytest.fixture
def full(tmp_path: Path) -> FullShelf:
    """A library with a model in every state, and the machine that has joined it."""
    return FullShelf(tmp_path)


@pytest.fixture
def window(qtbot: QtBot, full: FullShelf) -> Iterator[MainWindow]:
    """A window on it, at its Models page."""
    window = full.open()
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    qtbot.waitUntil(lambda: QApplication.activeWindow() is window)
    window.show_page(Page.MODELS)
    wait_until_read(qtbot, page_of(window))
    yield window
    window.close()


@pytest.fixture
def page(window: MainWindow) -> ModelsPage:
    """Its Models page."""
    return page_of(window)


class ShownWindows(QObject):
    """Which windows open."""

    def __init__(self) -> None:
        super().__init__()
        self.seen: list[QWidget] = []

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Qt calls it for everything."""
        if event.type() == QEvent.Type.Show and isinstance(watched, QWidget) and watched.isWindow():
            self.seen.append(watched)
        return False


def test_no_card_and_no_form_opens_a_window_of_its_own(qtbot: QtBot, window: MainWindow, page: ModelsPage) -> None:
    """Not for a moment: it would take the focus along."""
    watch, application = ShownWindows(), QApplication.instance()
    assert application is not None
    application.installEventFilter(watch)
    try:
        for row in page.side.list.entries.rows:
            page.side.list.choose(row.fingerprint)
            page.read_again()
            wait_until_read(qtbot, page)
            assert page.card.shown is not None
            deeds = [(deed, True) for deed in page.card.shown.may] + [(deed, False) for deed in LibraryDeed]
            for deed, is_about_model in deeds:
                page.open_deed(deed, is_about_model)
                qtbot.waitUntil(lambda: not page.errands.is_busy)
                settle()
        window.show_page(Page.SETTINGS)
        settle()
    finally:
        application.removeEventFilter(watch)
    assert watch.seen == []


def test_a_page_out_of_sight_takes_no_focus_and_has_it_when_it_is_back(qtbot: QtBot) -> None:
    stack, fields = QStackedWidget(), [QLineEdit(), QLineEdit(), QLineEdit()]
    qtbot.addWidget(stack)
    for inside in (fields[:1], fields[1:]):
        body = QWidget()
        column = QVBoxLayout(body)
        for field in inside:
            column.addWidget(field)
        stack.addWidget(body)
    PageFocus(stack)
    with qtbot.waitExposed(stack):
        stack.show()
    stack.activateWindow()
    fields[0].setFocus()
    fields[2].setFocus()
    assert QApplication.focusWidget() is fields[0]
    QTest.keyClicks(fields[0], "61")
    assert [field.text() for field in fields] == ["61", "", ""]
    stack.setCurrentIndex(1)
    assert QApplication.focusWidget() is fields[2]
    fields[1].setFocus()  # on its own page the focus goes where it is asked to
    assert QApplication.focusWidget() is fields[1]


def test_a_deed_refused_behind_the_patients_page_leaves_the_focus_there(
    qtbot: QtBot, window: MainWindow, page: ModelsPage
) -> None:
    page.open_deed(Deed.COMMENT, is_about_model=True)
    form = page.deeds._deed
    assert form is not None
    first, key = form.findChildren(QLineEdit)[:2]
    QTest.keyClicks(first, "seen at the meeting")
    key.setText("no-such-file.key")
    form.findChildren(QLineEdit)[2].setText("a passphrase")
    first.setFocus()
    QTest.keyClick(form.findChildren(QLineEdit)[2], Qt.Key.Key_Return)
    assert page.errands.is_busy
    window.show_page(Page.PATIENT)
    window.values.focus_first()
    there = QApplication.focusWidget()
    assert there is not None
    assert there.isVisible()
    qtbot.waitUntil(lambda: not page.errands.is_busy)
    settle()
    assert QApplication.focusWidget() is there
    window.show_page(Page.MODELS)
    settle()
    assert QApplication.focusWidget() is key  # where the refusal is put right


def test_a_deed_done_behind_the_patients_page_leaves_the_focus_there(
    qtbot: QtBot, window: MainWindow, page: ModelsPage, full: FullShelf
) -> None:
    page.open_deed(Deed.HOLD, is_about_model=True)
    form = page.deeds._deed
    assert form is not None
    why = form.findChildren(QLineEdit)[0]
    QTest.keyClicks(why, "its printer is broken")
    QTest.keyClick(why, Qt.Key.Key_Return)
    window.show_page(Page.PATIENT)
    window.page_bar.tabs.setFocus()
    qtbot.waitUntil(lambda: not page.errands.is_busy and not page.deeds.is_open)
    settle()
    assert page.side.list.fingerprint == full.fingerprints[IN_USE]
    assert QApplication.focusWidget() is window.page_bar.tabs


def test_a_narrow_window_keeps_an_open_form_on_screen(window: MainWindow, page: ModelsPage) -> None:
    """F6 would lead to a list that is locked, and leave the focus in a form that is hidden."""
    page.open_deed(Deed.COMMENT, is_about_model=True)
    focused = QApplication.focusWidget()
    for size in (window.size(), NARROWEST):
        window.resize(size)
        settle()
        page.go_across()
        settle()
        assert page.right.isVisible()
        assert QApplication.focusWidget() is focused
        assert focused is not None
        assert focused.isVisible()


def test_a_narrow_window_at_a_model_is_back_at_the_model(qtbot: QtBot, window: MainWindow, page: ModelsPage) -> None:
    window.resize(NARROWEST)
    settle()
    page.go_across()
    window.show_page(Page.PATIENT)
    window.show_page(Page.MODELS)
    wait_until_read(qtbot, page)
    focused = QApplication.focusWidget()
    assert page.right.isVisible()
    assert focused is not None
    assert focused.isVisible()
    assert page.right.isAncestorOf(focused)


def test_no_library_no_filter_to_go_to(qtbot: QtBot, page: ModelsPage) -> None:
    page.side.show_error(LibraryError("the folder is gone."))
    page.right.setFocus()
    before = QApplication.focusWidget()
    page.side.list.entries.keep("nothing like it")
    page.side.focus_list()
    assert QApplication.focusWidget() is before
    assert before is None or before.isVisible()


def test_a_form_asked_for_twice_is_there_once(qtbot: QtBot, page: ModelsPage) -> None:
    """The key of a button may be answered after a click on it; a form behind the form would keep its passphrase."""
    page.open_deed(LibraryDeed.PEOPLE, is_about_model=False)
    people = page.deeds._deed
    assert people is not None
    qtbot.waitUntil(lambda: not page.errands.is_busy)
    ask: Callable[[], None] = people._appoint  # type: ignore[attr-defined]
    ask()
    secret = _secret(people)
    secret.setText("four words nobody guesses")
    ask()
    assert secret.text() == ""
    settle()
    _secret(people).setText("four words nobody guesses")
    page.hide()
    assert _secret(people).text() == ""


def test_the_reading_after_a_deed_does_not_take_its_words_away(qtbot: QtBot) -> None:
    """Over a slow share it is shown for long; what a later reading follows is over."""
    errands, gate = Errands(), _Gate()
    strip = ProgressStrip(errands)
    qtbot.addWidget(strip)

    def read() -> None:
        gate.shut = True
        errands.run("Reading the library", lambda _: gate.wait(), lambda _: None, lambda _: None)
        qtbot.wait(PATIENCE + 50)
        assert strip.words.text().startswith("Reading")
        gate.shut = False
        qtbot.waitUntil(lambda: not errands.is_busy)

    strip.say("Kidney 2.0.1: Approved until 1 March 2027.")
    read()
    assert strip.words.text() == "Kidney 2.0.1: Approved until 1 March 2027."
    read()
    assert strip.words.text() == ""


class _Gate:
    """Work that lasts until it is let go."""

    def __init__(self) -> None:
        self.shut = False

    def wait(self) -> None:
        """In the thread of the errand."""
        while self.shut:
            QTest.qSleep(1)


def _secret(inside: QWidget) -> QLineEdit:
    password = QLineEdit.EchoMode.Password
    edits = [edit for edit in inside.findChildren(QLineEdit) if edit.isVisibleTo(inside)]
    (found,) = [edit for edit in edits if edit.echoMode() == password]
    return found
