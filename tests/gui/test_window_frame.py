"""Round the patient: menu and theme, files opened lately, copying, printing, and which window this is."""

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QGuiApplication
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication, QDialog, QFileDialog, QLabel, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.errors import FileNotWritten
from clinicalc.gui import theme
from clinicalc.gui.about_view import AboutView
from clinicalc.gui.file_dialogs import make_save_dialog
from clinicalc.gui.guide_view import GuideView
from clinicalc.gui.main_window import NARROWEST, MainWindow
from clinicalc.gui.preferences import Preferences
from clinicalc.operations.copying import copy_text
from clinicalc.resources import read_shipped
from clinicalc.settings import Paper, Settings, ThemeChoice
from tests.gui.bedside_hands import ANSWERS_2008, NUMBERS_2008, click, press, retype_number

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu or a window beside ours opens
    pytest.mark.qt_log_ignore("This plugin does not support raise", "This plugin does not support grabbing"),
]


class Machine:
    """What a window asks of the machine round it, recorded."""

    def __init__(self, folder: Path) -> None:
        self.written: list[Settings] = []
        self.previewed: list[Assessment] = []
        self.seen: tuple[str, Paper, bool] | None = None
        self.meanwhile: Callable[[], None] = lambda: None
        self.model = folder / "regional.json"
        self.model.write_bytes(read_shipped("example_models/cvd-2021-regional.json"))
        self.preferences = Preferences(Settings(practice="Tarnwick Northgate", paper=Paper.LETTER), self.keep)

    def keep(self, before: Settings, after: Settings) -> Settings:
        self.written.append(after)
        return after

    def choose_open(self, parent: QWidget) -> Path | None:
        return self.model

    def preview(
        self,
        parent: QWidget | None,
        assessment: Assessment,
        still_current: Callable[[], bool],
        *,
        practice: str,
        letterhead: tuple[str, ...],
        paper: Paper,
        explain: Callable[[QWidget | None, str], None],
        read_again: Callable[[], None],
    ) -> bool:
        self.previewed.append(assessment)
        self.seen = (practice, paper, still_current())
        self.meanwhile()
        if not still_current():
            explain(parent, "nothing was printed.")
        return still_current()


@pytest.fixture
def machine(tmp_path: Path) -> Machine:
    return Machine(tmp_path)


@pytest.fixture
def framed(qtbot: QtBot, lipids: Model, machine: Machine) -> MainWindow:
    """A window with a number, a preview that is only recorded, and settings that are only recorded."""
    window = MainWindow(
        preferences=machine.preferences,
        choose_open=machine.choose_open,
        show_preview=machine.preview,
    )
    qtbot.addWidget(window)
    window.resize(1280, 800)
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008, "Ottilie Fenn"))
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    return window


@pytest.fixture(autouse=True)
def _light_again() -> Iterator[None]:
    yield
    theme.choose(ThemeChoice.SYSTEM)


def recent_titles(window: MainWindow) -> list[str]:
    """What the chooser of the model line offers when it is opened."""
    chooser = window.model_bar.chooser
    chooser.open_menu()
    texts = [action.text() for action in chooser.menu.actions() if not action.isSeparator()]
    chooser.menu.close()
    return texts


def test_theme_is_chosen_in_the_menu_and_kept(framed: MainWindow, machine: Machine) -> None:
    choices = {action.text().replace("&", ""): action for action in framed.page_bar.themes.actions()}
    assert [name for name, action in choices.items() if action.isChecked()] == ["As the system"]
    choices["Dark"].trigger()
    assert theme.current().is_dark
    choices["As the system"].trigger()
    assert not theme.current().is_dark
    assert [settings.theme for settings in machine.written] == [ThemeChoice.DARK, ThemeChoice.SYSTEM]


