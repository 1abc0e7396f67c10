"""How surely the number lies above a threshold."""

from statistics import NormalDist

import numpy as np
import pytest

from clinicalc.prediction.exceedance import confidences_above, place_on_link
from clinicalc.prediction.line import Adjustment, Draws, Line, Precision
from clinicalc.prediction.links import Link
from clinicalc.prediction.predict import predict
from tests.prediction.invented import TEN_YEARS, invent_columns, invent_draws, invent_line, invent_precision

ONE = (np.zeros(1),)


def line_with(link: Link, eta: float, sd: float) -> Line:
    """A line whose linear predictor at nought is eta, known with this standard deviation."""
    band = Precision((0,), np.array([[0.1]]), sd * sd, (0.0,))
    return Line(TEN_YEARS, link, eta, (0.3,), band, "covariance")


# Python 3.11, scipy 1.17.1: 1 - norm.cdf((g^-1(threshold) - lp) / se)
@pytest.mark.parametrize(
    ("link", "eta", "sd", "threshold", "expected"),
    [
        ("logit", -2.5, 0.12, 0.1, 0.005815794063216179),
        ("logit", -6.0, 0.5, 0.01, 0.0024789204753037485),
        ("logit", 0.4, 0.2, 0.5, 0.9772498680518208),
        ("logit", -2.2, 0.05, 0.1, 0.47786669779749513),
        ("logit", 3.5, 0.4, 0.9, 0.9994368959588334),
        ("cloglog", -2.3, 0.08, 0.1, 0.26749446893375295),
        ("cloglog", -7.0, 0.6, 0.001, 0.43857823642874033),
        ("cloglog", 0.9, 0.15, 0.9, 0.6699531122387521),
        ("cloglog", -1.2, 0.3, 0.3, 0.2865250301821677),
    ],
)
def test_against_scipy(link: Link, eta: float, sd: float, threshold: float, expected: float) -> None:
    found = confidences_above(line_with(link, eta, sd), ONE, [place_on_link(link, threshold)])
    assert found == pytest.approx((expected,), abs=1e-13)


def test_a_recalibration_moves_the_number_and_widens_what_is_unknown() -> None:
    line, columns = invent_line("logit", 3, invent_precision(3)), invent_columns(1, 3)
    adjustment = Adjustment(0.2, 0.8, (0.02, 0.004, 0.01))
    ends = predict(line, columns, adjustment=adjustment)
    assert ends.eta_upper is not None
    z = NormalDist().inv_cdf(0.975)
    found = confidences_above(line, columns, [float(ends.eta[0]), float(ends.eta_upper[0])], adjustment=adjustment)
    assert found == pytest.approx((0.5, NormalDist().cdf(-z)), abs=1e-12)


def test_draws_are_counted() -> None:
    draws = Draws((0,), np.zeros((1, 8)), np.array([-3.0, -2.5, -2.0, -2.0, -1.5, -1.0, -0.5, 0.0]))
    line = Line(TEN_YEARS, "logit", -2.0, (0.3,), draws, "draws")
    assert confidences_above(line, ONE, [-2.0, -1.9, 1.0, -9.0]) == (0.75, 0.5, 0.0, 1.0)
    # slope 2, intercept 1: the draws lie at -5, -4, -3, -3, -2, -1, 0, 1
    assert confidences_above(line, ONE, [-2.0], adjustment=Adjustment(1.0, 2.0, None)) == (0.5,)


def test_a_recalibrations_imprecision_lies_round_every_draw() -> None:
    line, columns = invent_line("cloglog", 3, invent_draws(300, 3)), invent_columns(1, 3)
    adjustment = Adjustment(0.1, 0.9, (0.09, 0.0, 0.0))
    assert isinstance(line.band, Draws)
    drawn = line.band.baselines + sum(line.band.coefficients[j] * columns[j][0] for j in range(3))
    rng = np.random.default_rng(7)
    sampled = 0.1 + 0.9 * rng.choice(drawn, 2_000_000) + rng.normal(size=2_000_000) * 0.3
    found = confidences_above(line, columns, [-1.5], adjustment=adjustment)
    assert found == pytest.approx((float(np.mean(sampled >= -1.5)),), abs=0.0015)


def test_without_a_band_there_is_no_confidence() -> None:
    assert confidences_above(invent_line("logit", 3), invent_columns(1, 3), [-2.0]) is None


def test_what_is_known_exactly_is_above_or_not() -> None:
    line = line_with("logit", -2.0, 0.0)
    assert confidences_above(line, ONE, [-2.0, -1.9999]) == (1.0, 0.0)
