"""The form of a fit: which fields there are with each kind, what they write, what stays, what is refused."""

import pytest
from pytestqt.qtbot import QtBot

from clinicalc.gui.study.column_deed import ColumnDeed
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.changing_studies import fitting, offered, point, save, tree_of
from tests.gui.study.conftest import rest
from tests.gui.study.study_files import StudyFiles

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


@pytest.mark.parametrize(
    ("kind", "ties", "penalties", "covariances"),
    [
        ("cox", True, ["none", "ridge"], ["model", "robust", "cluster"]),
        ("fine-gray", True, ["none"], ["robust", "cluster"]),
        ("logistic", False, ["none", "firth", "ridge"], ["model", "robust", "cluster"]),
        ("cloglog", False, ["none"], ["model", "robust", "cluster"]),
    ],
)
def test_what_does_not_apply_to_a_kind_is_not_shown(
    changing: StudyPage, kind: str, ties: bool, penalties: list[str], covariances: list[str]
) -> None:
    deed = fitting(changing)
    point(deed.kind.chooser, kind)
    assert deed.ties.isVisible() is ties
    assert offered(deed.penalty.chooser) == penalties
    assert deed.penalty.isVisible() is (len(penalties) > 1)
    assert offered(deed.covariance.chooser) == covariances
    assert not deed.strength.isVisible()
    assert not deed.cluster.isVisible()


def test_a_ridge_has_a_strength_or_leaves_it_to_the_fit(qtbot: QtBot, changing: StudyPage) -> None:
    deed = fitting(changing)
    point(deed.penalty.chooser, "ridge")
    assert deed.strength.isVisible()
    deed.ask()
    assert tree_of(changing)["estimate"]["all"] == {
        "kind": "cox",
        "ties": "efron",
        "penalty": "ridge",
        "covariance": "model",
    }
    assert "ridge, of a strength chosen by 10-fold cross-validation" in changing.sheet.words
    deed = fitting(changing)
    for text, words in (
        ("4,5", "“4,5” is no number"),
        ("strong", "“strong” is no number"),
        ("0", "lies above 0"),
        ("-1", "lies above 0"),
        ("inf", "lies above 0"),
        ("nan", "lies above 0"),
    ):
        deed.strength.edit.setText(text)
        deed.ask()
        assert words in deed.form.refusal.text(), text
        assert deed.strength.edit.hasFocus()
    deed.strength.edit.setText("4")
    deed.ask()
    assert tree_of(changing)["estimate"]["all"]["ridge_strength"] == 4
    assert "ridge, strength 4" in changing.sheet.words
    save(qtbot, changing)
    assert changing.state.opened is not None
    table = changing.state.opened.study.fits[0].table
    assert (table.penalty, table.ridge_strength) == ("ridge", 4.0)
    changing.show_step(Step.MODEL)
    assert "ridge, strength 4" in changing.sheet.words


def test_a_penalty_that_another_kind_does_not_take_is_gone(changing: StudyPage) -> None:
    deed = fitting(changing)
    point(deed.penalty.chooser, "ridge")
    deed.strength.edit.setText("4")
    point(deed.kind.chooser, "cloglog")
    assert not deed.strength.isVisible()
    deed.ask()
    assert tree_of(changing)["estimate"]["all"] == {"kind": "cloglog", "covariance": "model"}


def test_what_the_form_does_not_speak_of_stays(qtbot: QtBot, opened: StudyPage, files: StudyFiles) -> None:
    """Strata and rounded times are said in an editor, and are for a Cox fit only."""
    files.change_study('kind = "cox"', 'kind = "cox"\nround_times = 3\nstrata = "sex"')
    files.change_study('    {categories_of = "sex", reference = "female"},\n', "")
    opened.work.read_again()
    rest(qtbot, opened)
    assert opened.state.not_opened is None
    opened.show_step(Step.MODEL)
    opened.sheet.buttons[Ask.CHANGE].click()
    rest(qtbot, opened)
    deed = fitting(opened)
    point(deed.ties.chooser, "breslow")
    deed.ask()
    assert tree_of(opened)["estimate"]["all"] == {
        "kind": "cox",
        "ties": "breslow",
        "covariance": "model",
        "round_times": 3,
        "strata": "sex",
    }
    deed = fitting(opened)
    point(deed.kind.chooser, "fine-gray")
    deed.ask()
    assert tree_of(opened)["estimate"]["all"] == {
        "kind": "fine-gray",
        "ties": "breslow",
        "covariance": "robust",
        "round_times": 3,
    }
    deed = fitting(opened)
    point(deed.kind.chooser, "logistic")
    deed.ask()
    assert tree_of(opened)["estimate"]["all"] == {"kind": "logistic", "covariance": "robust"}


def test_firths_penalty_has_the_one_covariance_that_is_valid_for_it(changing: StudyPage) -> None:
    deed = fitting(changing)
    point(deed.kind.chooser, "logistic")
    point(deed.covariance.chooser, "robust")
    point(deed.penalty.chooser, "firth")
    assert not deed.covariance.isVisible()
    assert not deed.cluster.isVisible()
    deed.ask()
    assert tree_of(changing)["estimate"]["all"] == {"kind": "logistic", "penalty": "firth", "covariance": "model"}
    deed = fitting(changing)
    point(deed.penalty.chooser, "none")
    assert deed.covariance.isVisible()


def test_how_competing_events_are_handled_follows_the_kind(changing: StudyPage) -> None:
    """The column that says what ended the follow-up is said after the fit was chosen, or before."""
    deed = fitting(changing)
    point(deed.kind.chooser, "fine-gray")
    assert not deed.which.isVisible()
    deed.ask()
    assert "this fit needs them" in changing.sheet.words
    assert tree_of(changing)["equations"][0]["competing_events"] == {"handled": "not_applicable"}
    changing.show_step(Step.DATA)
    assert changing.state.draft is not None
    changing.sheet.tables[0].go_to(changing.state.draft.columns.index("status"))
    changing.sheet.buttons[Ask.COLUMN].click()
    column = changing.right.currentWidget()
    assert isinstance(column, ColumnDeed)
    column.competing.edit.setText("2")
    column.ask()
    handled = tree_of(changing)["equations"][0]["competing_events"]
    assert handled == {"handled": "subdistribution", "which": "status = 2"}
    changing.show_step(Step.MODEL)
    assert "status = 2; kept among those at risk (subdistribution)" in changing.sheet.words
    deed = fitting(changing)
    assert "in their presence" in deed.which.edit.accessibleDescription()
    point(deed.kind.chooser, "cox")
    assert "as censored" in deed.which.edit.accessibleDescription()
    deed.which.edit.setText("death from another cause")
    deed.ask()
    handled = tree_of(changing)["equations"][0]["competing_events"]
    assert handled == {"handled": "censored", "which": "death from another cause"}
    deed = fitting(changing)
    point(deed.kind.chooser, "fine-gray")
    deed.ask()
    tree = tree_of(changing)
    assert tree["equations"][0]["competing_events"]["handled"] == "subdistribution"
    assert tree["estimate"]["all"] == {"kind": "fine-gray", "ties": "breslow", "covariance": "robust"}
