"""Quantiles of Student's t beside those of scipy, and of tables."""

import pytest
from scipy import stats

from clinicalc.estimation.student import student_quantile


@pytest.mark.parametrize("degrees", [0.5, 1.0, 2.0, 3.7, 9.99, 57.3, 999.0, 9_999.9, 10_000.0, 12_345.6, 1e7, 1e300])
@pytest.mark.parametrize("probability", [0.501, 0.6, 0.95, 0.975, 0.995, 0.9999])
def test_quantiles_are_those_of_scipy(degrees: float, probability: float) -> None:
    """scipy.stats.t.ppf, an independent implementation (Boost)."""
    assert student_quantile(probability, degrees) == pytest.approx(stats.t.ppf(probability, degrees), rel=1e-11)


@pytest.mark.parametrize(
    ("degrees", "expected"), [(1.0, 12.706), (2.0, 4.303), (10.0, 2.228), (30.0, 2.042), (120.0, 1.980)]
)
def test_quantiles_are_those_of_the_table(degrees: float, expected: float) -> None:
    """Abramowitz & Stegun 1964, table 26.10, A = 0.95; from memory."""
    assert round(student_quantile(0.975, degrees), 3) == expected


def test_without_limit_it_is_the_normal_distribution() -> None:
    assert student_quantile(0.975, float("inf")) == pytest.approx(1.959963984540054, rel=1e-15)


@pytest.mark.parametrize(("probability", "degrees"), [(0.5, 3.0), (1.0, 3.0), (0.2, 3.0), (0.975, 0.0), (0.975, -1.0)])
def test_other_questions_are_refused(probability: float, degrees: float) -> None:
    with pytest.raises(ValueError, match="no quantile"):
        student_quantile(probability, degrees)
