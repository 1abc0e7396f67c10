"""Limits against samples drawn anew: against a bootstrap, coverage of the truth, loss from sight undone."""

from collections.abc import Callable, Iterator
from functools import partial

import numpy as np
import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.estimation.drawing import draw_counts, repeat_rows
from clinicalc.validation.calibrating import measure_intercept, measure_slope
from clinicalc.validation.deciding import decide
from clinicalc.validation.discriminating import measure_auc, measure_c, measure_uno
from clinicalc.validation.erring import measure_errors
from clinicalc.validation.observing import Seen, compare_with_expected, observe
from clinicalc.validation.predicted import FlagPoint, Outcome, PredictedPeople
from clinicalc.validation.validated import Interval, Measure
from tests.validation.people import YEAR, answered, competed, watched

Z = 1.959963984540054
POINT = FlagPoint(0.4)
Made = Callable[[int, int], tuple[PredictedPeople, Outcome]]
WHOLE: dict[str, Made] = {
    "answered": answered,
    "watched": partial(watched, lost=0.0),
    "competed": partial(competed, lost=0.0),
}
"""The same people, of whom nobody is lost before the end."""
KINDS: dict[str, tuple[Made, Span | None]] = {
    "answered": (answered, None),
    "watched": (watched, YEAR),
    "competed": (competed, YEAR),
}


def _cheap(seen: Seen) -> Iterator[tuple[str, Measure]]:
    """What is made by sums; each by name."""
    yield "auc", measure_auc(seen)
    yield "c", measure_c(seen)
    if seen.span is not None:
        yield "uno", measure_uno(seen)
    errors = measure_errors(seen)
    yield "brier", errors.brier
    yield "scaled", errors.scaled
    yield "observed", observe(seen)
    yield "ratio", compare_with_expected(seen)
    decision = decide(seen, POINT)
    yield "sensitivity", decision.sensitivity
    yield "specificity", decision.specificity
    yield "positive", decision.positive_value
    yield "negative", decision.negative_value


def _all(seen: Seen) -> Iterator[tuple[str, Measure]]:
    yield from _cheap(seen)
    yield "intercept", measure_intercept(seen)
    yield "slope", measure_slope(seen)


def _scaled(measure: Measure, at: float) -> float:
    """A value on the scale on which the limits are even."""
    if measure.interval is Interval.LOGIT:
        return float(np.log(at / (1 - at)))
    if measure.interval is Interval.LOG:
        return float(np.log(at))
    if measure.interval is Interval.LOG_LOG:
        return float(np.log(-np.log1p(-at)))
    return at


@pytest.mark.parametrize("kind", ["watched", "competed"])
def test_standard_errors_are_those_of_a_bootstrap(kind: str) -> None:
    make, span = KINDS[kind]
    predicted, outcome = make(700, 4)
    seen = Seen(predicted, outcome, span)
    drawn: dict[str, list[float]] = {}
    formula = dict(_cheap(seen))
    for replicate in range(500):
        rows = repeat_rows(draw_counts(700, 9, replicate))
        for name, measure in _cheap(seen.part(rows)):
            assert measure.value is not None
            drawn.setdefault(name, []).append(_scaled(formula[name], measure.value))
    for name, measure in formula.items():
        assert measure.lower is not None
        assert measure.upper is not None
        se = (_scaled(measure, measure.upper) - _scaled(measure, measure.lower)) / (2 * Z)
        if name == "ratio":
            # the predictions are taken as known, the bootstrap draws them too
            expected = [float(predicted.probability[repeat_rows(draw_counts(700, 9, k))].mean()) for k in range(500)]
            drawn[name] = (np.array(drawn[name]) + np.log(expected)).tolist()
        assert abs(se) == pytest.approx(float(np.std(drawn[name])), rel=0.1), name


@pytest.mark.parametrize("kind", KINDS)
def test_intervals_hold_the_truth_as_often_as_they_say(kind: str) -> None:
    make, span = KINDS[kind]
    # the truth of a large number of people of whom nobody is lost before the end
    predicted, outcome = WHOLE[kind](200_000, 1000)
    large = Seen(predicted, outcome, span).in_order()
    truth = {name: measure.value for name, measure in _all(large)}
    held = dict.fromkeys(truth, 0)
    samples = 300
    for sample in range(samples):
        for name, measure in _all(Seen(*make(400, sample), span)):
            wanted = truth[name]
            assert wanted is not None
            assert measure.lower is not None
            assert measure.upper is not None
            held[name] += measure.lower <= wanted <= measure.upper
    shares = {name: count / samples for name, count in held.items()}
    # C over the whole follow-up depends on how long people are watched, and so does not aim at one truth
    if span is not None:
        del shares["c"]
    assert all(0.91 <= share <= 0.985 for share in shares.values()), shares


@pytest.mark.parametrize("kind", ["watched", "competed"])
def test_weights_undo_the_loss_from_sight(kind: str) -> None:
    """Measures of people partly lost are those of the same people with nobody lost, which need no weights."""
    make, span = KINDS[kind]
    lost = dict(_cheap(Seen(*make(30_000, 6), span).in_order()))
    whole = dict(_cheap(Seen(*WHOLE[kind](30_000, 6), span).in_order()))
    for name in set(lost) - {"c"}:
        one, other = lost[name], whole[name]
        assert one.value is not None
        assert other.value is not None
        assert one.lower is not None
        assert one.upper is not None
        # the same people: the difference is less than what two samples differ by
        assert abs(one.value - other.value) < (one.upper - one.lower) / 2, name


def test_in_the_large_and_the_slope_find_what_was_done() -> None:
    """Predictions 1.25 times too wide on the link and lowered by 0.2: slope 1 / 1.25."""
    for kind, (make, span) in KINDS.items():
        predicted, outcome = make(60_000, 8)
        slope = measure_slope(Seen(predicted, outcome, span).in_order())
        assert slope.value is not None
        assert slope.lower is not None
        assert abs(slope.value - 0.8) < 1.5 * (slope.value - slope.lower) < 0.05, kind
    predicted, outcome = watched(60_000, 8)
    halved = -np.expm1(-0.5 * np.exp(predicted.log_hazard))
    lowered = PredictedPeople(halved, 1 - halved)
    plain, moved = (measure_intercept(Seen(each, outcome, YEAR)).value for each in (predicted, lowered))
    assert plain is not None
    assert moved is not None
    assert moved - plain == pytest.approx(np.log(2), abs=1e-9)
