"""The step Fit: coefficients, baselines, figures of each fit, what the screening found, whether people are enough."""

from collections.abc import Iterator

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.schema import Equation
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.study_figures import FitFigures
from clinicalc.estimation.screened import Screened
from clinicalc.estimation.screening_words import word_screened
from clinicalc.gui.study.data_words import count, span_words
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.figure_words import figure, share
from clinicalc.gui.study.problem_list import Stated, count_stated
from clinicalc.gui.study.refusal_words import state_refusal
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.study_state import MadeFit, StudyState
from clinicalc.gui.study.term_words import say_per

_Z = 1.959963984540054
"""The 0.975 quantile of the normal distribution."""
_GRADES = {Grade.STOP: Grade.STOP, Grade.CAUTION: Grade.CAUTION, Grade.NOTE: Grade.NOTE}
_COEFFICIENTS = (
    FactColumn("Term"),
    FactColumn("Per"),
    FactColumn("Coefficient", is_figures=True),
    FactColumn("Standard error", is_figures=True),
)
_RATIOS = {FitKind.COX: "Hazard ratio", FitKind.LOGISTIC: "Odds ratio"}
_BASELINES = (
    FactColumn("Horizon"),
    FactColumn("Events by then", is_figures=True),
    FactColumn("Still followed", is_figures=True),
    FactColumn("Log cumulative hazard", is_figures=True),
)


def make_fit_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    if state.opened is None:
        return StepSheet("Fit", "Open a study file first.")
    sheet = StepSheet("Fit", _head(state))
    if state.not_fitted is not None:
        stated = state_refusal(state.not_fitted)
        sheet.add_heading(f"The study was not fitted: {count(len(stated), 'problem')}")
        sheet.add_stated(stated)
    if state.fit is not None:
        _add_standing(sheet, state, state.fit)
        _add_fits(sheet, state.fit.fitted)
    return sheet


def _head(state: StudyState) -> str:
    opened = state.opened
    if state.fit is not None or state.not_fitted is not None or opened is None:
        return "" if opened is None else opened.study.content.title
    if opened.cohort is None:
        return "The people were not read: see the step Data."
    if opened.cohort.stops:
        return "Nothing is fitted before the stops in the data are seen to: see the step Data."
    return "Not fitted yet. “Fit the model” begins it; it can be cancelled while it runs."


def _add_standing(sheet: StepSheet, state: StudyState, fit: MadeFit) -> None:
    """Whose fit it is, where that is not what is open."""
    if state.is_stale:
        then = "Fit again." if state.may_fit else "What is open now cannot be fitted yet: see the step Data."
        sheet.add_words(
            f"This fit is of {fit.name} and its people as they were then, not of what is open now. {then}",
            semibold=True,
        )
    elif state.not_fitted is not None:
        sheet.add_words("What follows is the fit before, of the same study file and people.", semibold=True)


def _add_fits(sheet: StepSheet, fitted: FittedStudy) -> None:
    for figures in fitted.figures:
        first = fitted.fits[figures.equations[0]]
        equations = {one.id: one for one in fitted.model.content.equations}
        sheet.add_heading(f"Equation {figures.id}")
        sheet.add_lines(tuple(_figure_lines(figures)))
        facts = tuple(_coefficient_facts(first, equations[figures.equations[0]], fitted))
        ratio = FactColumn(f"{_RATIOS.get(first.kind, 'Ratio')}, 95\u202f% interval", is_figures=True)
        sheet.add_table(f"Coefficients of the equation {figures.id}", (*_COEFFICIENTS, ratio), facts)
        baselines = tuple(_baseline_facts(figures, fitted))
        if figures.horizons:
            sheet.add_table(f"Baselines of the equation {figures.id}", _BASELINES, baselines)
            sheet.add_words("The log cumulative hazard holds with every term at zero.", soft=True)
        else:
            sheet.add_lines((("Intercept", figure(first.baselines[0].lp0)),))
        stated = tuple(_state(found) for found in figures.screened)
        sheet.add_heading(f"What was looked for: {count_stated(stated)}" if stated else "Nothing to be remarked")
        if stated:
            sheet.add_stated(stated)
    if fitted.remarks:
        sheet.add_heading("Remarks")
        for remark in fitted.remarks:
            sheet.add_words(remark)


def _figure_lines(figures: FitFigures) -> Iterator[tuple[str, str]]:
    yield "People", _people(figures)
    competing = f", and {count(figures.competing, 'competing event')} taken as censored" if figures.competing else ""
    yield "Events", f"{figures.events:,}{competing}"
    yield "Events for each term", f"{figure(figures.events_per_term, 3)}, {count(figures.terms, 'term')}"
    if figures.concordance is not None:
        at = figures.concordance
        yield "C, in these people", f"{at.c:.3f}, standard error {at.se:.3f}, not corrected for optimism"
    yield "Log likelihood", f"{figure(figures.loglik, 8)}; without the terms {figure(figures.loglik_null, 8)}"
    if figures.follow_up is not None:
        median = figures.follow_up.median
        unit = span_words(figures.follow_up.unit)
        reached = "not reached" if median is None else f"{median:,.6g} {unit}"
        yield "Follow-up", f"median {reached}, longest {figures.follow_up.longest:,.6g} {unit}"


def _people(figures: FitFigures) -> str:
    left = figures.left_out
    if not left.left_out:
        return f"{figures.people:,}, all to whom the equation applies"
    lacking = ", ".join(f"{id or 'the outcome'} {number:,}" for id, number in left.missing.items())
    out_of = share(left.left_out / left.applicable)
    return f"{figures.people:,} of {left.applicable:,}; {left.left_out:,} ({out_of}) left out. Missing: {lacking}"


def _coefficient_facts(fit: Fit, equation: Equation, fitted: FittedStudy) -> Iterator[Fact]:
    terms = {term.id: term for term in equation.terms}
    for place, (name, coefficient) in enumerate(zip(fit.names, fit.coefficients, strict=True)):
        error = None if fit.covariance is None else float(np.sqrt(fit.covariance[place][place]))
        per = say_per(terms[name], fitted.model.content.predictors) if name in terms else ""
        yield Fact((name, per, figure(coefficient), "" if error is None else figure(error), _ratio(coefficient, error)))


def _ratio(coefficient: float, error: float | None) -> str:
    """The exponential of the coefficient with its 95 % interval."""
    if error is None:
        return figure(float(np.exp(coefficient)), 3)
    low, middle, high = np.exp([coefficient - _Z * error, coefficient, coefficient + _Z * error])
    return f"{figure(float(middle), 3)}, {figure(float(low), 3)}–{figure(float(high), 3)}"


def _baseline_facts(figures: FitFigures, fitted: FittedStudy) -> Iterator[Fact]:
    seen: dict[str, int] = {}
    for horizon in figures.horizons:
        place = seen.get(horizon.equation, 0)
        seen[horizon.equation] = place + 1
        baseline = fitted.fits[horizon.equation].baselines[place]
        of = f", {horizon.equation}" if len(figures.equations) > 1 else ""
        cells = (f"{horizon.span.words}{of}", f"{horizon.events:,}", f"{horizon.still_at_risk:,}")
        yield Fact((*cells, figure(baseline.lp0)))


def _state(found: Screened) -> Stated:
    return Stated(_GRADES[found.gravity], word_screened(found))