def test_menu_opens_by_key(framed: MainWindow) -> None:
    press(framed, Qt.Key.Key_F10)
    assert framed.page_bar.menu.isVisible()
    assert framed.page_bar.menu.activeAction() is not None
    framed.page_bar.menu.close()
    press(framed.page_bar.menu_button, Qt.Key.Key_Return)
    assert framed.page_bar.menu.isVisible()
    framed.page_bar.menu.close()


def test_guide_and_about_open_beside_the_window_once(framed: MainWindow) -> None:
    press(framed, Qt.Key.Key_F1)
    press(framed, Qt.Key.Key_F1)
    framed.page_bar.about.trigger()
    shown = [type(view) for view in framed.findChildren(QDialog) if view.isVisible()]
    assert sorted(kind.__name__ for kind in shown) == [AboutView.__name__, GuideView.__name__]
    for view in framed.findChildren(QDialog):
        view.close()
    assert framed.sheet.number.figure == "10.5"


def test_practice_stands_in_the_bar_and_on_the_print(framed: MainWindow) -> None:
    assert framed.page_bar.practice.text() == "Tarnwick Northgate"


def test_opened_files_are_remembered_by_path_alone(framed: MainWindow, machine: Machine) -> None:
    assert recent_titles(framed) == ["&Open file…"]
    framed.model_bar.chooser.open_action.trigger()
    assert machine.written[-1].recent_files == (str(machine.model),)
    assert "Fenn" not in repr(machine.written)
    assert recent_titles(framed) == ["Cardiovascular disease, regional form, 1.0.0", "&Open file…"]


def test_recent_file_is_opened_from_the_chooser(framed: MainWindow, machine: Machine, lipids: Model) -> None:
    framed.open_path(machine.model)
    framed.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008))
    recent_titles(framed)
    framed.model_bar.chooser.menu.actions()[0].trigger()
    assert framed.model_bar.chooser.title == "Cardiovascular disease, regional form"
    assert dict(framed.state.entry.typed) == {}


def test_opening_a_file_puts_the_cursor_where_typing_begins(qtbot: QtBot, machine: Machine) -> None:
    window = MainWindow(preferences=machine.preferences)
    qtbot.addWidget(window)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.open_path(machine.model)
    for _ in range(3):
        QApplication.processEvents()
    assert QApplication.activeWindow() is window
    assert window.values.tab_stops()[0].hasFocus()
    assert [w for w in QApplication.topLevelWidgets() if w.isVisible()] == [window]


def test_arrows_on_the_chooser_change_no_model(framed: MainWindow, machine: Machine) -> None:
    machine.preferences.remember_file(machine.model)
    chooser = framed.model_bar.chooser
    chooser.setFocus()
    press(chooser, Qt.Key.Key_Down)
    assert chooser.menu.isVisible()
    press(chooser.menu, Qt.Key.Key_Escape)
    assert chooser.title == "General cardiovascular disease, lipid form"
    assert framed.sheet.number.figure == "10.5"


def test_recent_file_that_is_gone_is_explained(framed: MainWindow, machine: Machine) -> None:
    machine.preferences.remember_file(machine.model)
    machine.model.unlink()
    assert recent_titles(framed) == ["regional.json", "&Open file…"]
    framed.model_bar.chooser.menu.actions()[0].trigger()
    assert framed.refusal.isVisible()
    assert framed.refusal.title.text() == "regional.json was not opened"
    assert framed.refusal.problems.toPlainText() != ""
    assert not framed.foot.copy.isEnabled()
    click(framed.refusal.back)
    assert framed.sheet.number.figure == "10.5"


def test_settings_that_cannot_be_written_are_said_in_words(qtbot: QtBot, machine: Machine) -> None:
    def refuse(before: Settings, after: Settings) -> Settings:
        raise FileNotWritten("the settings could not be written.")

    window = MainWindow(preferences=Preferences(keep=refuse))
    qtbot.addWidget(window)
    window.open_path(machine.model)
    assert "could not be written" in window.foot.message.text()
    assert window.preferences.settings.recent_files == (str(machine.model),)


