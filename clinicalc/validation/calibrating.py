"""Calibration in the large and the calibration slope, for each kind of outcome.

Yes or no: a logistic model with the log odds of the risk as offset, and one on them (Cox, Biometrika 1958;45:562).
Times: where the predicted hazard of all follow-up is known, log of events over those expected, with the standard error
of a Poisson count (Crowson, Atkinson & Therneau, Stat Methods Med Res 2016;25:1692); else log of the cumulative hazard
at the horizon with the predicted one as offset, of variance A / H^2 (Tsiatis, Ann Stat 1981;9:93); the slope of a Cox
model on log(-log(1 - risk)). Competing events: the shift of log(-log(1 - risk)) at which the mean risk is the observed
incidence, by the delta method, and the slope of a Fine-Gray model.
"""

from math import sqrt

import numpy as np
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.faults import FitFault
from clinicalc.estimation.fine_gray import fit_fine_gray, robust_subdistribution_covariance
from clinicalc.estimation.hazard_sums import Cohort, Ties, sum_hazards
from clinicalc.estimation.large import fit_intercept
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.estimation.subdistribution import CompetingCohort
from clinicalc.validation.intervals import lacking, measure_even
from clinicalc.validation.observing import Seen
from clinicalc.validation.predicted import YesNo
from clinicalc.validation.validated import Measure, Method, Outcomes

Array = NDArray[np.float64]

_INTERCEPTS = {
    Outcomes.BINARY: Method.LOGIT_OFFSET,
    Outcomes.TIMES: Method.COX_OFFSET,
    Outcomes.COMPETING: Method.INCIDENCE_SHIFT,
}
_SLOPES = {
    Outcomes.BINARY: Method.LOGIT_SLOPE,
    Outcomes.TIMES: Method.COX_SLOPE,
    Outcomes.COMPETING: Method.FINE_GRAY_SLOPE,
}
_MOST_STEPS = 100


def measure_intercept(seen: Seen) -> Measure:
    """Calibration in the large; 0 where the predictions are right on average, above where they are too low."""
    method = _INTERCEPTS[seen.outcomes]
    if method is Method.COX_OFFSET and seen.predicted.hazards is not None:
        method = Method.POISSON_OFFSET
    why = _find_reason(seen)
    if why:
        return lacking(why, method)
    try:
        value, se = _intercept(seen, method)
    except FitRefused as refused:
        return lacking(_tell(refused), method)
    return measure_even(value, se, method)


def measure_slope(seen: Seen) -> Measure:
    """The calibration slope: 1 is right, below 1 the predictions are too extreme."""
    method = _SLOPES[seen.outcomes]
    why = _find_reason(seen)
    if not why and seen.alike:
        why = "Everybody has the same predicted risk: a slope needs risks that differ."
    if not why and seen.outcomes is Outcomes.COMPETING and seen.came_late:
        why = "Some were first watched after time nought: no slope is made of them where other events come first."
    if why:
        return lacking(why, method)
    try:
        value, variance = _slope(seen)
    except FitRefused as refused:
        return lacking(_tell(refused), method)
    return measure_even(value, sqrt(variance), method)


def _intercept(seen: Seen, method: Method) -> tuple[float, float]:
    """The intercept and its standard error."""
    if isinstance(seen.outcome, YesNo):
        return fit_intercept(seen.outcome.y, seen.predicted.log_odds)
    if method is Method.POISSON_OFFSET:
        assert seen.predicted.hazards is not None
        return float(np.log(seen.events / seen.predicted.hazards.sum())), 1.0 / sqrt(seen.events)
    if method is Method.COX_OFFSET:
        events = (seen.watched.status == 1).astype(np.float64)
        x = seen.predicted.log_hazard[:, None]
        cohort = Cohort(seen.watched.times, events, x, seen.watched.entry)
        (sums,) = sum_hazards(cohort, np.ones(1), (seen.horizon,), Ties.EFRON)
        return float(np.log(sums.hazard)), sqrt(sums.squares) / sums.hazard
    return shift_to_incidence(seen.predicted.log_hazard, seen.incidence.share, seen.incidence.se)


def _slope(seen: Seen) -> tuple[float, float]:
    """The slope and its variance."""
    if isinstance(seen.outcome, YesNo):
        fit = fit_logistic(seen.outcome.y, seen.predicted.log_odds[:, None])
        return float(fit.coefficients[1]), float(fit.covariance[1, 1])
    if seen.outcomes is Outcomes.COMPETING:
        seen = seen.in_order()
        cohort = CompetingCohort(seen.watched.times, seen.watched.status, seen.predicted.log_hazard[:, None])
        found = fit_fine_gray(cohort, start=np.ones(1), sets=seen.counted)
        covariance = robust_subdistribution_covariance(cohort, found, sets=seen.counted)
        return float(found.coefficients[0]), float(covariance[0, 0])
    x, watched = seen.predicted.log_hazard[:, None], seen.watched
    events = (watched.status == 1).astype(np.float64)
    cox = fit_cox(Cohort(watched.times, events, x, watched.entry))
    return float(cox.coefficients[0]), float(cox.covariance[0, 0])


def shift_to_incidence(log_hazards: Array, incidence: float, se: float) -> tuple[float, float]:
    """The d at which the mean of 1 - exp(-exp(eta + d)) over people is the incidence, and its standard error.

    `log_hazards` are eta = log(-log(1 - risk)), (n,); the incidence lies between 0 and 1. Newton's steps on
    log(-log(1 - mean)), on which the mean is nearly straight; the predictions are taken as known.
    """
    shift, wanted = 0.0, float(np.log(-np.log1p(-incidence)))
    for _ in range(_MOST_STEPS):
        hazards = np.exp(log_hazards + shift)
        left = float(np.exp(-hazards).mean())
        grown = float((np.exp(-hazards) * hazards).mean())
        step = (wanted - float(np.log(-np.log(left)))) * left * -float(np.log(left)) / grown
        shift += step
        if abs(step) <= 1e-13:
            break
    return shift, se / grown


def _find_reason(seen: Seen) -> str:
    """Why there is neither intercept nor slope, or ""."""
    p, rest = seen.predicted.probability, seen.predicted.remainder
    sure = int(((p <= 0.0) | (rest <= 0.0)).sum())
    if not seen.followed:
        return seen.not_followed
    if not seen.events:
        return f"Nobody was seen to have the event{seen.by}."
    if _all_had_it(seen):
        return f"Everybody had the event{seen.by}."
    if sure:
        return f"For {sure:,} of these people the predicted risk is exactly 0 or 1, which has no finite log odds."
    return ""


def _all_had_it(seen: Seen) -> bool:
    """Whether nothing is left to estimate; of times a hazard still is."""
    if isinstance(seen.outcome, YesNo):
        return seen.events == seen.people
    return seen.outcomes is Outcomes.COMPETING and seen.incidence.share >= 1.0


_REFUSALS = {
    FitFault.CONSTANT: "the predicted risks of those who can be compared do not differ",
    FitFault.SEPARATED: "the predicted risks tell those with the event from the others without error",
    FitFault.MORE_COLUMNS_THAN_EVENTS: "there are too few events, or too few people without",
}


def _tell(refused: FitRefused) -> str:
    """Why a fit was refused, as a sentence."""
    words = _REFUSALS.get(FitFault(refused.code), str(refused).rstrip("."))
    return f"No estimate: {words}."
