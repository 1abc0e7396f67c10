"""The step Validation: a validation file opened, another model held against a study's people, what is refused."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from lifelines import KaplanMeierFitter
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.file_choosing import Wanted
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.study.calibration_view import PlotView
from clinicalc.gui.study.fact_table import FactTable
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.gui.study.validation_errands import is_validation_file
from clinicalc.gui.study.validation_saves import DrawingsDeed, TablesDeed, ValidationReportDeed
from clinicalc.gui.view_tabs import ViewTabs
from clinicalc.operations.validation_figures import paint_validation
from clinicalc.settings import PracticePoint
from tests.gui.study.conftest import Chooser, rest
from tests.gui.study.study_files import StudyFiles
from tests.gui.study.validation_files import ValidationFiles
from tests.gui.walking import settle

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


def table(page: StudyPage, name: str) -> FactTable:
    """The table of that name on the sheet that is shown."""
    return next(one for one in page.sheet.findChildren(FactTable) if one.accessibleName() == name)


def row(shown: FactTable, first: str) -> tuple[str, ...]:
    """The row whose first cell says that."""
    return next(fact.cells for fact in shown.rows.facts if fact.cells[0] == first)


def test_the_two_files_are_told_apart(files: StudyFiles, held_files: ValidationFiles, tmp_path: Path) -> None:
    assert is_validation_file(held_files.validation)
    assert not is_validation_file(files.study)
    assert not is_validation_file(tmp_path / "nowhere.toml")
    (tmp_path / "broken.toml").write_text("model = ", encoding="utf-8")
    assert not is_validation_file(tmp_path / "broken.toml")


def test_people_and_model_of_a_validation_file(held: StudyPage, held_files: ValidationFiles) -> None:
    people = pd.read_csv(held_files.people)
    assert held.step is Step.DATA
    assert held.pane.name.text() == "millside.toml"
    assert held.pane.list.says(Step.DATA) == f"{len(people):,} people, {int(people.status.sum())} events"
    assert held.pane.list.says(Step.MODEL) == "tarnwick-small-cox 0.1.0"
    assert "Tarnwick Millside, everybody registered on 2016-01-01" in held.sheet.words
    held.show_step(Step.MODEL)
    assert "Event within three years" in held.sheet.words
    held.show_step(Step.FIT)
    assert "none is fitted" in held.sheet.words
    assert held.foot.comes_next is Next.TO_VALIDATION
    held.show_step(Step.PACKAGE)
    assert held.foot.comes_next is Next.TO_VALIDATION


def test_it_is_validated_with_the_keys_alone(qtbot: QtBot, study_window: MainWindow, held: StudyPage) -> None:
    held.show_step(Step.VALIDATION)
    assert "Not validated yet" in held.sheet.words
    held.sheet.focus_first()
    QTest.keyClick(study_window.windowHandle(), Qt.Key.Key_V, Qt.KeyboardModifier.AltModifier)
    qtbot.waitUntil(lambda: held.state.validating.made is not None, timeout=20_000)
    rest(qtbot, held)
    made = held.state.validating.made
    assert made is not None
    assert held.foot.comes_next is Next.TO_UPDATE
    assert made.validation.verdict[0] in held.sheet.words
    assert "too low" in held.sheet.words
    assert held.pane.list.says(Step.VALIDATION) == "3 years, 1 fault found"


def test_the_figures_are_those_of_lifelines(validated: StudyPage, held_files: ValidationFiles) -> None:
    """Kaplan–Meier by lifelines over the people who have every value; the table rounds to hundredths of a per cent."""
    people = pd.read_csv(held_files.people)
    used = people[people.sbp != -9]
    fitter = KaplanMeierFitter().fit(used.days, used.status)
    observed = 100 * (1 - float(fitter.predict(3 * 365.25)))
    figures = table(validated, "Every figure at 3 years")
    said = row(figures, "Observed risk")
    assert float(said[1].removesuffix("\u202f%")) == pytest.approx(observed, abs=0.0051)
    assert row(figures, "People used")[1] == f"{len(used):,}"
    went = table(validated, "Where everybody went")
    assert row(went, "People in the file")[1] == f"{len(people):,}"
    assert row(went, "Used")[1] == f"{len(used):,}"
    groups = table(validated, "Groups")
    for site in ("mill", "quay"):
        assert row(groups, f"site: {site}")[1] == f"{int((used.site == site).sum()):,}"


def test_the_decision_table_counts_people_of_100(validated: StudyPage) -> None:
    """Flagged is with the event and without, and with the event and missed is everybody who has it."""
    decisions = table(validated, "Decision table, of 100 people at 3 years")
    figures = table(validated, "Every figure at 3 years")
    observed = float(row(figures, "Observed risk")[1].removesuffix("\u202f%"))
    assert [fact.cells[0] for fact in decisions.rows.facts] == ["5\u202f%", "10\u202f%", "20\u202f%"]
    for fact in decisions.rows.facts:
        flagged, with_event, without, missed = (float(cell) for cell in fact.cells[1:5])
        assert with_event + without == pytest.approx(flagged, abs=0.11)
        # Kaplan–Meier in two parts adds up only nearly where people are lost
        assert with_event + missed == pytest.approx(observed, abs=0.8)
    assert len(validated.sheet.findChildren(PlotView)) == 2


def test_one_horizon_at_a_time(validated: StudyPage) -> None:
    tabs = validated.sheet.findChildren(ViewTabs)[0]
    assert tabs.accessibleName() == "Horizons"
    assert [tabs.tabText(place) for place in range(tabs.count())] == ["1 year", "3 years"]
    assert tabs.currentIndex() == 1  # the verdict is about the longest
    tabs.setFocus()
    QTest.keyClick(tabs, Qt.Key.Key_Left)
    assert tabs.hasFocus()
    assert "Calibration at 1 year" in validated.sheet.words
    assert "Calibration at 3 years" not in validated.sheet.words
    validated.show_step(Step.DATA)
    validated.show_step(Step.VALIDATION)
    assert "Calibration at 1 year" in validated.sheet.words


def test_the_practices_own_point_is_set_off(qtbot: QtBot, page: StudyPage, held_files: ValidationFiles) -> None:
    own = PracticePoint("tarnwick-small-cox", 3, "a", 0.15, "Ours", "Meeting of May")
    page.work.points = lambda: (own,)
    held_files.change("decision_points = [0.05, 0.1, 0.2]\n", "")
    page.work.open_study(held_files.validation)
    rest(qtbot, page)
    page.validating.work.validate()
    rest(qtbot, page)
    decisions = table(page, "Decision table, of 100 people at 3 years")
    assert [(fact.cells[0], fact.is_marked) for fact in decisions.rows.facts] == [("15\u202f%", True)]
    assert "15\u202f% is the practice’s decision point" in page.sheet.words


def test_another_model_is_held_against_the_people_of_a_study(
    qtbot: QtBot, opened: StudyPage, held_files: ValidationFiles, chooser: Chooser
) -> None:
    opened.show_step(Step.VALIDATION)
    assert opened.foot.comes_next is None
    chooser.answers[Wanted.COEFFICIENT_FILE] = held_files.model
    opened.sheet.buttons[Ask.HOLD_MODEL].click()
    rest(qtbot, opened)
    assert opened.step is Step.VALIDATION
    assert "bears the id of this study" in opened.sheet.words
    opened.foot.next.click()
    rest(qtbot, opened)
    made = opened.state.validating.made
    assert made is not None
    assert made.validation.count.in_file == 400
    assert opened.state.opened is not None  # the study itself stays open
    assert opened.pane.list.says(Step.MODEL) == "Cox, 3 terms"
    # the calibration of a model in its own people is right on average
    ratio = made.validation.horizons[-1].observed_to_expected.value
    assert ratio is not None
    assert np.isclose(ratio, 1.0, atol=0.05)


def test_the_model_is_held_against_people_that_are_read_again(
    qtbot: QtBot, opened: StudyPage, held_files: ValidationFiles, files: StudyFiles
) -> None:
    opened.validating.work.hold_model(held_files.model)
    rest(qtbot, opened)
    opened.validating.work.validate()
    rest(qtbot, opened)
    assert opened.state.validating.is_validated
    lines = files.people.read_text(encoding="utf-8").splitlines()
    files.people.write_text("\n".join(lines[:-1]) + "\n", encoding="utf-8")
    opened.foot.again.click()
    rest(qtbot, opened)
    rest(qtbot, opened)
    validating = opened.state.validating
    assert validating.is_stale
    assert validating.opened is not None
    assert validating.opened.people is not None
    assert validating.opened.people.cohort.rows == 399
    opened.show_step(Step.VALIDATION)
    assert "not of what is open now" in opened.sheet.words
    assert opened.foot.comes_next is Next.VALIDATE


def test_a_model_that_is_none_leaves_the_one_before(
    qtbot: QtBot, validated: StudyPage, chooser: Chooser, tmp_path: Path
) -> None:
    broken = tmp_path / "broken.json"
    broken.write_text("{}", encoding="utf-8")
    chooser.answers[Wanted.COEFFICIENT_FILE] = broken
    validated.sheet.buttons[Ask.HOLD_MODEL].click()
    rest(qtbot, validated)
    assert "The coefficient file was not taken" in validated.sheet.words
    assert validated.state.validating.is_validated
    assert "too low" in validated.sheet.words


def test_figures_of_earlier_people_are_named_so(
    qtbot: QtBot, validated: StudyPage, held_files: ValidationFiles
) -> None:
    held_files.change_people("person,age", "person,agge")
    validated.foot.again.click()
    rest(qtbot, validated)
    validated.show_step(Step.VALIDATION)
    assert "not of what is open now" in validated.sheet.words
    assert "too low" in validated.sheet.words
    assert validated.pane.list.says(Step.VALIDATION) == "of earlier data"
    assert not validated.foot.next.isEnabled()


def test_a_validation_file_that_is_refused_leaves_what_is_open(
    qtbot: QtBot, validated: StudyPage, held_files: ValidationFiles
) -> None:
    held_files.change('groups = ["sex", "site"]', 'groops = ["sex", "site"]')
    validated.foot.again.click()
    rest(qtbot, validated)
    assert validated.step is Step.DATA
    assert "millside.toml was not opened: 1 problem" in validated.sheet.words
    assert "groups" in validated.sheet.words  # the close match
    assert "--" not in validated.sheet.words
    assert validated.state.validating.is_validated


def test_a_file_without_a_model_says_what_to_write(qtbot: QtBot, page: StudyPage, held_files: ValidationFiles) -> None:
    held_files.change('model = "small.json"\n', "")
    page.work.open_study(held_files.validation)
    rest(qtbot, page)
    assert "the file names no model" in page.sheet.words.casefold()
    assert "--model" not in page.sheet.words


def test_a_horizon_beyond_the_follow_up_is_refused_at_its_place(
    qtbot: QtBot, page: StudyPage, held_files: ValidationFiles
) -> None:
    people = pd.read_csv(held_files.people)
    people["days"] = people["days"].clip(upper=300)
    people.to_csv(held_files.people, index=False)
    page.work.open_study(held_files.validation)
    rest(qtbot, page)
    page.validating.work.validate()
    rest(qtbot, page)
    assert page.step is Step.VALIDATION
    assert page.state.validating.not_made is not None
    assert "The model was not validated: 1 problem" in page.sheet.words
    assert page.pane.list.says(Step.VALIDATION) == "refused"


def test_stopping_changes_nothing(qtbot: QtBot, held: StudyPage) -> None:
    held.show_step(Step.VALIDATION)
    held.foot.next.click()
    held.errands.stop()
    rest(qtbot, held)
    made = held.state.validating.made
    assert made is not None or "stopped" in held.strip.words.text()
    assert held.state.validating.not_made is None


def test_report_and_tables_are_saved(qtbot: QtBot, validated: StudyPage, held_files: ValidationFiles) -> None:
    validated.sheet.buttons[Ask.VALIDATION_REPORT].click()
    deed = validated.right.currentWidget()
    assert isinstance(deed, ValidationReportDeed)
    deed.ask()
    rest(qtbot, validated)
    path = held_files.validation.parent / "tarnwick-small-cox-validation.pdf"
    assert path.read_bytes().startswith(b"%PDF"), deed.form.refusal.text()
    assert validated.sheet.buttons[Ask.VALIDATION_REPORT].hasFocus()
    assert f"The report was written to {path}." in validated.strip.words.text()
    validated.sheet.buttons[Ask.TABLES].click()
    tables = validated.right.currentWidget()
    assert isinstance(tables, TablesDeed)
    tables.ask()
    rest(qtbot, validated)
    folder = held_files.validation.parent / "tarnwick-small-cox-validation"
    measures = pd.read_csv(folder / "measures.csv")
    made = validated.state.validating.made
    assert made is not None
    assert made.validation.horizons[-1].slope.value in measures["value"].tolist()
    assert "The tables were written to" in validated.strip.words.text()


def test_drawings_are_saved(qtbot: QtBot, validated: StudyPage, held_files: ValidationFiles) -> None:
    validated.sheet.buttons[Ask.DRAWINGS].click()
    deed = validated.right.currentWidget()
    assert isinstance(deed, DrawingsDeed)
    deed.ask()
    rest(qtbot, validated)
    folder = held_files.validation.parent / "tarnwick-small-cox-drawings"
    assert validated.sheet.buttons[Ask.DRAWINGS].hasFocus(), deed.form.refusal.text()
    assert f"The drawings were written to {folder}." in validated.strip.words.text()
    made = validated.state.validating.made
    assert made is not None
    assert {path.name: path.read_bytes() for path in folder.iterdir()} == paint_validation(
        made.validation, made.ground.model
    )


def test_tables_do_not_replace_what_is_there(qtbot: QtBot, validated: StudyPage, held_files: ValidationFiles) -> None:
    folder = held_files.validation.parent / "tarnwick-small-cox-validation"
    folder.mkdir()
    (folder / "mine.txt").write_text("mine", encoding="utf-8")
    validated.sheet.buttons[Ask.TABLES].click()
    deed = validated.right.currentWidget()
    assert isinstance(deed, TablesDeed)
    deed.ask()
    rest(qtbot, validated)
    assert validated.right.currentWidget() is deed
    assert deed.form.refusal.text()
    assert "--" not in deed.form.refusal.text()
    assert [path.name for path in folder.iterdir()] == ["mine.txt"]


@pytest.mark.parametrize("width", [1280, 1024, 640])
def test_figures_and_tables_have_all_of_their_height(
    qtbot: QtBot, study_window: MainWindow, validated: StudyPage, width: int
) -> None:
    study_window.resize(width, 800)
    settle()
    parts: list[QWidget] = [*validated.sheet.findChildren(FactTable)]
    for plot in validated.sheet.findChildren(PlotView):
        figure = plot.view.figure_shown
        assert figure is not None
        assert plot.height() >= plot.view.sizeHint().height() > 100
        assert plot.view.width() >= figure.width - 1
        parts.append(plot)
    for part in parts:
        assert part.geometry().bottom() <= part.parentWidget().rect().bottom()  # type: ignore[union-attr]
