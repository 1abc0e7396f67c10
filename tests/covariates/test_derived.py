"""Derived values by their published equations."""

import numpy as np
import pytest

from clinicalc.coefficients.roles import ROLES
from clinicalc.coefficients.schema import DerivedEquation
from clinicalc.covariates.derived import derive

# CKD-EPI 2021 creatinine (Inker, N Engl J Med 2021;385:1737): computed from the equation, no authoritative printed
# check values were found. female, age, mg/dL, mL/min/1.73 m2
CKD_EPI = [
    (1, 30, 0.6, 123.8),
    (1, 50, 1.0, 68.6),
    (1, 55, 0.7, 102.1),
    (0, 50, 1.0, 91.7),
    (0, 40, 0.8, 114.7),
    (0, 60, 2.0, 37.5),
]


def one(equation: DerivedEquation, **inputs: float) -> float:
    assert {role.name for role in ROLES[equation]} == set(inputs)
    result = derive(equation, {name: np.array([value]) for name, value in inputs.items()})
    assert result.shape == (1,)
    return float(result[0])


@pytest.mark.parametrize(("female", "age", "creatinine", "egfr"), CKD_EPI)
def test_ckd_epi_2021(female: int, age: float, creatinine: float, egfr: float) -> None:
    assert round(one("ckd_epi_2021", creatinine=creatinine, age=age, sex=female), 1) == egfr


def test_ckd_epi_meets_itself_at_kappa() -> None:
    """Both branches give 142 x 0.9938^age there, and x 1.012 for women."""
    assert one("ckd_epi_2021", creatinine=0.9, age=50, sex=0) == pytest.approx(142 * 0.9938**50, rel=1e-14)
    assert one("ckd_epi_2021", creatinine=0.7, age=50, sex=1) == pytest.approx(142 * 0.9938**50 * 1.012, rel=1e-14)


def test_friedewald() -> None:
    """LDL = TC - HDL - TG/5 in mg/dL (Friedewald, Clin Chem 1972;18:499, from memory), not above TG 400."""
    ldl = {"total_cholesterol": 200.0, "hdl_cholesterol": 50.0}
    assert one("friedewald_ldl", triglycerides=150.0, **ldl) == 120.0
    assert one("friedewald_ldl", triglycerides=400.0, **ldl) == 70.0
    assert np.isnan(one("friedewald_ldl", triglycerides=400.1, **ldl))


def test_body_mass_index() -> None:
    """By its definition, kg/m2."""
    assert one("body_mass_index", weight=70.0, height=1.75) == pytest.approx(70 / 3.0625, rel=1e-15)


def test_plain_arithmetic() -> None:
    assert one("non_hdl_cholesterol", total_cholesterol=5.25, hdl_cholesterol=1.25) == 4.0
    assert one("difference", minuend=140.0, subtrahend=90.0) == 50.0
    assert one("ratio", numerator=6.0, denominator=1.5) == 4.0
    assert not np.isfinite(one("ratio", numerator=6.0, denominator=0.0))
