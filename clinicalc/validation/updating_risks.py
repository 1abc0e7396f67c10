"""Binomial models updated to who had the event and who had not: intercept, intercept and slope, refit."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.errors import FitRefused
from clinicalc.estimation.binomial import Link, sum_loglik
from clinicalc.estimation.large import fit_intercept
from clinicalc.estimation.logistic import fit_logistic
from clinicalc.validation.updated import (
    EquationUpdate,
    Refit,
    RefittedLine,
    Shrinkage,
    Testing,
    UpdatedLine,
    UpdateMethod,
    UpdateWish,
)
from clinicalc.validation.updating_faults import (
    LEAST_EVENTS,
    UpdateFault,
    bare_reason,
    refuse_nobody,
    refuse_one_outcome,
    refuse_refit,
    refuse_slope,
    refuse_too_few,
    refuse_update,
    require_spread,
    say_no_refit,
    say_too_few,
)
from clinicalc.validation.updating_people import EquationPeople, join_leads, sum_terms
from clinicalc.validation.updating_tests import Rung, choose_closed, why_not_nested

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class RiskLine:
    """Intercept and slope with their covariance (v00, v01, v11), and the log-likelihood."""

    intercept: float
    slope: float
    covariance: tuple[float, float, float]
    loglik: float


@dataclass(frozen=True, slots=True, eq=False)
class RefitRisk:
    """A refit, and its log-likelihood."""

    refit: Refit
    loglik: float


def update_risks(parts: Sequence[EquationPeople], y: Array, span: Span, wish: UpdateWish) -> tuple[EquationUpdate, ...]:
    """The equations of `parts` updated to y (1 or 0 of all people): by one line, or each refitted."""
    name, link = join_leads(parts), Link(parts[0].equation.content.link)
    answers = np.concatenate([part.part(y) for part in parts])
    eta = np.concatenate([part.lp0(span) + part.lp for part in parts])
    _require_both(name, answers)
    testing, method = None, wish.method
    refits: tuple[RefitRisk, ...] = ()
    if method is UpdateMethod.CLOSED_TEST:
        testing, refits = _test(name, parts, y, answers, eta, link, span, wish.alpha)
        method = testing.chosen
    elif method is UpdateMethod.REFIT:
        refits = _refit_all(parts, y, link, span)
    line = RiskLine(0.0, 1.0, (0.0, 0.0, 0.0), 0.0)
    if method is UpdateMethod.INTERCEPT:
        line = fit_shift(answers, eta, link)
    elif method is UpdateMethod.INTERCEPT_SLOPE:
        line = fit_line(name, answers, eta, link)
        if not line.slope > 0:
            raise refuse_slope(name, line.slope)
    places = refits if method is UpdateMethod.REFIT else (None,) * len(parts)
    return tuple(
        _say(part, part.part(y), span, method, line, refit, testing) for part, refit in zip(parts, places, strict=True)
    )


def fit_shift(y: Array, eta: Array, link: Link) -> RiskLine:
    """The intercept beside eta with slope 1; its variance from the expected information. Raises as `fit_intercept`."""
    at, se = fit_intercept(y, eta, link)
    loglik = sum_loglik(np.ones((len(y), 1)), np.array([at]), y, link, np.ones(len(y)), eta)
    return RiskLine(at, 1.0, (se * se, 0.0, 0.0), loglik)


def fit_line(name: str, y: Array, eta: Array, link: Link) -> RiskLine:
    """Intercept and slope of y on eta. Raises FitRefused where eta does not vary."""
    require_spread(name, eta)
    try:
        fit = fit_logistic(y, eta[:, None], link=link)
    except FitRefused as refused:
        raise refuse_update(
            UpdateFault.NO_ESTIMATE, f"{name}there is no estimate of intercept and slope: {bare_reason(refused)}"
        ) from None
    v = fit.covariance
    covariance = (float(v[0, 0]), float(v[0, 1]), float(v[1, 1]))
    return RiskLine(float(fit.coefficients[0]), float(fit.coefficients[1]), covariance, fit.loglik)


def why_no_refit(part: EquationPeople, y: Array) -> str:
    """Why there are too few events, or too few without one, for a refit of an equation; "" where there are enough."""
    events = int(y.sum())
    others = len(y) - events
    whose = "events" if events <= others else "people without the event"
    needed = LEAST_EVENTS * len(part.estimated)
    return say_too_few(min(events, others), needed, whose) if min(events, others) < needed else ""


def refit_risk(part: EquationPeople, y: Array, link: Link, span: Span) -> RefitRisk:
    """The terms of one equation estimated anew, those marked fixed as they are. Raises FitRefused."""
    estimated, terms = part.estimated, part.equation.content.terms
    fixed = [place for place in range(len(terms)) if place not in estimated]
    offset = sum_terms(part.x[:, fixed], [terms[place].coefficient for place in fixed]) if fixed else None
    fit = fit_logistic(y, part.x[:, list(estimated)], link=link, offset=offset)
    line = RefittedLine(span, float(fit.coefficients[0]), None, None, len(y), int(y.sum()))
    refit = Refit(
        terms=part.term_ids,
        coefficients=fit.coefficients[1:],
        covariance=fit.covariance[1:, 1:],
        joint=fit.covariance,
        robust=False,
        lines=(line,),
        shrinkage=Shrinkage(2 * (fit.loglik - fit.loglik_null), len(estimated)),
    )
    return RefitRisk(refit, fit.loglik)


def _refit_all(parts: Sequence[EquationPeople], y: Array, link: Link, span: Span) -> tuple[RefitRisk, ...]:
    found = []
    for part in parts:
        own = part.part(y)
        lacking = why_no_refit(part, own)
        if lacking:
            raise refuse_too_few(part.lead, lacking)
        try:
            found.append(refit_risk(part, own, link, span))
        except FitRefused as refused:
            raise refuse_refit(part.lead, part.term_ids, refused) from None
    return tuple(found)


def _test(
    name: str,
    parts: Sequence[EquationPeople],
    y: Array,
    answers: Array,
    eta: Array,
    link: Link,
    span: Span,
    alpha: float,
) -> tuple[Testing, tuple[RefitRisk, ...]]:
    ones, counts = np.ones((len(answers), 1)), np.ones(len(answers))
    logliks = [
        (UpdateMethod.KEEP, 0, sum_loglik(ones, np.zeros(1), answers, link, counts, eta)),
        (UpdateMethod.INTERCEPT, 1, fit_shift(answers, eta, link).loglik),
        (UpdateMethod.INTERCEPT_SLOPE, 2, fit_line(name, answers, eta, link).loglik),
    ]
    refits, without = try_refits(parts, [part.part(y) for part in parts], link, span)
    if refits:
        free = sum(len(part.estimated) + 1 for part in parts)
        logliks.append((UpdateMethod.REFIT, free, sum(refit.loglik for refit in refits)))
    best = logliks[-1][2]
    rungs = [Rung(method, free, 2 * (best - loglik), loglik) for method, free, loglik in logliks]
    return choose_closed(rungs, alpha, without), refits


def try_refits(
    parts: Sequence[EquationPeople], answers: Sequence[Array], link: Link, span: Span
) -> tuple[tuple[RefitRisk, ...], str]:
    """The refits of all equations, or none and why."""
    found = []
    for part, own in zip(parts, answers, strict=True):
        why = why_not_nested(part) or why_no_refit(part, own)
        if why:
            return (), f"{part.lead}{why}"
        try:
            found.append(refit_risk(part, own, link, span))
        except FitRefused as refused:
            return (), f"{part.lead}{say_no_refit(part.term_ids, refused)}"
    return tuple(found), ""


def _say(
    part: EquationPeople,
    y: Array,
    span: Span,
    method: UpdateMethod,
    line: RiskLine,
    refit: RefitRisk | None,
    testing: Testing | None,
) -> EquationUpdate:
    events = int(y.sum())
    has_slope = method is UpdateMethod.INTERCEPT_SLOPE
    lines = (UpdatedLine(span, line.intercept, line.slope, line.covariance, len(y), events),)
    return EquationUpdate(
        id=part.id,
        method=method,
        people=len(y),
        events=events,
        competing=0,
        slope=line.slope,
        slope_se=float(np.sqrt(line.covariance[2])) if has_slope else None,
        lines=() if refit is not None else lines,
        refit=None if refit is None else refit.refit,
        testing=testing,
    )


def _require_both(name: str, y: Array) -> None:
    if not len(y):
        raise refuse_nobody(name)
    if not y.any():
        raise refuse_one_outcome(UpdateFault.NO_EVENTS, name, f"none of the {len(y):,} people has")
    if y.all():
        raise refuse_one_outcome(UpdateFault.NO_OTHERS, name, f"all {len(y):,} people have")
