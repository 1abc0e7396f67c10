"""Averages over points: the law of total variance with every part worked out apart, and draws row by row."""

from statistics import NormalDist

import numpy as np
import pytest

from clinicalc.prediction.line import Adjustment, Draws, Precision
from clinicalc.prediction.open_band import AveragedPrediction, average_columns, average_prediction
from clinicalc.prediction.predict import predict
from clinicalc.prediction.quadrature import hermite_rule
from tests.prediction.invented import Array, invent_draws, invent_line, invent_precision

Q = NormalDist().inv_cdf(0.975)
ADJUSTMENT = Adjustment(-0.2, 0.9, (0.01, -0.002, 0.004))
Z, W = hermite_rule(32)
ONE = np.zeros(Z.size, dtype=np.intp)
NUMBER = (0.3 + 0.0 * Z, 1.0 + 0.8 * Z, (1.0 + 0.8 * Z) ** 2)
"""Three terms at points of one open number: a known one, the number and its square."""


def averaged(line_band: Precision | Draws | None, design: tuple[Array, ...], **more: Adjustment) -> AveragedPrediction:
    result = average_prediction(invent_line("logit", 3, line_band), design, W, ONE, more.get("adjustment"), 0.95)
    assert result is not None
    return result


def pull_apart(design: tuple[Array, ...], weights: Array) -> tuple[Array, Array]:
    """Mean, shape (3,), and covariance, shape (3, 3), of the design terms among the points."""
    rows = np.stack(design)
    mean = rows @ weights
    away = rows - mean[:, None]
    return mean, (away * weights) @ away.T


def test_variance_is_that_of_coefficients_and_points() -> None:
    """a + (x - c)'V(x - c) at the expected terms, tr(V S), and b'Sb, with S the covariance of the terms."""
    band = invent_precision(3)
    line = invent_line("logit", 3, band)
    result = averaged(band, NUMBER)
    mean, spread = pull_apart(NUMBER, W)
    covariance = band.root @ band.root.T
    away = mean - np.array(band.centre)
    b = np.array(line.coefficients)
    variance = band.variance + away @ covariance @ away + np.trace(covariance @ spread) + b @ spread @ b
    eta = line.lp0 + mean @ b
    assert result.mean == pytest.approx(eta, abs=1e-13)
    assert result.sd == pytest.approx(np.sqrt(b @ spread @ b), rel=1e-12)
    assert result.limits == pytest.approx((eta - Q * np.sqrt(variance), eta + Q * np.sqrt(variance)), rel=1e-12)


def test_a_recalibration_stretches_and_adds_its_own() -> None:
    band = invent_precision(3)
    plain, moved = averaged(band, NUMBER), averaged(band, NUMBER, adjustment=ADJUSTMENT)
    assert plain.limits is not None
    half = (plain.limits[1] - plain.limits[0]) / 2 / Q
    v00, v01, v11 = 0.01, -0.002, 0.004
    # E[1, eta]C[1, eta]' = v00 + 2 v01 E eta + v11 E eta^2
    own = v00 + 2 * v01 * plain.mean + v11 * (plain.mean**2 + plain.sd**2)
    middle, wide = -0.2 + 0.9 * plain.mean, Q * np.sqrt(0.81 * half**2 + own)
    assert moved.mean == pytest.approx(middle, abs=1e-13)
    assert moved.limits == pytest.approx((middle - wide, middle + wide), rel=1e-12)


@pytest.mark.parametrize("adjustment", [None, ADJUSTMENT])
@pytest.mark.parametrize("kind", ["precision", "draws"])
def test_a_point_alone_is_a_measured_patient(kind: str, adjustment: Adjustment | None) -> None:
    band = invent_precision(3) if kind == "precision" else invent_draws(500, 3)
    line = invent_line("cloglog", 3, band)
    design = tuple(np.array([value]) for value in (0.3, 1.0, -2.0))
    result = average_prediction(line, design, np.ones(1), ONE[:1], adjustment, 0.95)
    known = predict(line, design, adjustment=adjustment)
    assert result is not None
    assert result.limits is not None
    assert known.eta_lower is not None
    assert known.eta_upper is not None
    assert result.share == known.probability[0]
    assert result.rest == known.complement[0]
    assert result.limits == pytest.approx((known.eta_lower[0], known.eta_upper[0]), abs=1e-12)


def test_draws_are_joined_to_the_spread_of_a_number() -> None:
    """Percentiles over draws of the expected predictor, and the mean over draws of its variance among the points."""
    band = invent_draws(400, 3, estimated=(0, 2))
    line = invent_line("logit", 3, band)
    result = averaged(band, NUMBER)
    mean, spread = pull_apart(NUMBER, W)
    rows = np.tile(np.array(line.coefficients), (400, 1))
    rows[:, [0, 2]] = band.coefficients.T
    low, middle, high = np.quantile(band.baselines + rows @ mean, (0.025, 0.5, 0.975))
    extra = Q * Q * np.mean([b @ spread @ b for b in rows])
    wanted = middle - np.sqrt((middle - low) ** 2 + extra), middle + np.sqrt((high - middle) ** 2 + extra)
    assert result.limits == pytest.approx(wanted, rel=1e-11)


def test_draws_over_open_answers_are_one_heap() -> None:
    """Two answers without a spread of their own: the draws of both, weighed."""
    band = invent_draws(400, 3)
    line = invent_line("logit", 3, band)
    design = (np.array([0.3, 0.3]), np.array([0.0, 1.0]), np.array([0.0, 4.0]))
    result = average_prediction(line, design, np.array([0.75, 0.25]), np.array([0, 1]), None, 0.95)
    assert result is not None
    drawn = [band.baselines + np.array([column[k] for column in design]) @ band.coefficients for k in (0, 1)]
    heap = np.concatenate([np.tile(drawn[0], 3), drawn[1]])
    assert result.limits == pytest.approx(np.quantile(heap, (0.025, 0.975)), abs=0.01)


def test_without_a_band_there_are_no_limits() -> None:
    assert averaged(None, NUMBER).limits is None
    assert averaged(invent_draws(50, 3), NUMBER).limits is None


def test_a_point_without_a_finite_result_leaves_nothing() -> None:
    design = (NUMBER[0], NUMBER[1], np.where(Z > 2, np.nan, 1.0))
    assert average_prediction(invent_line("logit", 3), design, W, ONE, None, 0.95) is None


def test_expected_columns() -> None:
    assert [float(c[0]) for c in average_columns(NUMBER, W)] == pytest.approx([0.3, 1.0, 1.64], abs=1e-13)