def test_copy_puts_the_whole_assessment_on_the_clipboard(framed: MainWindow) -> None:
    click(framed.foot.copy)
    assessment = framed.state.assessment
    assert assessment is not None
    content = QGuiApplication.clipboard().mimeData()
    assert content.text() == copy_text(assessment)
    assert content.formats() == ["text/plain"]
    for part in ("10.5", "within 10 years", "General cardiovascular disease, lipid form", "band 8.3–13.2"):
        assert part in content.text(), part
    assert "Fenn" not in content.text()
    assert "Copied" in framed.foot.message.text()


def test_a_message_moves_nothing(framed: MainWindow) -> None:
    QApplication.processEvents()
    height = framed.foot.height()
    framed.foot.say("Saved as general-cvd-2008-lipids 2026-12-01 1200.pdf.")
    QApplication.processEvents()
    assert framed.foot.message.isVisible()
    assert framed.foot.height() == height


def test_nothing_is_copied_printed_or_saved_without_a_number(framed: MainWindow, machine: Machine) -> None:
    QGuiApplication.clipboard().setText("before")
    retype_number(framed, "age", "")
    for button in (framed.foot.copy, framed.foot.print, framed.foot.save_pdf):
        assert not button.isEnabled()
    framed.outputs.copy()
    framed.outputs.print()
    assert QGuiApplication.clipboard().text() == "before"
    assert machine.previewed == []


def test_preview_has_the_assessment_on_screen(qtbot: QtBot, framed: MainWindow, machine: Machine) -> None:
    click(framed.foot.print)
    assert machine.previewed == [framed.state.assessment]
    assert machine.seen == ("Tarnwick Northgate", Paper.LETTER, True)
    assert framed.foot.message.text() == ""


def test_value_changed_while_the_preview_is_open_is_caught(qtbot: QtBot, framed: MainWindow, machine: Machine) -> None:
    machine.meanwhile = lambda: retype_number(framed, "age", "62")
    click(framed.foot.print)
    assert machine.previewed != [framed.state.assessment]
    assert framed.foot.message.text() == "Nothing was printed."


def test_value_changed_while_the_place_was_chosen_is_caught(qtbot: QtBot, lipids: Model, tmp_path: Path) -> None:
    place = tmp_path / "print.pdf"

    def choose_save(parent: QWidget, suggestion: str) -> Path | None:
        assert isinstance(parent, MainWindow)
        retype_number(parent, "age", "62")
        return place

    window = MainWindow(choose_save=choose_save)
    qtbot.addWidget(window)
    window.use_model(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008))
    with qtbot.waitExposed(window):
        window.show()
    click(window.foot.save_pdf)
    assert window.foot.message.text().startswith("Not saved: a value was changed")
    assert not place.exists()


def test_save_dialog_offers_nothing_of_the_last_patient(qtbot: QtBot, framed: MainWindow, tmp_path: Path) -> None:
    folder = tmp_path / "Ottilie Fenn"
    folder.mkdir()
    first = make_save_dialog(framed, "first.pdf")
    qtbot.addWidget(first)
    first.setOption(QFileDialog.Option.DontUseNativeDialog)
    first.setDirectory(str(folder))
    first.selectFile("Ottilie Fenn.pdf")
    first.accept()
    second = make_save_dialog(framed, "second.pdf")
    qtbot.addWidget(second)
    assert "Fenn" not in second.directory().absolutePath()
    assert second.history() == [] or all("Fenn" not in place for place in second.history())
    assert [Path(name).name for name in second.selectedFiles()] == ["second.pdf"]


def test_f6_goes_both_ways(framed: MainWindow) -> None:
    framed.values.focus_field("hdl_cholesterol")
    left = QApplication.focusWidget()
    press(framed, Qt.Key.Key_F6, Qt.KeyboardModifier.ShiftModifier)
    assert framed.sheet.scroller.hasFocus()
    press(framed, Qt.Key.Key_F6, Qt.KeyboardModifier.ShiftModifier)
    assert QApplication.focusWidget() is left


