"""All measures of predicted risks at one horizon, and the few that are made in a group."""

from collections.abc import Sequence

import numpy as np

from clinicalc.coefficients.spans import Span
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.errors import UsageError
from clinicalc.estimation.calibrated import Calibration
from clinicalc.estimation.calibration import calibrate_risks, calibrate_times
from clinicalc.estimation.drawn_curves import DRAWS
from clinicalc.estimation.smooth_curves import FEWEST_EVENTS, FEWEST_PEOPLE
from clinicalc.validation.calibrating import measure_intercept, measure_slope
from clinicalc.validation.deciding import decide, draw_net_benefit
from clinicalc.validation.discriminating import measure_auc, measure_c, measure_uno
from clinicalc.validation.erring import measure_errors
from clinicalc.validation.indexing import measure_indices
from clinicalc.validation.intervals import lacking
from clinicalc.validation.observing import Seen, compare_with_expected, observe
from clinicalc.validation.predicted import FlagPoint, Outcome, PredictedPeople, YesNo
from clinicalc.validation.validated import GroupFigures, HorizonValidation, Outcomes

_STEPS = 4


def measure_horizon(
    predicted: PredictedPeople,
    outcome: Outcome,
    span: Span | None,
    points: Sequence[FlagPoint] = (),
    course: Course = UNWATCHED,
    *,
    resamples: int = 0,
    seed: int = 1,
) -> HorizonValidation:
    """Every measure of people at one horizon; `span` is None for an outcome without time.

    Times are in the unit of the span. With `resamples` (20 or more) the band of the curve of a binary outcome, and the
    limits of the indices, come from so many samples of the people, else from samples of groups. Raises UsageError
    where the horizon lies beyond the follow-up, or there is nobody; what else cannot be worked out is None with why.
    """
    seen = Seen(predicted, outcome, span)
    refuse_unfollowed(seen)
    seen = seen.in_order()
    where = "Measuring" if span is None else f"Measuring at {span.words}"
    course.say(where, 0, _STEPS)
    calibration = calibrate(seen, resamples, seed)
    indices = measure_indices(calibration, resamples)
    course.say(where, 1, _STEPS)
    c, uno, auc = measure_c(seen), measure_uno(seen), measure_auc(seen)
    course.say(where, 2, _STEPS)
    intercept, slope, errors = measure_intercept(seen), measure_slope(seen), measure_errors(seen)
    course.say(where, 3, _STEPS)
    found = HorizonValidation(
        span=span,
        outcomes=seen.outcomes,
        people=seen.people,
        events=seen.events,
        competing=seen.competing,
        observed=observe(seen),
        expected=seen.expected,
        observed_to_expected=compare_with_expected(seen),
        intercept=intercept,
        slope=slope,
        c=c,
        uno=uno,
        auc=auc,
        brier=errors.brier,
        brier_null=errors.null,
        scaled_brier=errors.scaled,
        calibration=calibration,
        ici=indices.ici,
        decisions=tuple(decide(seen, point) for point in points),
        net_benefit=draw_net_benefit(seen),
        e50=indices.e50,
        e90=indices.e90,
        emax=indices.emax,
    )
    course.say(where, _STEPS, _STEPS)
    return found


def measure_group(predicted: PredictedPeople, outcome: Outcome, span: Span | None, by: str, level: str) -> GroupFigures:
    """The figures of one group, already picked out; with too few people they are None and `why` says so.

    With too few events slope and C alone are None.
    """
    seen = Seen(predicted, outcome, span)
    why = _find_reason(seen)
    if why:
        none = lacking(why)
        expected = seen.expected if seen.people else float("nan")
        return GroupFigures(by, level, seen.people, seen.events, none, expected, none, none, none, why)
    few = ""
    others = seen.people - seen.events if seen.outcomes is Outcomes.BINARY else seen.people
    if min(seen.events, others) < FEWEST_EVENTS:
        what = "with the event" if seen.events < FEWEST_EVENTS else "without the event"
        few = f"Fewer than {FEWEST_EVENTS} people {what}{seen.by}: too few for this figure."
    return GroupFigures(
        by=by,
        level=level,
        people=seen.people,
        events=seen.events,
        observed=observe(seen),
        expected=seen.expected,
        observed_to_expected=compare_with_expected(seen),
        slope=lacking(few) if few else measure_slope(seen),
        c=lacking(few) if few else measure_c(seen),
    )


def refuse_unfollowed(seen: Seen) -> None:
    """Raise UsageError where there is nobody, a value is missing, or nothing is known at the horizon."""
    if not seen.people:
        raise UsageError("There is nobody to measure the predictions in.", do="Look at who was left out, and why.")
    if not np.isfinite(seen.predicted.probability).all():
        raise UsageError("A predicted risk is missing.", do="Leave out whoever the model gives no number for.")
    if isinstance(seen.outcome, YesNo):
        return
    if seen.span is None:
        raise UsageError("Times are measured at a horizon, and none is named.", do="Name one, such as 10 years.")
    if not seen.followed:
        longest = Span(float(f"{seen.watched.times.max():.3g}"), seen.span.unit).words
        raise UsageError(
            f"The horizon of {seen.span.words} lies beyond the follow-up.",
            why=f"Nobody was watched for longer than {longest}.",
            do="Name a shorter horizon that the model answers for.",
        )


def calibrate(seen: Seen, resamples: int = 0, seed: int = 1) -> Calibration:
    """Groups, smooth curve with its band, indices with limits, and spread."""
    seen = seen.in_order()
    predictions = seen.predicted.probability
    if isinstance(seen.outcome, YesNo):
        return calibrate_risks(predictions, seen.outcome.y, resamples=resamples, seed=seed, draws=DRAWS)
    stay = seen.outcomes is Outcomes.COMPETING and not seen.came_late and seen.events > 0
    sets = seen.counted if stay else None
    return calibrate_times(predictions, seen.outcome, seen.horizon, draws=DRAWS, seed=seed, sets=sets)


def _find_reason(seen: Seen) -> str:
    """Why a group has no figures, or ""."""
    if seen.people < FEWEST_PEOPLE:
        who = "Nobody is" if not seen.people else f"{seen.people} {'person is' if seen.people == 1 else 'people are'}"
        return f"{who} in this group: no figures are made of fewer than {FEWEST_PEOPLE}."
    return "" if seen.followed else seen.not_followed
