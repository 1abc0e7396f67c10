"""The page of settings: taken and written at once, refused at the field, and never over a file with bad hand edits."""

from collections.abc import Iterator
from pathlib import Path

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QPushButton, QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui import theme
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.practice.settings_page import SettingsPage
from clinicalc.gui.practice.typed_shares import read_share, share_words
from clinicalc.gui.practice.units_table import AS_THE_FILE_SAYS
from clinicalc.settings import (
    FILE_NAME,
    MOST_POINTS,
    Paper,
    PracticePoint,
    PreferredUnit,
    Settings,
    ThemeChoice,
    write_settings,
)
from tests.gui.bedside_hands import click, press, type_text
from tests.gui.practice.settings_hands import in_file, kept, opened, own_folder, retype

pytestmark = pytest.mark.gui

POINT = PracticePoint("tarnwick-cvd-10y", 10.0, "a", 0.1, "Talk about tablets", "Practice meeting, 2026")
NARROW = "\u202f"


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """A settings folder of the test's own; the theme is as before afterwards."""
    yield from own_folder(tmp_path, monkeypatch)


@pytest.fixture
def page(qtbot: QtBot) -> SettingsPage:
    """The page, over a file that is not there yet."""
    return opened(qtbot, kept())


def test_a_name_is_written_when_its_field_is_left(page: SettingsPage) -> None:
    edit = page.practice.name.fields[0].edit
    assert edit.hasFocus()
    type_text(edit, "Tarnwick Northgate ")
    assert in_file() == Settings()
    press(edit, Qt.Key.Key_Tab)
    assert in_file() == Settings(practice="Tarnwick Northgate")
    assert edit.text() == "Tarnwick Northgate"


def test_a_letterhead_is_written_line_by_line_with_enter(page: SettingsPage) -> None:
    for place, text in ((0, "Tarnwick Northgate"), (2, "3 Quay Lane")):
        edit = page.practice.letterhead.fields[place].edit
        edit.setFocus()
        type_text(edit, text)
        press(edit, Qt.Key.Key_Return)
    assert in_file().letterhead == ("Tarnwick Northgate", "3 Quay Lane")
    assert [field.text for field in page.practice.letterhead.fields] == ["Tarnwick Northgate", "3 Quay Lane", "", ""]


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("x" * 81, "Practice has 81 characters, and at most 80 fit on a print."),
        ("a\u202eb", "Practice holds U+202E, a character that is not seen or breaks the line."),
    ],
)
def test_a_refused_name_stands_with_its_sentence_and_the_old_one_holds(
    page: SettingsPage, text: str, sentence: str
) -> None:
    name = page.practice.name
    retype(name.fields[0].edit, "Tarnwick")
    name.fields[0].edit.setText(text)
    name.fields[0].edit.editingFinished.emit()
    assert name.refusal.text() == f"{sentence} What was set before stays in force."
    assert name.refusal.isVisible()
    assert name.fields[0].is_stopped
    assert name.text == text
    assert in_file().practice == "Tarnwick"
    retype(page.practice.letterhead.fields[0].edit, "Quay Lane")  # another setting is taken, and this one still stands
    assert (name.text, in_file().letterhead) == (text, ("Quay Lane",))
    press(name.fields[0].edit, Qt.Key.Key_Escape)
    assert (name.text, name.refusal.isVisible(), name.fields[0].is_stopped) == ("Tarnwick", False, False)


@pytest.mark.parametrize(
    ("text", "level"), [("90", 0.9), ("99,9 %", 0.999), ("0.8", 0.8), ("95.5 %", 0.955), ("50%", 0.5)]
)
def test_a_level_is_read_as_it_is_meant(page: SettingsPage, text: str, level: float) -> None:
    retype(page.numbers.level.fields[0].edit, text)
    assert in_file().level == level
    assert page.numbers.level.text == share_words(level)


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("40", "“40” lies outside 50\u202f% to 99.9\u202f%."),
        ("1", "“1” lies outside 50\u202f% to 99.9\u202f%."),
        ("ninety", "The band level “ninety” is not a number. Write it such as 95\u202f% or 0.95."),
        ("nan", "The band level “nan” is not a number."),
        ("1e999999", "“1e999999” lies outside 50\u202f% to 99.9\u202f%."),
        ("", "The band level “” is not a number."),
    ],
)
def test_a_level_that_is_none_is_refused(page: SettingsPage, text: str, sentence: str) -> None:
    retype(page.numbers.level.fields[0].edit, text)
    assert page.numbers.level.refusal.text().startswith(sentence)
    assert in_file().level == 0.95


def test_shares_come_back_as_they_were_written() -> None:
    for per_mille in range(500, 1000):
        assert read_share(share_words(per_mille / 1000), "it") == per_mille / 1000


