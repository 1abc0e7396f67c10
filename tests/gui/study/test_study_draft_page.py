"""A study file written in the window: proposed for a file of people, changed in forms, saved, opened."""

import tomllib
from pathlib import Path
from typing import Any

import pytest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.cohort.dictionary import Role
from clinicalc.gui.chooser import Chooser as Box
from clinicalc.gui.file_choosing import Wanted
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.page_tabs import Page
from clinicalc.gui.study.about_deed import AboutDeed
from clinicalc.gui.study.answer_deed import AnswerDeed
from clinicalc.gui.study.column_deed import ColumnDeed
from clinicalc.gui.study.fitting_deed import FittingDeed
from clinicalc.gui.study.save_deed import SaveDeed
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_foot import Next
from clinicalc.gui.study.study_page import StudyPage
from clinicalc.gui.study.term_deed import TermDeed, TermKind
from clinicalc.operations.study_draft import StudyDraft, entry_of
from clinicalc.operations.study_toml import spell_toml
from tests.gui.study.conftest import Chooser, rest
from tests.gui.study.study_files import StudyFiles

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@pytest.fixture
def begun(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> StudyPage:
    """The page with a study file proposed for the people."""
    page.work.begin_from(files.people)
    rest(qtbot, page)
    return page


def draft_of(page: StudyPage) -> StudyDraft:
    """The study file that is being written."""
    assert page.state.draft is not None
    return page.state.draft


def form(page: StudyPage, ask: Ask, column: str = "") -> QWidget:
    """The form that a button of the sheet opens."""
    if ask is Ask.COLUMN:
        page.sheet.tables[0].go_to(draft_of(page).columns.index(column))
    page.sheet.buttons[ask].click()
    deed = page.right.currentWidget()
    assert isinstance(deed, FormDeed)
    return deed


def point(box: Box, data: str) -> None:
    """Choose an entry as somebody would."""
    box.setCurrentIndex(box.findData(data))


def test_columns_are_proposed_with_their_reasons(begun: StudyPage) -> None:
    facts = {fact.cells[0]: fact for fact in begun.sheet.tables[0].rows.facts}
    assert facts["sbp"].cells[1:4] == ("value", "systolic_bp", "mmHg")
    assert facts["sbp"].cells[5] == "-9"
    assert facts["days"].cells[1] == "time followed"
    assert facts["status"].cells[1] == "what ended it"
    assert facts["person"].cells[1] == "person"
    assert all(fact.note for fact in facts.values())
    assert begun.pane.list.says(Step.DATA) == "being written, 6 columns"
    assert begun.foot.comes_next is Next.SAVE


def test_a_column_is_changed(begun: StudyPage) -> None:
    deed = form(begun, Ask.COLUMN, "sbp")
    assert isinstance(deed, ColumnDeed)
    deed.id.edit.setText("pressure")
    deed.label.edit.setText("Pressure in the arm")
    deed.missing.edit.setText("-9, 999")
    deed.ask()
    entry = entry_of(draft_of(begun), "sbp")
    assert (entry.predictor, entry.unit, entry.missing) == ("pressure", "mm[Hg]", ("-9", "999"))
    predictor = next(one for one in saved_tree(begun)["predictors"] if one["id"] == "pressure")
    assert (predictor["label"], predictor["quantity"]) == ("Pressure in the arm", "systolic_bp")
    assert all(one["id"] != "systolic_bp" for one in saved_tree(begun)["predictors"])


def test_a_column_is_left_out_and_taken_as_a_choice(begun: StudyPage) -> None:
    deed = form(begun, Ask.COLUMN, "sbp")
    assert isinstance(deed, ColumnDeed)
    point(deed.role.chooser, Role.IGNORED.value)
    assert not deed.id.isVisible()
    deed.ask()
    assert entry_of(draft_of(begun), "sbp").role is Role.IGNORED
    deed = form(begun, Ask.COLUMN, "sex")
    assert isinstance(deed, ColumnDeed)
    deed.answers.edit.setText("F female")
    deed.ask()
    assert "F female" in deed.form.refusal.text()
    deed.answers.edit.setText("F = woman, M = man")
    deed.ask()
    assert entry_of(draft_of(begun), "sex").levels == (("woman", "F"), ("man", "M"))


def test_what_ended_the_follow_up_is_said(begun: StudyPage) -> None:
    deed = form(begun, Ask.COLUMN, "status")
    assert isinstance(deed, ColumnDeed)
    deed.censored.edit.setText("")
    deed.competing.edit.setText("2")
    deed.ask()
    outcome = saved_tree(begun)["cohort"]["outcome"]
    assert outcome["event"] == ["1"]
    assert outcome["competing"] == ["2"]
    assert "censored" not in outcome
    assert outcome["time"] == "days"
    assert saved_tree(begun)["equations"][0]["competing_events"] == {"handled": "censored", "which": "status = 2"}
    begun.show_step(Step.MODEL)
    fitting = form(begun, Ask.FITTING)
    assert isinstance(fitting, FittingDeed)
    fitting.which.edit.setText("")
    fitting.ask()
    assert "it is not said what competes" in fitting.form.refusal.text().lower()
    fitting.which.edit.setText("death from another cause")
    fitting.ask()
    handled = saved_tree(begun)["equations"][0]["competing_events"]
    assert handled == {"handled": "censored", "which": "death from another cause"}


@pytest.mark.parametrize(
    ("kind", "fill", "term"),
    [
        (TermKind.LINEAR, {"divide": "10"}, {"id": "age", "product": [{"of": "age", "steps": [{"divide": 10}]}]}),
        (TermKind.LOG, {}, {"id": "age", "product": [{"of": "age", "steps": [{"log": "natural"}]}]}),
        (TermKind.POWER, {"power": "0.5"}, {"id": "age", "product": [{"of": "age", "steps": [{"power": 0.5}]}]}),
        (TermKind.SPLINE, {"knots": "4"}, {"spline_of": "age", "knots": 4}),
        (TermKind.SPLINE, {"knots": "45, 60, 75"}, {"spline_of": "age", "knots": [45.0, 60.0, 75.0]}),
    ],
)
def test_terms_are_added(begun: StudyPage, kind: TermKind, fill: dict[str, str], term: dict[str, object]) -> None:
    begun.show_step(Step.MODEL)
    deed = form(begun, Ask.ADD_TERM)
    assert isinstance(deed, TermDeed)
    point(deed.of.chooser, "age")
    point(deed.kind.chooser, kind.name)
    for name, text in fill.items():
        getattr(deed, name).edit.setText(text)
    deed.ask()
    assert saved_tree(begun)["equations"][0]["terms"] == [term]
    begun.sheet.buttons[Ask.REMOVE_TERM].click()
    assert saved_tree(begun)["equations"][0]["terms"] == []


def test_categories_and_products_are_added(begun: StudyPage) -> None:
    begun.show_step(Step.MODEL)
    deed = form(begun, Ask.ADD_TERM)
    assert isinstance(deed, TermDeed)
    point(deed.of.chooser, "age")
    point(deed.kind.chooser, TermKind.CATEGORIES.name)
    deed.ask()
    assert "age is no choice" in deed.form.refusal.text().lower()
    point(deed.of.chooser, "sex")
    deed.ask()
    deed = form(begun, Ask.ADD_TERM)
    assert isinstance(deed, TermDeed)
    point(deed.kind.chooser, TermKind.PRODUCT.name)
    point(deed.of.chooser, "age")
    point(deed.second.chooser, "systolic_bp")
    deed.ask()
    assert saved_tree(begun)["equations"][0]["terms"] == [
        {"categories_of": "sex", "reference": "female"},
        {"id": "age_by_systolic_bp", "product": [{"of": "age"}, {"of": "systolic_bp"}]},
    ]


def test_how_it_is_fitted_is_said(begun: StudyPage) -> None:
    begun.show_step(Step.MODEL)
    deed = form(begun, Ask.FITTING)
    assert isinstance(deed, FittingDeed)
    deed.horizons.edit.setText("1, three")
    deed.ask()
    assert "“three” is no time span" in deed.form.refusal.text()
    deed.horizons.edit.setText("1, 3")
    point(deed.ties.chooser, "breslow")
    point(deed.covariance.chooser, "robust")
    deed.ask()
    tree = saved_tree(begun)
    assert tree["equations"][0]["horizons"] == [{"years": 1}, {"years": 3}]
    assert tree["estimate"]["all"] == {"kind": "cox", "ties": "breslow", "covariance": "robust"}


def test_items_of_the_documentation_are_answered(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    page.show_step(Step.PACKAGE)
    rest(qtbot, page)
    assert "intended users and point of use" in page.sheet.words
    page.sheet.buttons[Ask.CHANGE].click()
    rest(qtbot, page)
    assert page.step is Step.MODEL
    deed = form(page, Ask.ANSWER)
    assert isinstance(deed, AnswerDeed)
    assert deed.item.chooser.currentData() == "intended users and point of use"
    deed.answer.edit.setText("Nobody.")
    deed.ask()
    deed = form(page, Ask.ANSWER)
    assert isinstance(deed, AnswerDeed)
    point(deed.item.chooser, "funding")
    deed.answer.edit.setText("None.")
    deed.ask()
    assert saved_tree(page)["documentation"] == [
        {"item": "intended users and point of use", "text": "Nobody."},
        {"item": "funding", "text": "None."},
    ]
    page.foot.next.click()
    saving = page.right.currentWidget()
    assert isinstance(saving, SaveDeed)
    saving.ask()
    rest(qtbot, page)
    page.work.fit()
    rest(qtbot, page)
    page.show_step(Step.PACKAGE)
    rest(qtbot, page)
    facts = page.sheet.tables[0].rows.facts
    assert ("funding", "None.") in [fact.cells for fact in facts]


def test_a_draft_is_not_lost_by_opening_another(
    qtbot: QtBot, begun: StudyPage, files: StudyFiles, chooser: Chooser
) -> None:
    chooser.answers[Wanted.STUDY] = files.study
    assert not begun.foot.open.isVisible()
    begun.ask_study()
    assert not begun.errands.is_busy
    assert draft_of(begun).columns
    assert "not saved" in begun.strip.words.text()
    begun.sheet.buttons[Ask.LEAVE].click()
    assert begun.state.draft is None
    begun.ask_study()
    rest(qtbot, begun)
    assert begun.state.opened is not None


def test_an_unfinished_study_file_is_saved_and_says_what_is_wrong(
    qtbot: QtBot, begun: StudyPage, tmp_path: Path
) -> None:
    begun.foot.next.click()
    deed = begun.right.currentWidget()
    assert isinstance(deed, SaveDeed)
    deed.place.edit.setText(str(tmp_path / "else" / "people.toml"))
    deed.ask()
    assert "Save it in that folder" in deed.form.refusal.text()
    deed.place.edit.setText(str(tmp_path / "people.toml"))
    deed.ask()
    rest(qtbot, begun)
    assert tomllib.loads((tmp_path / "people.toml").read_text(encoding="utf-8"))["cohort"]["file"] == "people.csv"
    assert begun.state.not_opened is not None
    assert "people.toml was not opened" in begun.sheet.words
    assert begun.state.draft is not None, "what was written can be gone on with"


def test_an_opened_study_is_changed_and_its_comments_are_spoken_of(
    qtbot: QtBot, page: StudyPage, files: StudyFiles
) -> None:
    page.work.open_study(files.study)
    rest(qtbot, page)
    page.show_step(Step.MODEL)
    page.sheet.buttons[Ask.CHANGE].click()
    rest(qtbot, page)
    assert "comments" not in page.sheet.words
    before = tomllib.loads(files.study.read_text(encoding="utf-8"))
    assert draft_of(page).tree == before
    deed = form(page, Ask.ABOUT)
    assert isinstance(deed, AboutDeed)
    deed.title.edit.setText("Another title")
    deed.ask()
    page.foot.next.click()
    saving = page.right.currentWidget()
    assert isinstance(saving, SaveDeed)
    saving.ask()
    rest(qtbot, page)
    text = files.study.read_text(encoding="utf-8")
    assert text.startswith("# a comment of the author\n")
    after = tomllib.loads(text)
    assert after.pop("title") == "Another title"
    before.pop("title")
    assert after == before
    assert page.state.draft is None
    assert page.state.opened is not None
    assert page.state.opened.study.content.title == "Another title"


def test_a_file_of_people_that_cannot_be_read_changes_nothing(qtbot: QtBot, page: StudyPage, tmp_path: Path) -> None:
    path = tmp_path / "broken.csv"
    path.write_text("a,b\n1,2,3\n", encoding="utf-8")
    page.work.begin_from(path)
    rest(qtbot, page)
    assert page.state.draft is None
    assert "broken.csv was not opened" in page.sheet.words


def saved_tree(page: StudyPage) -> dict[str, Any]:
    """The tree that would be saved."""
    return tomllib.loads(spell_toml(draft_of(page).tree))


def test_a_window_is_not_closed_over_a_study_file_that_is_not_saved_before_that_was_said(
    qtbot: QtBot, begun: StudyPage
) -> None:
    window = begun.window()
    assert isinstance(window, MainWindow)
    window.show_page(Page.PATIENT)
    assert not window.close()
    assert window.page is Page.STUDY
    assert "not saved" in begun.strip.words.text()
    form(begun, Ask.COLUMN, "sbp")
    assert window.close()
