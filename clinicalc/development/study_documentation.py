"""The documentation of a fitted study: the figures of its fits beside what the researcher answered."""

import math
import platform
from dataclasses import replace
from importlib.metadata import version

import msgspec

from clinicalc import __version__
from clinicalc.coefficients.schema import Documentation
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit_documentation import OF_THE_FIT, FitDocumentation, Item, document_fit
from clinicalc.development.stated_fit import MinimumSize, MissingShare, StatedConcordance, StatedFit, StatedFollowUp
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_method_figures import Penalty, PenaltyFigures
from clinicalc.development.study_methods_stated import state_filling, state_incidences, state_mean, state_optimism
from clinicalc.development.study_slopes import find_slope
from clinicalc.development.study_terms import Tree
from clinicalc.estimation.concordance import Concordance
from clinicalc.estimation.sample_size import R2Origin

_LEVEL_Z = 1.959963984540054  # the 97.5 % point of the normal distribution
_METHODS = {
    "cox": "Cox proportional hazards model by maximum partial likelihood",
    "fine-gray": "Fine\u2013Gray subdistribution hazards model by maximum weighted partial likelihood",
    "logistic": "Logistic regression by maximum likelihood",
    "cloglog": "Binomial regression with complementary log-log link by maximum likelihood",
}
_COVARIANCES = {
    "model": "covariance from the information",
    "robust": "robust (sandwich) covariance",
    "cluster": "robust (sandwich) covariance over clusters",
}
_PENALISED_COVARIANCES = {
    Penalty.FIRTH: "covariance from the information at the estimate",
    Penalty.RIDGE: "covariance by Gray (J Am Stat Assoc 1992;87:942), which holds nothing of what shrinking moves",
}


def document_study(fitted: FittedStudy) -> FitDocumentation:
    """All items of the report standard that are answered, and the names of those that are not."""
    is_timed = isinstance(fitted.cohort.outcome, SurvivalOutcome)
    stated = [_state(fitted, figures) for figures in fitted.figures]
    return _with_uncovered(document_fit(stated, fitted.model.content.documentation, is_timed=is_timed), fitted)


def with_documentation(fitted: FittedStudy, model: Tree) -> Tree:
    """The model with its documentation in full."""
    return {**model, "documentation": [msgspec.to_builtins(item) for item in document_study(fitted).items]}


def _with_uncovered(found: FitDocumentation, fitted: FittedStudy) -> FitDocumentation:
    """The same with those to whom no equation applies, who are among the people of no fit, below what is missing."""
    count = fitted.cohort.rows - sum(len(people.rows) for people in fitted.people.values())
    if not count:
        return found
    names = (Item.MISSING.value, f"{Item.MISSING}{OF_THE_FIT}")
    place = max(place for place, item in enumerate(found.items) if item.item in names)
    who = "1 more person is" if count == 1 else f"{count:,} more people are"
    text = f"{who} in no fit, of {fitted.cohort.rows:,}: what decides which equation applies is missing."
    more = Documentation(item=found.items[place].item, text=text)
    return replace(found, items=(*found.items[: place + 1], more, *found.items[place + 1 :]))


def _state(fitted: FittedStudy, figures: FitFigures) -> StatedFit:
    labels = {"": "the outcome"} | {predictor.id: predictor.label for predictor in fitted.model.content.predictors}
    missing = tuple(MissingShare(labels[id], count) for id, count in figures.left_out.missing.items() if id in labels)
    size = figures.minimum
    return StatedFit(
        equation=figures.id if len(fitted.figures) > 1 else "",
        people=figures.people,
        events=figures.events,
        competing=figures.competing if fitted.study.dictionary.outcome.competing else None,
        parameters=figures.terms,
        left_out=figures.left_out.left_out,
        missing=missing,
        method=_method(fitted, figures),
        software=_software(figures),
        follow_up=_follow_up(figures),
        concordance=None if figures.concordance is None else _limits(figures.concordance),
        calibration_slope=find_slope(fitted, figures),
        minimum=None if size is None else MinimumSize(size, R2Origin.APPARENT),
        filling=state_filling(figures, labels),
        optimism=state_optimism(figures),
        incidences=tuple(state_incidences(figures)),
        mean=state_mean(figures),
    )


def _method(fitted: FittedStudy, figures: FitFigures) -> str:
    table = next(plan.table for plan in fitted.study.fits if plan.id == figures.id)
    penalty = figures.penalty
    parts = [_METHODS[figures.kind] if penalty is None else _penalised(figures.kind, penalty)]
    if figures.kind == "cox":
        parts.append(f"ties by {'Breslow' if table.ties == 'breslow' else 'Efron'}")
        if isinstance(table.strata, str):
            parts.append(f"in strata of {table.strata}")
    if figures.kind == "fine-gray":
        parts.append(f"ties by {'Efron' if table.ties == 'efron' else 'Breslow'}")
        parts.append(
            "people with a competing event weighted by the Kaplan\u2013Meier estimate of not being censored, an event "
            "before a censoring at the same time"
        )
    elif fitted.study.dictionary.outcome.competing:
        parts.append("competing events taken as censored")
    covariance = _COVARIANCES[table.covariance_kind]
    if penalty is not None and table.covariance_kind == "model":
        covariance = _PENALISED_COVARIANCES[penalty.kind]
    values = "complete cases" if figures.imputed is None else "missing values filled in by multiple imputation"
    return ", ".join([*parts, covariance, values])


def _penalised(kind: str, penalty: PenaltyFigures) -> str:
    if penalty.kind is Penalty.FIRTH:
        return "Logistic regression by Firth’s penalised likelihood (Biometrika 1993;80:27)"
    how = f"chosen by 10-fold cross-validation{penalty.chosen_anew}" if penalty.chosen else "stated beforehand"
    strength = "" if penalty.strength is None else f" of strength {penalty.strength:.6g}, {how}"
    model = "Cox proportional hazards model by partial likelihood" if kind == "cox" else "Logistic regression"
    return (
        f"{model} with a ridge penalty{strength}, on the coefficients per standard deviation, which leaves"
        f" {penalty.degrees:.1f} effective degrees of freedom"
    )


def _software(figures: FitFigures) -> tuple[tuple[str, str], ...]:
    names = ("numpy",) if figures.kind in ("cox", "fine-gray") else ("numpy", "statsmodels")
    found = tuple((name, version(name)) for name in names)
    return (("clinicalc", __version__), ("Python", platform.python_version()), *found)


def _follow_up(figures: FitFigures) -> StatedFollowUp | None:
    found = figures.follow_up
    if found is None or found.median is None:
        return None
    words = Span(2.0, found.unit).words.split(" ", 1)[1]
    return StatedFollowUp(found.median, words, "reverse Kaplan\u2013Meier")


def _limits(c: Concordance) -> StatedConcordance | None:
    """Limits on the logit of C, so that they stay between 0 and 1."""
    if not 0 < c.c < 1:
        return None
    half = _LEVEL_Z * c.se / (c.c * (1 - c.c))
    odds = c.c / (1 - c.c)
    low, high = odds * math.exp(-half), odds * math.exp(half)
    return StatedConcordance(c.c, low / (1 + low), high / (1 + high))