def test_a_decision_point_is_added_and_taken_out_by_keys(page: SettingsPage) -> None:
    points = page.numbers.points
    points.begin.setFocus()
    press(points.begin, Qt.Key.Key_Return)
    fields = points.fields
    assert fields.model.chooser.hasFocus()
    assert fields.model.chooser.currentText() == "Tarnwick cardiovascular (tarnwick-cvd-10y)"
    assert not fields.id.isVisible()
    for edit, text in (
        (fields.time.edit, "10"),
        (fields.probability.edit, "10 %"),
        (fields.does.edit, "Talk about tablets"),
        (fields.source.edit, "Practice meeting, 2026"),
    ):
        edit.setFocus()
        type_text(edit, text)
    press(fields.source.edit, Qt.Key.Key_Return)
    assert in_file().decision_points == (POINT,)
    assert [row.words.text() for row in points.rows] == [f"10{NARROW}% within 10 years: Talk about tablets"]
    assert points.begin.hasFocus()
    remove = points.rows[0].remove
    remove.setFocus()
    press(remove, Qt.Key.Key_Return)
    assert in_file().decision_points == ()
    assert fields.point() == POINT  # so that it can be put back, or changed
    press(fields.add, Qt.Key.Key_Return)
    assert in_file().decision_points == (POINT,)


@pytest.mark.parametrize(
    ("field", "text", "sentence"),
    [
        ("time", "soon", "Not added: its horizon “soon” is not a number."),
        ("time", "0", "Not added: its horizon of 0 is not a time span."),
        ("probability", "much", "Not added: its probability “much” is not a number."),
        ("probability", "100", "Not added: its probability of 1 is not between 0 and 1."),
        ("does", "", "Not added: its label is empty."),
        ("source", "x" * 301, "Not added: its source has 301 characters, and at most 300 are taken."),
        ("id", "", "Not added: the model’s id is empty."),
    ],
)
def test_a_decision_point_that_is_none_says_which_part(
    page: SettingsPage, field: str, text: str, sentence: str
) -> None:
    points = page.numbers.points
    points.begin.click()
    points.fields.fill(PracticePoint("elsewhere", 10.0, "a", 0.1, "Talk", "Meeting"))
    assert points.fields.id.isVisible()  # no model in use is called so
    getattr(points.fields, field).edit.setText(text)
    points.fields.add.click()
    assert points.fields.refusal.text().startswith(sentence)
    assert points.fields.refusal.isVisible()
    assert in_file() == Settings()
    press(points.fields.source.edit, Qt.Key.Key_Escape)
    assert not points.fields.isVisible()


def test_no_more_points_than_are_kept(qtbot: QtBot) -> None:
    write_settings(
        Settings(decision_points=tuple(PracticePoint("m", 1.0, "a", 0.1, str(i), "s") for i in range(MOST_POINTS)))
    )
    page = opened(qtbot, kept())
    assert not page.numbers.points.begin.isEnabled()
    assert page.numbers.points.none.text().startswith("These are as many as are kept: 8.")
    page.numbers.points.rows[3].remove.click()
    assert [point.label for point in in_file().decision_points] == ["0", "1", "2", "4", "5", "6", "7"]


def test_units_are_chosen_and_given_up(page: SettingsPage) -> None:
    chooser = page.units.table.choosers["glucose"].chooser
    assert [chooser.itemText(i) for i in range(chooser.count())] == [AS_THE_FILE_SAYS, "mg/dL", "mmol/L"]
    assert chooser.currentText() == AS_THE_FILE_SAYS
    chooser.setFocus()
    press(chooser, Qt.Key.Key_End)
    assert in_file().units == (PreferredUnit("glucose", "mmol/L"),)
    press(chooser, Qt.Key.Key_Home)
    assert in_file().units == ()


def test_paper_and_colours_hold_at_once(page: SettingsPage) -> None:
    click(page.paper.paper.segments[1])
    click(page.paper.theme.segments[2])
    assert in_file() == Settings(paper=Paper.LETTER, theme=ThemeChoice.DARK)
    assert theme.current().is_dark


def test_the_last_of_two_windows_undoes_nothing(qtbot: QtBot) -> None:
    first, second = opened(qtbot, kept()), opened(qtbot, kept())
    click(first.paper.paper.segments[1])
    second.units.table.choosers["glucose"].chooser.setCurrentIndex(2)
    assert in_file() == Settings(paper=Paper.LETTER, units=(PreferredUnit("glucose", "mmol/L"),))
    assert second.paper.paper.answer == "Letter"  # taken up with the own change
    first.open()
    assert first.units.table.choosers["glucose"].chooser.currentText() == "mmol/L"


