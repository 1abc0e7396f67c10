"""Penalised studies from the file of people to the bedside: refused with an offer, written, fitted, and what is said.

R's figures: tests/estimation/r_penalised.py, with their calls.
"""

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from scipy.special import expit
from scipy.stats import norm

from clinicalc.assessment.findings import Grade
from clinicalc.development.estimated_penalised import remark_penalty
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_method_figures import Penalty, PenaltyFigures
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.estimation.screened import Screen
from clinicalc.estimation.screening_words import word_screened
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study
from tests.development.describing import Tree
from tests.development.studying import BINARY, plain_study, run_study, timed, write_people, write_study
from tests.development.test_study_against_r import estimate_at
from tests.estimation import cohorts
from tests.estimation.r_penalised import BIRTHWT, ENDOMETRIAL, LUNG_RIDGE, Firth
from tests.estimation.test_firth import endometrial

SEPARATED = ("nv", "pi", "eh")
WEIGHT = ("age", "lwt", "race_black", "race_other", "smoke", "ht", "ui")
LUNG = ("age", "female", "ecog", "loss")


def write_answers(folder: Path, people: cohorts.Answers, names: tuple[str, ...]) -> None:
    columns: dict[str, Any] = dict(zip(names, people.x.T, strict=True))
    write_people(folder / "people.csv", columns | {"y": people.y.astype(int)})


def write_lung(folder: Path) -> None:
    people = cohorts.lung().cohort
    columns: dict[str, Any] = dict(zip(LUNG, people.x.T, strict=True))
    write_people(folder / "people.csv", columns | {"time": people.times, "status": people.events.astype(int)})


def logistic(names: tuple[str, ...], **more: Any) -> Tree:
    return plain_study(names, BINARY, {"kind": "logistic"} | more)


def cox(**more: Any) -> Tree:
    return plain_study(LUNG, timed(), {"kind": "cox"} | more, horizons=[{"time": 365, "unit": "d"}])


def fit(folder: Path, tree: Tree) -> FittedStudy:
    read, course = open_study(write_study(folder, tree)), Course()
    return fit_study(read, check_data(read, course), course)


def refuse(folder: Path, tree: Tree) -> dict[str, Problem]:
    with pytest.raises(DescriptionRefused) as refused:
        fit(folder, tree)
    return {problem.path: problem for problem in refused.value.problems}


@pytest.mark.parametrize(
    ("people", "names", "expected"),
    [(endometrial(), SEPARATED, ENDOMETRIAL), (cohorts.birthwt(), WEIGHT, BIRTHWT)],
    ids=["endometrial", "birthwt"],
)
def test_firth_at_the_bedside(people: cohorts.Answers, names: tuple[str, ...], expected: Firth, tmp_path: Path) -> None:
    """The limits are plogis(lp +- z se) with R's covariance."""
    write_answers(tmp_path, people, names)
    model = run_study(write_study(tmp_path, logistic(names, penalty="firth"))).model
    for row in people.x[::7]:
        found = estimate_at(model, dict(zip(names, map(repr, row.tolist()), strict=True)))
        whole = np.append(1.0, row)
        lp = float(whole @ np.array(expected.coefficients))
        half = norm.isf(0.025) * np.sqrt(whole @ np.array(expected.covariance) @ whole)
        assert found.band is not None
        assert found.probability == pytest.approx(expit(lp), rel=1e-9)
        assert (found.band.lower, found.band.upper) == pytest.approx((expit(lp - half), expit(lp + half)), rel=1e-8)


def test_separation_is_refused_with_the_line_to_write_and_fitted_with_it(tmp_path: Path) -> None:
    write_answers(tmp_path, endometrial(), SEPARATED)
    said = refuse(tmp_path, logistic(SEPARATED))["estimate.all"]
    assert said.offers == ("firth", "ridge")
    assert 'Or say penalty = "firth" or penalty = "ridge" in [estimate.all]' in said.message
    for penalty in said.offers:
        (figures,) = fit(tmp_path, logistic(SEPARATED, penalty=penalty)).figures
        (told,) = [one for one in figures.screened if one.code is Screen.HELD_BY_PENALTY]
        assert (told.gravity, told.columns) == (Grade.CAUTION, ("nv",))
        assert word_screened(told).startswith('"nv", people with the value 1: without the penalty')
        assert figures.penalty is not None
        assert figures.penalty.kind == penalty