@pytest.mark.parametrize("size", [QSize(1280, 800), NARROWEST])
def test_tab_goes_on_from_the_result_into_it_and_back_to_the_values(framed: MainWindow, size: QSize) -> None:
    framed.resize(size)
    retype_number(framed, "total_cholesterol", "5.2")
    handle = framed.windowHandle()
    marks = [mark for mark in framed.sheet.findings.tab_stops() if mark.isVisible() and mark.isEnabled()]
    assert marks
    last = framed.values.tab_stops()[-1]
    for _ in range(2):  # the second time from a ring that the first assessment has put in order again
        framed.values.focus_field("age")
        QTest.keyClick(handle, Qt.Key.Key_F6)
        assert framed.sheet.scroller.hasFocus()
        for stop in (framed.sheet.assumptions.link, framed.sheet.views.tabs, framed.sheet.views.as_text, *marks):
            QTest.keyClick(handle, Qt.Key.Key_Tab)
            assert stop.hasFocus()
        framed.sheet.assumptions.link.setFocus()
        QTest.keyClick(handle, Qt.Key.Key_Tab, Qt.KeyboardModifier.ShiftModifier)
        assert last.hasFocus()
        QTest.keyClick(handle, Qt.Key.Key_F6)
        QTest.keyClick(handle, Qt.Key.Key_Tab, Qt.KeyboardModifier.ShiftModifier)
        assert last.hasFocus()
        QTest.keyClick(handle, Qt.Key.Key_Tab)  # the tab key does not stop at the sheet itself
        assert framed.sheet.assumptions.link.hasFocus()
        retype_number(framed, "total_cholesterol", "5.3")


@pytest.mark.parametrize("size", [QSize(1280, 800), NARROWEST])
@pytest.mark.parametrize("times", [0, 1, 2])
@pytest.mark.parametrize("field", ["age", "prior_cvd"])
def test_no_key_reaches_a_field_behind_a_refused_file(
    framed: MainWindow, tmp_path: Path, size: QSize, times: int, field: str
) -> None:
    framed.resize(size)
    framed.values.focus_field(field)
    handle = framed.windowHandle()
    for _ in range(times):  # from the field, from the result, from the field again
        QTest.keyClick(handle, Qt.Key.Key_F6)
    framed.open_path(tmp_path / "nowhere.json")
    before = dict(framed.state.entry.typed)
    marks = [label.text().lower().partition("&")[2][:1] for label in framed.values.findChildren(QLabel)]
    letters = sorted({mark for mark in marks if mark})
    assert "a" in letters
    ways = [(Qt.Key.Key_F6, Qt.KeyboardModifier.NoModifier), (Qt.Key.Key_F6, Qt.KeyboardModifier.ShiftModifier)]
    ways += [
        (Qt.Key(ord(letter.upper())), Qt.KeyboardModifier.AltModifier) for letter in letters if letter != "b"
    ]  # Back
    for key, modifier in [*ways, *ways]:
        QTest.keyClick(handle, key, modifier)
        focused = QApplication.focusWidget()
        assert focused is not None
        assert framed.refusal.isAncestorOf(focused), (key, modifier)
        for typed in (Qt.Key.Key_2, Qt.Key.Key_Y, Qt.Key.Key_Right):
            QTest.keyClick(handle, typed)
    assert framed.refusal.isVisible()
    assert dict(framed.state.entry.typed) == before


def test_f6_stays_on_the_page_of_a_refused_file(framed: MainWindow, tmp_path: Path) -> None:
    framed.values.focus_field("hdl_cholesterol")
    framed.open_path(tmp_path / "nowhere.json")
    press(framed, Qt.Key.Key_F6)
    assert framed.refusal.back.hasFocus()
    press(framed, Qt.Key.Key_F6)
    assert framed.refusal.problems.hasFocus()
