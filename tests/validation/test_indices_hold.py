"""The limits of the calibration indices as measures: their names, what they say of chance, how often they hold."""

from collections.abc import Callable

import numpy as np
import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.validation.indexing import measure_indices
from clinicalc.validation.measuring import calibrate, measure_horizon
from clinicalc.validation.observing import Seen
from clinicalc.validation.predicted import Outcome, PredictedPeople, YesNo
from clinicalc.validation.validated import Interval, Method
from tests.estimation.validated import pima
from tests.validation.people import YEAR, answered, competed, watched

Made = Callable[[int, int], tuple[PredictedPeople, Outcome]]
KINDS: dict[str, tuple[Made, Span | None]] = {
    "answered": (answered, None),
    "watched": (watched, YEAR),
    "competed": (competed, YEAR),
}


def _truth(kind: str) -> float:
    """The ICI of the people of `people.py` without a sample: |risk - prediction| over their lines."""
    true = np.random.default_rng(11).normal(-0.6, 0.8, 400_000)
    predicted = true * 1.25 - 0.2
    if kind == "answered":
        return float(np.abs(1 / (1 + np.exp(-true)) - 1 / (1 + np.exp(-predicted))).mean())
    base = 1.0 if kind == "watched" else -np.log(1 - 0.7 * (1 - np.exp(-1.0)))
    return float(np.abs(np.exp(-base * np.exp(true)) - np.exp(-base * np.exp(predicted))).mean())


@pytest.mark.parametrize("kind", KINDS)
def test_limits_hold_the_true_distance_of_wrong_predictions(kind: str) -> None:
    # 95 to 98 of 100 in 200 samples of 400 and of 2,000 people of each kind
    make, span = KINDS[kind]
    truth, samples, held = _truth(kind), 150, 0
    for sample in range(samples):
        ici = measure_indices(calibrate(Seen(*make(400, sample), span))).ici
        assert ici.lower is not None
        assert ici.upper is not None
        held += ici.lower <= truth <= ici.upper
    assert 0.92 <= held / samples <= 0.995, held / samples


@pytest.mark.parametrize("kind", KINDS)
def test_how_limits_were_made_is_named(kind: str) -> None:
    make, span = KINDS[kind]
    predicted, outcome = make(500, 1)
    found = measure_horizon(predicted, outcome, span)
    wanted = Interval.GROUPED_BOOTSTRAP if span is None else Interval.DRAWN_COEFFICIENTS
    for measure in (found.ici, found.e50, found.e90, found.emax):
        assert (measure.method, measure.interval, measure.why) == (Method.SMOOTH_CURVE, wanted, "")
    assert "above 0 by chance alone, and its limits never reach 0" in found.ici.remark
    limits = found.calibration.limits
    assert limits is not None
    assert f"about {100 * limits.chance:.1f} points in as many people" in found.ici.remark
    assert found.calibration.curve is not None
    assert found.calibration.curve.lower is not None


def test_resamples_are_used_where_they_are_asked_for() -> None:
    p, y = pima()
    found = measure_horizon(PredictedPeople(p), YesNo(y), None, resamples=40)
    assert found.ici.interval is Interval.BOOTSTRAP
    assert found.calibration.limits is not None
    assert found.calibration.limits.draws == 40
    assert found.calibration.curve is not None
    assert found.calibration.curve.resamples == 40