def test_a_file_with_bad_lines_is_shown_and_waits_for_leave(qtbot: QtBot, folder: Path) -> None:
    path = folder / FILE_NAME
    text = 'level = 95 # by hand\npractice = "Tarnwick"\n[units]\nglucose = "mmol"\n'
    path.write_text(text, encoding="utf-8")
    page = opened(qtbot, kept())
    assert page.problems.isVisible()
    assert page.problems.agree.hasFocus()
    assert page.problems.title.text() == "2 things in the settings file could not be taken"
    one, other = page.problems.lines.text().splitlines()
    assert one.startswith("settings.toml, line 1: level 95 lies outside 0.5 to 0.999.")
    assert "The default is used: 0.95." in one
    assert other.startswith("settings.toml, line 4: glucose cannot be in ")
    click(page.paper.paper.segments[1])
    assert page.message.text().startswith("This holds until the program is closed, and is not kept")
    assert path.read_text(encoding="utf-8") == text
    assert page._preferences.settings.paper is Paper.LETTER
    press(page.problems.agree, Qt.Key.Key_Return)
    assert not page.problems.isVisible()
    assert page.message.text() == ""
    assert in_file() == Settings(practice="Tarnwick", paper=Paper.LETTER)
    assert (folder / "settings-1.toml").read_text(encoding="utf-8") == text


def test_a_file_mended_by_hand_is_taken_up_with_what_was_chosen_meanwhile(qtbot: QtBot, folder: Path) -> None:
    path = folder / FILE_NAME
    path.write_text("level = 95\n", encoding="utf-8")
    page = opened(qtbot, kept())
    click(page.paper.paper.segments[1])
    path.write_text("level = 0.9\n", encoding="utf-8")
    page.open()
    assert not page.problems.isVisible()
    assert page.numbers.level.text == share_words(0.9)
    click(page.paper.theme.segments[1])
    assert in_file() == Settings(level=0.9, paper=Paper.LETTER, theme=ThemeChoice.LIGHT)


def test_escape_brings_back_and_then_leaves(qtbot: QtBot, page: SettingsPage) -> None:
    edit = page.practice.name.fields[0].edit
    type_text(edit, "Tarn")
    with qtbot.assertNotEmitted(page.left, wait=10):
        press(edit, Qt.Key.Key_Escape)
    assert edit.text() == ""
    with qtbot.waitSignal(page.left, timeout=1000):
        press(edit, Qt.Key.Key_Escape)
    with qtbot.waitSignal(page.left, timeout=1000):
        click(page.back)
    assert in_file() == Settings()


@pytest.mark.parametrize("width", [1280, 1024, 640])
def test_everything_fits_and_comes_into_view_with_the_tab_key(qtbot: QtBot, width: int) -> None:
    write_settings(Settings(decision_points=(POINT,), practice="Tarnwick"))
    page = opened(qtbot, kept(), width)
    inside = page.scroller.widget()
    assert inside is not None
    assert inside.width() <= page.scroller.viewport().width()
    met = set()
    for _ in range(80):
        now = QApplication.focusWidget()
        assert now is not None
        met.add(now)
        if inside.isAncestorOf(now):
            seen = page.scroller.viewport().rect()
            corner = now.mapTo(page.scroller.viewport(), now.rect().topLeft())
            assert seen.contains(corner) or not now.isVisible(), now
        press(now, Qt.Key.Key_Tab)
    wanted: list[QWidget] = [
        *(field.chooser for field in page.units.table.choosers.values()),
        page.numbers.points.rows[0].remove,
    ]
    wanted += [page.back, page.library.join, page.numbers.points.begin]
    assert [widget.accessibleName() for widget in wanted if widget not in met] == []


def test_access_letters_are_unique(page: SettingsPage) -> None:
    texts = [button.text() for button in page.findChildren(QPushButton)]
    texts += [group.label.text() for group in (page.practice.name, page.practice.letterhead, page.numbers.level)]
    letters = [text[text.index("&") + 1].lower() for text in texts if "&" in text]
    assert len(letters) == len(set(letters)), letters


def test_a_level_changes_the_band_on_screen_at_once(qtbot: QtBot, viewed: MainWindow) -> None:
    page = opened(qtbot, viewed.preferences)
    before = viewed.state.assessment
    assert before is not None
    assert before.estimate is not None
    assert before.estimate.band is not None
    retype(page.numbers.level.fields[0].edit, "80")
    after = viewed.state.assessment
    assert after is not None
    assert after.estimate is not None
    assert after.estimate.band is not None
    assert (before.estimate.band.level, after.estimate.band.level) == (0.95, 0.8)
    assert after.estimate.probability == before.estimate.probability
    assert before.estimate.band.lower < after.estimate.band.lower
    assert after.estimate.band.upper < before.estimate.band.upper
    assert viewed.sheet.band_name.text() == f"80{NARROW}% band"
    viewed.state.blank("")
    assert viewed.sheet.band_name.text() == f"80{NARROW}% band"
