"""What the methods came to on the step Fit, the penalties offered where a fit has no estimate, and a cancelled fit."""

import re
import tomllib

import numpy as np
import pandas as pd
import pytest
from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QLabel
from pytestqt.qtbot import QtBot
from scipy import stats

from clinicalc.assessment.numerals import MINUS
from clinicalc.development.study_method_figures import (
    Corrected,
    ImputationFigures,
    LostReplicates,
    OptimismFigures,
    Penalty,
    PenaltyFigures,
    PooledTerm,
    Statistic,
)
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.study.calibration_view import CalibrationView
from clinicalc.gui.study.fact_table import FactTable
from clinicalc.gui.study.fit_methods import (
    drawn_words,
    imputation_lines,
    optimism_facts,
    penalty_lines,
    pooled_facts,
)
from clinicalc.gui.study.fitting_deed import FittingDeed
from clinicalc.gui.study.save_deed import SaveDeed
from clinicalc.gui.study.steps import Ask, Step
from clinicalc.gui.study.study_page import StudyPage
from tests.gui.study.conftest import rest
from tests.gui.study.study_files import StudyFiles, let_others_die, make_binary, plan_methods, separate

pytestmark = [
    pytest.mark.gui,
    pytest.mark.qt_log_ignore("This plugin does not support"),
]


