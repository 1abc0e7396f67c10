"""A fit made with statsmodels, as the packaging takes it: Logit, GLM (binomial, logit or cloglog link), PHReg.

PHReg's own baseline functions leave out the jump at the time itself and count Breslow's increments after an Efron fit;
they are not used. H, A and q are summed anew, and the fit's own score is worked out first: it must be zero.
"""

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.development.fit import Fit, FitBaseline, FitKind
from clinicalc.development.fitted import fit_with_intercept, rows_of
from clinicalc.development.squares import square_of_sums
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.estimation.hazard_sums import Cohort, Ties, score, sum_hazards

Array = NDArray[np.float64]

SCORE_SLACK = 1e-6
"""Largest Newton step that may be left at the end of a fit, in standard errors of the coefficient."""
STEEPEST = 8.0
"""Largest |b| sd(x): beyond it the fit separates those with the outcome from those without."""


def fit_of_statsmodels(
    results: Any,
    *,
    names: Mapping[str, str] | None = None,
    times: Sequence[float] = (),
    stratum: object = None,
    reference: Sequence[float] | None = None,
) -> Fit:
    """The fit of a results object; `names` gives the term id where the fit's own name is another one.

    For PHReg `times` are the horizons in the fit's unit of time and `stratum` is the label of one stratum, where there
    are several. `reference` is for a binomial fit on centred columns: the value of each term at which its intercept
    holds, in the order of the columns. Raises DescriptionRefused for a model that is none of these, that has not
    converged, or whose figures cannot be a fit's.
    """
    from statsmodels.discrete.discrete_model import Logit
    from statsmodels.duration.hazard_regression import PHReg
    from statsmodels.genmod.generalized_linear_model import GLM

    model = results.model
    if isinstance(model, PHReg):
        return _of_hazards(results, names or {}, times, stratum)
    if isinstance(model, Logit):
        return _of_binomial(results, FitKind.LOGISTIC, names or {}, reference)
    if isinstance(model, GLM):
        return _of_binomial(results, _kind_of_glm(model), names or {}, reference)
    raise _refused(f"{type(model).__name__} is not one of Logit, GLM (binomial) and PHReg.")


def _kind_of_glm(model: Any) -> FitKind:
    from statsmodels.genmod.families import Binomial
    from statsmodels.genmod.families.links import CLogLog, Logit

    if isinstance(model.family, Binomial):
        if isinstance(model.family.link, Logit) and not isinstance(model.family.link, CLogLog):
            return FitKind.LOGISTIC
        if isinstance(model.family.link, CLogLog):
            return FitKind.CLOGLOG
    raise _refused("only a binomial GLM with the link logit or cloglog has a place in a coefficient file.")


def _of_binomial(results: Any, kind: FitKind, names: Mapping[str, str], reference: Sequence[float] | None) -> Fit:
    from statsmodels.genmod.generalized_linear_model import GLM

    model = results.model
    if getattr(model, "offset", None) is not None and np.any(model.offset):
        raise _refused("the fit has an offset, which no term of the equation would carry.")
    columns = list(model.exog_names)
    constant = model.data.const_idx
    if constant is None:
        raise _refused("the fit has no constant: add one with sm.add_constant.")
    b = np.asarray(results.params, dtype=np.float64)
    _check_binomial(results, b, columns, constant)
    covariance = np.asarray(results.cov_params(), dtype=np.float64)
    robust = results.cov_type != "nonrobust"
    if not robust and isinstance(model, GLM):  # GLM's stops one step behind
        covariance = np.asarray(np.linalg.inv(-model.hessian(b, observed=False)), dtype=np.float64)
    _check_covariance(covariance)
    order = [constant, *(place for place in range(len(columns)) if place != constant)]
    ids = _ids([columns[place] for place in order[1:]], names)
    return fit_with_intercept(
        kind, ids, b[order].tolist(), covariance[np.ix_(order, order)], reference=reference, robust=robust
    )


def _check_binomial(results: Any, b: Array, columns: Sequence[str], constant: int) -> None:
    model = results.model
    if not np.isfinite(b).all():
        raise _refused("a coefficient is not finite.")
    steep = np.abs(b) * np.asarray(model.exog, dtype=np.float64).std(axis=0)
    steep[constant] = 0
    wrong = [quoted(name) for name, size in zip(columns, steep, strict=True) if size > STEEPEST]
    if wrong:
        raise _refused(
            f"{listed(wrong)}: one standard deviation moves the log odds by over {STEEPEST:g}. The values separate "
            "those with the outcome from those without (separation), and such a coefficient has no maximum."
        )
    told = getattr(results, "mle_retvals", None)
    done = told["converged"] if told else getattr(results, "converged", True)
    if not done:
        raise _refused("the fit has not converged.")
    _check_score(np.asarray(model.score(b), dtype=np.float64), np.asarray(results.cov_params(), dtype=np.float64))