def test_a_cox_fit_is_offered_a_ridge(tmp_path: Path) -> None:
    people = cohorts.lung().cohort
    columns: dict[str, Any] = dict(zip(LUNG, people.x.T, strict=True))
    columns["female"] = ((people.events == 0) & (np.arange(len(people.times)) % 2 == 0)).astype(int)
    write_people(tmp_path / "people.csv", columns | {"time": people.times, "status": people.events.astype(int)})
    said = refuse(tmp_path, cox())["estimate.all"]
    assert said.offers == ("ridge",)
    assert 'Or say penalty = "ridge" in [estimate.all]' in said.message
    (found,) = fit(tmp_path, cox(penalty="ridge")).figures
    assert found.penalty is not None
    assert found.penalty.chosen


def test_ridge_of_coxph(tmp_path: Path) -> None:
    write_lung(tmp_path)
    fitted = fit(tmp_path, cox(penalty="ridge", ridge_strength=LUNG_RIDGE.strength))
    (found,) = fitted.fits.values()
    assert found.coefficients == pytest.approx(LUNG_RIDGE.coefficients, rel=1e-9)
    assert np.array(found.covariance).ravel() == pytest.approx(np.array(LUNG_RIDGE.covariance), rel=1e-9)
    penalty = fitted.figures[0].penalty
    assert penalty is not None
    assert (penalty.kind, penalty.strength, penalty.chosen) == (Penalty.RIDGE, 20.0, False)
    assert penalty.degrees == pytest.approx(LUNG_RIDGE.degrees, rel=1e-9)
    assert "ridge of strength 20 (as stated)" in found.remarks[0]
    run_study(tmp_path / "study.toml")


def test_a_robust_ridge_is_near_that_of_the_model_and_not_it(tmp_path: Path) -> None:
    write_lung(tmp_path)
    (model,) = fit(tmp_path, cox(penalty="ridge", ridge_strength=20.0)).fits.values()
    (robust,) = fit(tmp_path, cox(penalty="ridge", ridge_strength=20.0, covariance="robust")).fits.values()
    ratio = np.diag(np.array(robust.covariance)) / np.diag(np.array(model.covariance))
    assert (np.abs(ratio - 1) < 0.5).all()
    assert robust.robust
    assert (ratio != 1).all()


@pytest.mark.parametrize(
    ("estimate", "place", "words"),
    [
        ({"kind": "logistic", "ridge_strength": 2.0}, "ridge_strength", 'penalty = "ridge" only'),
        ({"kind": "logistic", "penalty": "firth", "ridge_strength": 2.0}, "ridge_strength", 'penalty = "ridge" only'),
        ({"kind": "cloglog", "penalty": "firth"}, "penalty", "here stands cloglog"),
        ({"kind": "cloglog", "penalty": "ridge"}, "penalty", "here stands cloglog"),
        ({"kind": "logistic", "penalty": "firth", "covariance": "robust"}, "covariance", 'Say "model"'),
    ],
)
def test_what_stands_beside_a_penalty(estimate: Tree, place: str, words: str, tmp_path: Path) -> None:
    write_answers(tmp_path, endometrial(), SEPARATED)
    assert words in refuse(tmp_path, plain_study(SEPARATED, BINARY, estimate))[f"estimate.all.{place}"].message


def test_firth_is_not_for_times(tmp_path: Path) -> None:
    write_lung(tmp_path)
    assert (
        'A Cox fit can have penalty = "ridge".'
        in refuse(tmp_path, cox(penalty="firth"))["estimate.all.penalty"].message
    )


def test_means_that_differ_are_told(tmp_path: Path) -> None:
    """Seven events in 300: Firth's mean prediction lies above them (Puhr et al. 2017)."""
    x = np.random.default_rng(5).normal(50, 10, 300).round(1)
    y = (np.arange(300) % 43 == 0).astype(int)
    write_people(tmp_path / "people.csv", {"x": x, "y": y})
    fitted = fit(tmp_path, plain_study(["x"], BINARY, {"kind": "logistic", "penalty": "firth"}))
    penalty = fitted.figures[0].penalty
    assert penalty is not None
    assert penalty.mean_predicted is not None
    assert penalty.observed == pytest.approx(7 / 300)
    assert penalty.mean_predicted > 1.05 * 7 / 300
    assert any("Puhr et al." in remark for remark in fitted.remarks)
    assert not tuple(remark_penalty("all", PenaltyFigures(Penalty.FIRTH, None, False, 1.0, 0.301, 0.3)))
    (told,) = remark_penalty("all", PenaltyFigures(Penalty.RIDGE, 1e4, True, 0.1, 0.3, 0.3))
    assert "strongest ridge" in told


def test_a_penalised_fit_is_repeated_by_the_bootstrap(tmp_path: Path) -> None:
    write_answers(tmp_path, endometrial(), SEPARATED)
    for penalty in ("firth", "ridge"):
        tree = logistic(SEPARATED, penalty=penalty) | {"bootstrap": {"replicates": 20}}
        optimism = fit(tmp_path, tree).figures[0].optimism
        assert optimism is not None
        assert optimism.used > 15
