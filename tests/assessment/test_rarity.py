"""Rare combinations of numbers that are each within range."""

import numpy as np
import pytest
from scipy.stats import chi2

from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.rarity import chi_square_beyond
from tests.assessment.cases import DEMO, about, run, shipped

TARNWICK = "tarnwick-cvd-10y"


@pytest.mark.parametrize("degrees", [1, 2, 3, 4, 5, 7, 12, 31, 200])
@pytest.mark.parametrize("share", [0.5, 0.95, 0.99, 0.999])
def test_tail_of_chi_square(degrees: int, share: float) -> None:
    x = float(chi2.ppf(share, degrees))
    assert chi_square_beyond(x, degrees) == pytest.approx(float(chi2.sf(x, degrees)), rel=1e-11)
    assert chi_square_beyond(0.0, degrees) == 1.0
    assert chi_square_beyond(1e9, degrees) == 0.0


def distance(values: list[float]) -> float:
    """The squared distance by numpy: age, systolic pressure (log), total and HDL cholesterol (log)."""
    population = shipped(TARNWICK).content.population
    assert population is not None
    z = [(v - number.mean) / number.sd for v, number in zip(values, population.numbers, strict=True)]
    return float(np.array(z) @ np.linalg.solve(np.array(population.correlations), np.array(z)))


def test_a_rare_combination_is_pointed_out() -> None:
    """Old, with a low pressure: at 79 with 98 mmHg, neither outside its range."""
    squared = distance([79, np.log(98), 5.2, np.log(1.3)])
    assert squared > chi2.ppf(0.99, 4)
    assessment = run(TARNWICK, DEMO, age="79", systolic_bp="98")
    (rare,) = about(assessment, FindingCode.RARE_COMBINATION)
    assert rare.grade is Grade.NOTE
    assert rare.field == "age"
    assert "Most of the distance comes from Age 79 years and Systolic blood pressure 98 mmHg." in rare.message
    assert assessment.estimate is not None


def test_a_value_that_carries_next_to_nothing_is_not_named() -> None:
    """z'R^-1 z by values, with numpy from the file's population: pressure 13.1 of 13.7, age 0.8."""
    values = {"age": "51", "systolic_bp": "190", "total_cholesterol": "5.5 mmol/L", "hdl_cholesterol": "1.28 mmol/L"}
    assert distance([51, np.log(190), 5.5, np.log(1.28)]) > chi2.ppf(0.99, 4)
    (rare,) = about(run(TARNWICK, DEMO | values), FindingCode.RARE_COMBINATION)
    assert rare.field == "systolic_bp"
    assert "Most of the distance comes from Systolic blood pressure 190 mmHg. Check" in rare.message


def test_the_edge_is_the_ninety_ninth_centile() -> None:
    """One more mmHg lies on this side or on that, as the distance says."""
    edge = float(chi2.ppf(0.99, 4))
    said = {}
    for systolic in range(90, 130):
        assessment = run(TARNWICK, DEMO, age="79", systolic_bp=str(systolic))
        ranged = {f.code for f in assessment.findings if f.field in ("age", "systolic_bp")}
        if ranged & {FindingCode.UNUSUAL, FindingCode.OUTSIDE_DERIVATION} or assessment.estimate is None:
            continue
        said[systolic] = bool(about(assessment, FindingCode.RARE_COMBINATION))
        assert said[systolic] == (distance([79, np.log(systolic), 5.2, np.log(1.3)]) > edge)
    assert set(said.values()) == {True, False}


def test_usual_people_are_not_remarked_on() -> None:
    assert about(run(TARNWICK, DEMO), FindingCode.RARE_COMBINATION) == []


def test_a_value_out_of_its_range_says_enough() -> None:
    assessment = run(TARNWICK, DEMO, age="79", systolic_bp="98", total_cholesterol="15")
    assert about(assessment, FindingCode.UNUSUAL)
    assert about(assessment, FindingCode.RARE_COMBINATION) == []
