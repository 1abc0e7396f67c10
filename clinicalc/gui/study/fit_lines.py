"""The figures of one fit in lines and rows: people, events, coefficients, baselines."""

from collections.abc import Iterator, Mapping

import numpy as np

from clinicalc.coefficients.schema import Equation
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.study_figures import FitFigures
from clinicalc.estimation.student import student_quantile
from clinicalc.gui.study.data_words import count, span_words
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.figure_words import figure, share
from clinicalc.gui.study.fit_methods import penalty_lines
from clinicalc.gui.study.term_words import say_per

_SURE = 0.975
_NORMAL = float("inf")
COEFFICIENTS = (
    FactColumn("Term"),
    FactColumn("Per"),
    FactColumn("Coefficient", is_figures=True),
    FactColumn("Standard error", is_figures=True),
)
_RATIOS = {
    FitKind.COX: "Hazard ratio",
    FitKind.LOGISTIC: "Odds ratio",
    FitKind.FINE_GRAY: "Subdistribution hazard ratio",
}
BASELINES = (
    FactColumn("Horizon"),
    FactColumn("Events by then", is_figures=True),
    FactColumn("Still followed", is_figures=True),
    FactColumn("Log cumulative hazard", is_figures=True),
)


def ratio_column(kind: FitKind) -> FactColumn:
    """The column of the exponentials of the coefficients."""
    return FactColumn(f"{_RATIOS.get(kind, 'Ratio')}, 95\u202f% interval", is_figures=True)


def figure_lines(figures: FitFigures) -> Iterator[tuple[str, str]]:
    """What is to be known of a fit before its coefficients."""
    yield "People", _people(figures)
    yield "Events", f"{figures.events:,}{_others(figures)}"
    yield "Events for each term", f"{figure(figures.events_per_term, 3)}, {count(figures.terms, 'term')}"
    if figures.concordance is not None:
        at = figures.concordance
        corrected = "not corrected for optimism" if figures.optimism is None else "corrected for optimism further down"
        pooled = "" if figures.imputed is None else ", pooled"
        yield "C, in these people", f"{at.c:.3f}, standard error {at.se:.3f}{pooled}, {corrected}"
    mean = "" if figures.imputed is None else ", means over the sets"
    yield "Log likelihood", f"{figure(figures.loglik, 8)}; without the terms {figure(figures.loglik_null, 8)}{mean}"
    yield from penalty_lines(figures)
    if figures.follow_up is not None:
        median = figures.follow_up.median
        unit = span_words(figures.follow_up.unit)
        reached = "not reached" if median is None else f"{median:,.6g} {unit}"
        yield "Follow-up", f"median {reached}, longest {figures.follow_up.longest:,.6g} {unit}"


def coefficient_facts(fit: Fit, equation: Equation, figures: FitFigures, fitted: FittedStudy) -> Iterator[Fact]:
    """A row for each term; pooled coefficients have intervals with their own degrees of freedom."""
    terms = {term.id: term for term in equation.terms}
    degrees = _degrees(figures)
    for place, (name, coefficient) in enumerate(zip(fit.names, fit.coefficients, strict=True)):
        error = None if fit.covariance is None else float(np.sqrt(fit.covariance[place][place]))
        per = say_per(terms[name], fitted.model.content.predictors) if name in terms else ""
        ratio = _ratio(coefficient, error, degrees.get(name, _NORMAL))
        yield Fact((name, per, figure(coefficient), "" if error is None else figure(error), ratio))


def baseline_facts(figures: FitFigures, fitted: FittedStudy) -> Iterator[Fact]:
    """A row for each horizon of each equation."""
    seen: dict[str, int] = {}
    for horizon in figures.horizons:
        place = seen.get(horizon.equation, 0)
        seen[horizon.equation] = place + 1
        baseline = fitted.fits[horizon.equation].baselines[place]
        of = f", {horizon.equation}" if len(figures.equations) > 1 else ""
        cells = (f"{horizon.span.words}{of}", f"{horizon.events:,}", f"{horizon.still_at_risk:,}")
        yield Fact((*cells, figure(baseline.lp0)))


def _others(figures: FitFigures) -> str:
    if not figures.competing:
        return ""
    how = "kept among those at risk" if figures.kind == FitKind.FINE_GRAY else "taken as censored"
    return f", and {count(figures.competing, 'competing event')} {how}"


def _people(figures: FitFigures) -> str:
    left = figures.left_out
    filled = "" if figures.imputed is None else ", some with values filled in"
    if not left.left_out:
        return f"{figures.people:,}, all to whom the equation applies{filled}"
    lacking = ", ".join(f"{id or 'the outcome'} {number:,}" for id, number in _lacking(figures).items())
    out_of = share(left.left_out / left.applicable)
    missing = f". Missing: {lacking}" if lacking else ""
    return f"{figures.people:,} of {left.applicable:,}{filled}; {left.left_out:,} ({out_of}) left out{missing}"


def _lacking(figures: FitFigures) -> Mapping[str, int]:
    """What those who were left out lack; what others lack was filled in."""
    return figures.left_out.missing if figures.imputed is None else figures.imputed.not_filled


def _degrees(figures: FitFigures) -> dict[str, float]:
    return {} if figures.imputed is None else {one.term: one.degrees for one in figures.imputed.terms}


def _ratio(coefficient: float, error: float | None, degrees: float) -> str:
    """The exponential of the coefficient with its 95 % interval."""
    if error is None:
        return figure(float(np.exp(coefficient)), 3)
    reach = student_quantile(_SURE, degrees) * error
    with np.errstate(over="ignore"):
        low, middle, high = np.exp([coefficient - reach, coefficient, coefficient + reach])
    return f"{figure(float(middle), 3)}, {figure(float(low), 3)}–{figure(float(high), 3)}"
