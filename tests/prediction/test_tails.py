"""Both links far out: probability and complement against decimal arithmetic, and never a rounded-away 0."""

from decimal import Decimal, localcontext

import numpy as np
import pytest

from clinicalc.prediction.links import Link, complement, probability

EPS = float(np.finfo(np.float64).eps)
LINKS: tuple[Link, ...] = ("logit", "cloglog")
ETAS = (
    -700.0,
    -400.5,
    -100.0,
    -37.5,
    -20.25,
    -8.0,
    -1.5,
    -0.125,
    0.0,
    0.3,
    1.0,
    2.75,
    5.0,
    6.5,
    20.0,
    37.5,
    300.0,
    700.0,
)


def exactly(link: Link, eta: float) -> tuple[float, float]:
    """Probability and complement to the nearest double, worked in 700 decimal digits."""
    with localcontext() as context:
        context.prec = 700
        odds = Decimal(eta).exp()
        if link == "logit":
            return float(odds / (1 + odds)), float(1 / (1 + odds))
        if odds > 800:
            return 1.0, 0.0
        rest = (-odds).exp()
        return float(1 - rest), float(rest)


@pytest.mark.parametrize("link", LINKS)
@pytest.mark.parametrize("eta", ETAS)
def test_relative_accuracy(link: Link, eta: float) -> None:
    p, rest = exactly(link, eta)
    column = np.array([eta])
    assert probability(link, column)[0] == pytest.approx(p, rel=4 * EPS, abs=0)
    # exp(-H) multiplies a rounding of H by H itself
    steep = 1 + (np.exp(min(eta, 6.6)) if link == "cloglog" else 0)
    assert complement(link, column)[0] == pytest.approx(rest, rel=4 * EPS * steep, abs=0)


@pytest.mark.parametrize("link", LINKS)
def test_monotone_and_adding_up_to_one(link: Link) -> None:
    eta = np.linspace(-800, 800, 160_001)
    p, rest = probability(link, eta), complement(link, eta)
    assert np.isfinite(p).all()
    assert np.isfinite(rest).all()
    assert (np.diff(p) >= 0).all()
    assert (np.diff(rest) <= 0).all()
    assert np.abs(p + rest - 1).max() <= 2 * EPS
    near = np.abs(eta) < 30 if link == "logit" else (eta > -30) & (eta < 3)
    assert (np.diff(p[near]) > 0).all()
    # strictly so in the lower tail, where the probability itself is small
    low = (eta > -700) & (eta < -30)
    assert (np.diff(p[low]) > 0).all()


def test_cloglog_is_not_nought_where_one_minus_survival_is() -> None:
    eta = np.array([-38.0, -50.0, -200.0, -700.0])
    assert (1 - np.exp(-np.exp(eta)) == 0).all()  # what the plain formula gives
    assert probability("cloglog", eta) == pytest.approx(np.exp(eta), rel=4 * EPS, abs=0)
    assert (probability("cloglog", eta) > 0).all()


def test_beyond_the_range_of_a_double() -> None:
    """Past 700 the logit is held there: no digit that is shown differs there."""
    far = np.array([-800.0, 800.0])
    p, rest = probability("logit", far), complement("logit", far)
    assert 0 < p[0] < 1e-304
    assert p[1] == 1
    assert 0 < rest[1] < 1e-304
    assert rest[0] == 1
    assert list(probability("cloglog", far)) == [0, 1]
    assert list(complement("cloglog", far)) == [1, 0]
