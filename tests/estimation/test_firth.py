"""Firth's penalised fit against R's brglm2, and what must hold of it whatever the people."""

import csv
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.optimize import minimize

from clinicalc.errors import FitRefused
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.firth import fit_firth
from clinicalc.estimation.logistic import fit_logistic
from tests.estimation import cohorts
from tests.estimation.r_penalised import BIRTHWT, ENDOMETRIAL, Firth

Array = NDArray[np.float64]
LIMIT = 1e-10  # relative


def endometrial() -> cohorts.Answers:
    """Heinze & Schemper 2002: all 13 people with nv = 1 had the event. Origin in data/README.md."""
    with (Path(__file__).parent / "data" / "endometrial.csv").open(encoding="utf-8") as file:
        rows = [[float(row[name]) for name in ("nv", "pi", "eh", "hg")] for row in csv.DictReader(file)]
    values = np.array(rows)
    return cohorts.Answers(values[:, 3], values[:, :3])


@pytest.mark.parametrize(("people", "expected"), [(endometrial(), ENDOMETRIAL), (cohorts.birthwt(), BIRTHWT)])
def test_brglm2(people: cohorts.Answers, expected: Firth) -> None:
    found = fit_firth(people.y, people.x)
    assert found.fit.coefficients == pytest.approx(np.array(expected.coefficients), rel=LIMIT)
    assert found.fit.covariance == pytest.approx(np.array(expected.covariance), rel=LIMIT)
    assert found.penalised == pytest.approx(expected.penalised, rel=1e-12)
    assert found.fit.score_max < 1e-14


def test_without_the_penalty_there_is_no_fit() -> None:
    people = endometrial()
    with pytest.raises(FitRefused) as refused:
        fit_logistic(people.y, people.x)
    assert (refused.value.code, refused.value.columns) == (FitFault.SEPARATED, (0,))


def test_one_yes_or_no_is_half_a_person_more_in_each_cell() -> None:
    """In a saturated two-by-two table Firth's fit adds 1/2 to each count (Firth 1993, section 3)."""
    y = np.repeat([1.0, 0.0, 1.0, 0.0], [0 + 7, 0, 12, 30])
    x = np.repeat([1.0, 1.0, 0.0, 0.0], [7, 0, 12, 30])[:, None]
    b = fit_firth(np.append(y, 0.0), np.vstack([x, [[0.0]]])).fit.coefficients
    assert b[0] == pytest.approx(np.log(12.5 / 31.5), rel=1e-12)
    assert b.sum() == pytest.approx(np.log(7.5 / 0.5), rel=1e-12)


def test_counts_are_that_many_people_and_a_start_changes_nothing() -> None:
    people = cohorts.birthwt()
    counts = np.random.default_rng(3).integers(1, 4, len(people.y)).astype(np.float64)
    rows = np.repeat(np.arange(len(counts)), counts.astype(int))
    whole = fit_firth(people.y[rows], people.x[rows])
    counted = fit_firth(people.y, people.x, weights=counts, start=np.array(BIRTHWT.coefficients))
    assert counted.fit.coefficients == pytest.approx(whole.fit.coefficients, rel=1e-9)
    assert counted.fit.covariance == pytest.approx(whole.fit.covariance, rel=1e-9)
    assert counted.penalised == pytest.approx(whole.penalised, rel=1e-12)


def test_an_offset_by_general_maximisation() -> None:
    people = endometrial()
    offset, x = 0.4 * people.x[:, 1] / 10, people.x[:, [0, 2]]
    design = np.column_stack([np.ones(len(x)), x])

    def lack(b: Array) -> float:
        eta = design @ b + offset
        p = 1 / (1 + np.exp(-eta))
        information = design.T @ (design * (p * (1 - p))[:, None])
        return float(-(people.y * eta - np.logaddexp(0, eta)).sum() - np.linalg.slogdet(information)[1] / 2)

    best = minimize(lack, np.zeros(3), method="Nelder-Mead", options={"xatol": 1e-10, "fatol": 1e-13, "maxiter": 5000})
    found = fit_firth(people.y, x, offset=offset)
    assert found.fit.coefficients == pytest.approx(best.x, rel=1e-5)
    assert found.penalised == pytest.approx(-best.fun, rel=1e-12)


@pytest.mark.parametrize(
    ("x", "fault"),
    [
        (np.ones((20, 1)), FitFault.CONSTANT),
        (np.outer(np.arange(20.0), [1.0, 2.0]), FitFault.COLLINEAR),
        (np.random.default_rng(1).normal(size=(20, 11)), FitFault.MORE_COLUMNS_THAN_EVENTS),
    ],
)
def test_what_a_penalty_does_not_mend(x: Array, fault: FitFault) -> None:
    with pytest.raises(FitRefused) as refused:
        fit_firth(np.repeat([1.0, 0.0], 10), x)
    assert refused.value.code == fault