def _of_hazards(results: Any, names: Mapping[str, str], times: Sequence[float], stratum: object) -> Fit:
    model = results.model
    if not times:
        raise _refused("no horizon is given: times=[...], in the fit's own unit of time.")
    if model.offset is not None:
        raise _refused("the fit has an offset, which no term of the equation would carry.")
    b = np.asarray(results.params, dtype=np.float64)
    covariance = np.asarray(results.cov_params(), dtype=np.float64)
    _check_covariance(covariance)
    ties = Ties(model.ties)
    strata = _strata(model)
    _check_score(np.sum([score(cohort, b, ties) for cohort in strata.values()], axis=0), covariance)
    cohort = _choose(strata, stratum)
    x_ref = cohort.x.mean(axis=0)  # sums of large exponentials lose digits; it is taken off again below
    near = Cohort(cohort.times, cohort.events, cohort.x - x_ref, cohort.entry)
    baselines = []
    for sums in sum_hazards(near, b, times, ties):
        if sums.hazard <= 0:
            raise _refused(f"nobody had the event by time {sums.time:g}.")
        square = square_of_sums(sums.hazard, sums.squares, sums.moments)
        lp0 = float(np.log(sums.hazard)) - float((x_ref * b).sum())
        baselines.append(FitBaseline(sums.time, lp0, square.variance, tuple((x_ref + square.centre).tolist())))
    robust = model.groups is not None
    remarks = [f"Cox fit by statsmodels, ties by {ties.name.capitalize()}; its baseline was summed anew."]
    if robust and ties is Ties.EFRON:
        remarks.append("statsmodels takes Breslow residuals for the robust covariance of an Efron fit.")
    ids = _ids(model.exog_names, names)
    return Fit(FitKind.COX, ids, tuple(b.tolist()), rows_of(covariance), robust, tuple(baselines), tuple(remarks))


def _strata(model: Any) -> dict[object, Cohort]:
    """The people of each stratum. Raises DescriptionRefused where somebody enters at an event time."""
    labels = np.zeros(len(model.endog)) if model.strata is None else np.asarray(model.strata)
    strata = {}
    for label in np.unique(labels):
        rows = labels == label
        entry = None if model.entry is None else np.asarray(model.entry, dtype=np.float64)[rows]
        times, events = (np.asarray(part, dtype=np.float64)[rows] for part in (model.endog, model.status))
        if entry is not None and np.isin(entry, times[events == 1]).any():
            raise _refused(
                "somebody enters at a time of an event, and PHReg counts them as at risk at that time already. Fit "
                "again with entry + 1e-6."
            )
        strata[label] = Cohort(times, events, np.asarray(model.exog, dtype=np.float64)[rows], entry)
    return strata


def _choose(strata: Mapping[object, Cohort], stratum: object) -> Cohort:
    if stratum is None and len(strata) == 1:
        return next(iter(strata.values()))
    if stratum in strata:
        return strata[stratum]
    labels = listed((quoted(str(label)) for label in strata), "or")
    raise _refused(f"say which stratum the equation is for: stratum={labels}.")


def _ids(columns: Sequence[str], names: Mapping[str, str]) -> tuple[str, ...]:
    unknown = [quoted(name) for name in names if name not in columns]
    if unknown:
        raise _refused(f"the fit has no coefficient {listed(unknown)}; it has {listed(map(quoted, columns))}.")
    ids = tuple(names.get(name, name) for name in columns)
    if len(set(ids)) < len(ids):
        raise _refused("two coefficients are said to be one term.")
    return ids


def _check_score(gradient: Array, covariance: Array) -> None:
    """At a maximum the score is zero; one more Newton step would move a coefficient by so many standard errors."""
    step = np.abs((covariance * gradient).sum(axis=1)) / np.sqrt(np.abs(np.diag(covariance)))
    if not np.isfinite(step).all() or step.max() > SCORE_SLACK:
        raise _refused(
            f"the fit is not at its maximum: another step would move a coefficient by {float(step.max()):.2g} standard "
            "errors. Fit again with a tighter tolerance; a penalised fit has no place here."
        )


def _check_covariance(covariance: Array) -> None:
    rows = tuple(tuple(map(float, row)) for row in (covariance + covariance.T) / 2)
    fault = judge_matrix(rows, len(rows), "coefficients")
    if fault:
        raise _refused(fault)


def _refused(message: str) -> DescriptionRefused:
    return DescriptionRefused("statsmodels fit", (Problem("", message),))