def fit_files(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> StudyPage:
    """The page with the study of the files read and fitted, or refused."""
    page.work.open_study(files.study)
    rest(qtbot, page)
    assert page.state.not_opened is None, page.sheet.words
    page.work.fit()
    rest(qtbot, page)
    return page


def table(page: StudyPage, name: str) -> FactTable:
    """The table of that name on the step that is shown."""
    return next(one for one in page.sheet.tables if one.accessibleName().startswith(name))


def number(text: str) -> float:
    """A figure of the window as a number."""
    return float(text.replace(MINUS, "-").replace("\u202f%", "").replace(",", ""))


def test_shares_with_the_event_are_counted_where_other_events_come_first(
    qtbot: QtBot, page: StudyPage, files: StudyFiles
) -> None:
    """Aalen-Johansen and Kaplan-Meier worked out by a loop over the times of the complete cases."""
    let_others_die(files, "cox")
    fit_files(qtbot, page, files)
    people = pd.read_csv(files.people)
    people = people[people.sbp != -9]
    fact = table(page, "Incidence").rows.facts[1]
    cells = fact.cells
    survival, alone, share, others = 1.0, 1.0, 0.0, 0.0
    for time in np.unique(people.days):
        if time > 3 * 365.25:
            break
        at_risk = int((people.days >= time).sum())
        had = int(((people.days == time) & (people.status == 1)).sum())
        died = int(((people.days == time) & (people.status == 2)).sum())
        share += survival * had / at_risk
        others += survival * died / at_risk
        survival *= 1 - (had + died) / at_risk
        alone *= 1 - had / at_risk
    assert cells[0] == "3 years"
    assert number(cells[1]) == pytest.approx(100 * share, abs=0.051)
    assert number(cells[3]) == pytest.approx(100 * others, abs=0.051)
    naive, excess = re.findall(r"([\d.]+)\u202f%", fact.note)
    assert number(naive) == pytest.approx(100 * (1 - alone), abs=0.051)
    assert number(excess) == pytest.approx(100 * ((1 - alone) / share - 1), abs=0.051)
    assert "taken as censored" in page.sheet.words


def test_a_fine_gray_fit_is_shown_as_one(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    let_others_die(files)
    fit_files(qtbot, page, files)
    assert page.state.fit is not None
    assert page.pane.list.says(Step.MODEL) == "Fine–Gray, 3 terms"
    assert table(page, "Coefficients").rows.columns[-1].heading.startswith("Subdistribution hazard ratio")
    assert "competing events kept among those at risk" in page.sheet.words
    page.show_step(Step.MODEL)
    assert "death from another cause; kept among those at risk (subdistribution)" in page.sheet.words
    assert "Fine–Gray (subdistribution hazard)" in page.sheet.words


def test_calibration_is_drawn_at_each_horizon_with_its_table_behind(
    qtbot: QtBot, page: StudyPage, files: StudyFiles
) -> None:
    fit_files(qtbot, page, files)
    views = page.sheet.findChildren(CalibrationView)
    headings = [label.text() for label in page.sheet.findChildren(QLabel)]
    assert "Predicted and observed at 1 year" in headings
    assert "Predicted and observed at 3 years" in headings
    assert len(views) == 2
    assert all("392 people" in view.words for view in views)
    assert views[1].view.accessibleName().startswith("Calibration at 3 years")
    views[0].as_text.click()
    assert "Group 1" in views[0].text.toPlainText()
    views[0].as_text.click()
    assert views[0].text.toPlainText() == ""


def test_optimism_stands_in_a_table_and_the_samples_under_it(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    files.study.write_text(
        files.study.read_text(encoding="utf-8") + "\n[bootstrap]\nreplicates = 20\nseed = 3\n", encoding="utf-8"
    )
    fit_files(qtbot, page, files)
    assert page.state.fit is not None
    optimism = page.state.fit.fitted.figures[0].optimism
    assert optimism is not None
    facts = table(page, "Optimism").rows.facts
    for fact, figures in zip(facts, optimism.figures, strict=True):
        apparent, lost, corrected = (number(cell) for cell in fact.cells[1:])
        assert apparent - lost == pytest.approx(corrected, abs=2e-3)
        assert corrected == pytest.approx(figures.corrected, abs=1e-3)
    assert "20 bootstrap samples, seed 3" in page.sheet.words
    assert "corrected for optimism further down" in page.sheet.words
    page.show_step(Step.MODEL)
    assert "found by bootstrap: 20 samples, seed 3" in page.sheet.words


def test_values_filled_in_are_counted(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    plan_methods(files, sets=3)
    files.study.write_text(
        files.study.read_text(encoding="utf-8").replace("\n[bootstrap]\nreplicates = 20\n", ""), encoding="utf-8"
    )
    missing = int((pd.read_csv(files.people).sbp == -9).sum())
    fit_files(qtbot, page, files)
    assert page.state.fit is not None
    imputed = page.state.fit.fitted.figures[0].imputed
    assert imputed is not None
    assert table(page, "Values filled in").rows.facts[0].cells[:2] == ("systolic_bp", f"{missing}")
    assert [fact.cells[0] for fact in table(page, "Missing information").rows.facts] == [
        "age",
        "sex_male",
        "systolic_bp",
    ]
    assert "400, all to whom the equation applies, some with values filled in" in page.sheet.words
    assert "3, each after 5 rounds over the columns, seed 1" in page.sheet.words
    coefficients = table(page, "Coefficients").rows.facts
    for fact, pooled in zip(coefficients, imputed.terms, strict=True):
        beta, error = number(fact.cells[2]), number(fact.cells[3])
        reach = stats.t.ppf(0.975, pooled.degrees) * error
        low, high = fact.cells[4].partition(", ")[2].split("–")
        assert number(low) == pytest.approx(np.exp(beta - reach), rel=6e-3)
        assert number(high) == pytest.approx(np.exp(beta + reach), rel=6e-3)


def test_a_fit_without_an_estimate_offers_penalties(
    qtbot: QtBot, study_window: MainWindow, page: StudyPage, files: StudyFiles
) -> None:
    """No woman has the event: the button leads to the form with the penalty chosen, and the fit then stands."""
    make_binary(files)
    separate(files)
    fit_files(qtbot, page, files)
    assert not page.state.is_fitted
    assert [ask for ask in page.sheet.buttons if ask in (Ask.FIRTH, Ask.RIDGE)] == [Ask.FIRTH, Ask.RIDGE]
    page.sheet.focus_first()
    QTest.keyClick(study_window.windowHandle(), Qt.Key.Key_T, Qt.KeyboardModifier.AltModifier)
    qtbot.waitUntil(lambda: isinstance(page.right.currentWidget(), FittingDeed), timeout=10_000)
    deed = page.right.currentWidget()
    assert isinstance(deed, FittingDeed)
    assert deed.penalty.chooser.currentData() == "firth"
    assert deed.penalty.chooser.hasFocus()
    assert page.step is Step.MODEL
    deed.ask()
    assert page.sheet.buttons[Ask.FITTING].hasFocus()
    assert "Firth’s" in page.sheet.words
    page.foot.next.click()
    saving = page.right.currentWidget()
    assert isinstance(saving, SaveDeed)
    saving.ask()
    rest(qtbot, page)
    estimate = tomllib.loads(files.study.read_text(encoding="utf-8"))["estimate"]["all"]
    assert estimate == {"kind": "logistic", "penalty": "firth", "covariance": "model"}
    page.work.fit()
    rest(qtbot, page)
    assert page.state.not_fitted is None, page.sheet.words
    assert page.state.fit is not None
    assert page.state.fit.fitted.figures[0].penalty is not None
    assert re.search(r"Firth’s \(Firth 1993\)", page.sheet.words)


def test_a_cox_fit_is_offered_a_ridge_alone_and_a_form_that_is_left_changes_nothing(
    qtbot: QtBot, page: StudyPage, files: StudyFiles
) -> None:
    separate(files)
    fit_files(qtbot, page, files)
    assert Ask.FIRTH not in page.sheet.buttons
    page.sheet.buttons[Ask.RIDGE].click()
    rest(qtbot, page)
    deed = page.right.currentWidget()
    assert isinstance(deed, FittingDeed)
    assert deed.penalty.chooser.currentData() == "ridge"
    assert deed.strength.isVisible()
    deed.leave()
    assert page.state.draft is not None
    assert page.state.draft.is_saved
    page.sheet.buttons[Ask.LEAVE].click()
    page.show_step(Step.FIT)
    assert Ask.RIDGE in page.sheet.buttons, "it can be thought over"


def test_a_refusal_that_no_penalty_helps_offers_none(qtbot: QtBot, page: StudyPage, files: StudyFiles) -> None:
    files.change_study("horizons = [{years = 1}, {years = 3}]", "horizons = [{years = 30}]")
    fit_files(qtbot, page, files)
    assert page.state.not_fitted is not None
    assert not {Ask.FIRTH, Ask.RIDGE} & set(page.sheet.buttons)


def test_a_bootstrap_is_told_by_samples_and_cancelled_and_the_fit_before_stays(
    qtbot: QtBot, page: StudyPage, files: StudyFiles
) -> None:
    fit_files(qtbot, page, files)
    before = page.state.fit
    files.study.write_text(
        files.study.read_text(encoding="utf-8") + "\n[bootstrap]\nreplicates = 5000\n", encoding="utf-8"
    )
    page.work.read_again()
    rest(qtbot, page)
    told: list[str] = []
    parts: list[int] = []
    page.errands.moved.connect(lambda progress: told.append(progress.words))
    page.errands.moved.connect(lambda progress: parts.append(progress.of))
    page.work.fit()
    qtbot.waitUntil(lambda: 5000 in parts, timeout=60_000)
    qtbot.waitUntil(page.strip.cancel.isVisible, timeout=10_000)
    assert re.search(r"\d+ of 5000", page.strip.words.text())
    page.strip.cancel.click()
    rest(qtbot, page)
    assert page.state.fit is before
    assert "The fit was stopped" in page.strip.words.text()
    page.show_step(Step.FIT)
    assert "not of what is open now" in page.sheet.words


def test_lost_samples_are_told_by_their_reasons() -> None:
    lost = (LostReplicates("separated", 7, ("sex_male",)), LostReplicates("odd_reason", 2, ()))
    some = OptimismFigures(100, 91, 4, (Corrected(Statistic.C, 0.7, 0.02, 0.68),), lost)
    assert drawn_words(some) == (
        "100 bootstrap samples, seed 4; the model could be fitted anew to 91 of them. Lost: separation of sex_male"
        " in 7; odd reason in 2."
    )
    [fact] = optimism_facts(some)
    assert fact.cells == ("C", "0.700", "+0.020", "0.680")


def test_optimism_below_nought_has_a_true_minus_and_nought_no_sign() -> None:
    figures = (
        Corrected(Statistic.BRIER, 0.15651, -0.00554, 0.16205),
        Corrected(Statistic.INTERCEPT, -0.0001, -0.0004, 0.0003),
    )
    brier, intercept = optimism_facts(OptimismFigures(20, 20, 1, figures, ()))
    assert brier.cells == ("Brier score", "0.1565", f"{MINUS}0.0055", "0.1620")
    assert intercept.cells == ("Calibration intercept", "0.000", "0.000", "0.000")


def test_chains_that_did_not_mix_and_people_who_could_not_be_filled_in_are_told() -> None:
    imputed = ImputationFigures(
        sets=20,
        rounds=10,
        seed=1,
        filled={"systolic_bp": 8},
        not_filled={"ethnicity": 3, "": 2},
        terms=(PooledTerm("age", 1234.5, 0.031), PooledTerm("sex", float("inf"), 0.0)),
        mixing=1.412,
        worst="systolic_bp",
        settled=False,
    )
    lines = dict(imputation_lines(imputed))
    assert "1.412 at worst, of systolic_bp" in lines["Mixing"]
    assert "say more rounds" in lines["Mixing"]
    assert lines["Not filled in"] == "people who lack it are left out: ethnicity 3, the outcome 2"
    assert [fact.cells for fact in pooled_facts(imputed)] == [
        ("age", "1,234.5", "3.1\u202f%"),
        ("sex", "very many", "0.0\u202f%"),
    ]


@pytest.mark.parametrize(
    ("penalty", "words"),
    [
        (PenaltyFigures(Penalty.FIRTH, None, False, 3.0, 0.125, 0.12), "Firth’s (Firth 1993)"),
        (PenaltyFigures(Penalty.RIDGE, 4.0, False, 2.71), "ridge, strength 4.000, as the study file says; 2.71"),
        (PenaltyFigures(Penalty.RIDGE, 31.6, True, 1.5), "strength 31.60, chosen by 10-fold cross-validation; 1.50"),
    ],
)
def test_a_penalty_is_said_with_its_strength(
    qtbot: QtBot, page: StudyPage, files: StudyFiles, penalty: PenaltyFigures, words: str
) -> None:
    from dataclasses import replace

    fit_files(qtbot, page, files)
    assert page.state.fit is not None
    figures = replace(page.state.fit.fitted.figures[0], penalty=penalty)
    lines = dict(penalty_lines(figures))
    assert words in lines["Penalty"]
    assert ("Mean of the predictions" in lines) is (penalty.observed is not None)
