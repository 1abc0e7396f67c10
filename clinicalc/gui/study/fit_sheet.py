"""The step Fit: coefficients, baselines, figures of each fit, what its methods came to, what the screening found."""

from collections.abc import Sequence

from clinicalc.assessment.findings import Grade
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_remarks import name_only_fit_nowhere
from clinicalc.estimation.screened import Screened
from clinicalc.estimation.screening_words import word_screened
from clinicalc.gui.study.data_words import count
from clinicalc.gui.study.figure_words import figure
from clinicalc.gui.study.fit_lines import (
    BASELINES,
    COEFFICIENTS,
    baseline_facts,
    coefficient_facts,
    figure_lines,
    ratio_column,
)
from clinicalc.gui.study.fit_method_parts import add_calibrations, add_imputation, add_incidences, add_optimism
from clinicalc.gui.study.penalty_offers import add_offers
from clinicalc.gui.study.problem_list import Stated, count_stated
from clinicalc.gui.study.refusal_words import state_refusal
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.gui.study.steps import Ask
from clinicalc.gui.study.study_state import MadeFit, StudyState

_GRADES = {Grade.STOP: Grade.STOP, Grade.CAUTION: Grade.CAUTION, Grade.NOTE: Grade.NOTE}
SAVE_REPORT = "Save a r&eport…"
_NOTHING = "A validation file is open: a model that was made elsewhere is held against its people, and none is fitted."


def make_fit_sheet(state: StudyState) -> StepSheet:
    """The sheet as the study stands."""
    if state.opened is None and (state.people_only is None or state.fit is None):
        return StepSheet("Fit", _NOTHING if state.people_only is not None else "Open a study file first.")
    sheet = StepSheet("Fit", _head(state))
    if state.not_fitted is not None and state.opened is not None:
        stated = state_refusal(state.not_fitted)
        sheet.add_heading(f"The study was not fitted: {count(len(stated), 'problem')}")
        sheet.add_stated(stated)
        add_offers(sheet, state.opened, state.not_fitted)
    if state.fit is not None:
        _add_standing(sheet, state, state.fit)
        sheet.add_asks(((SAVE_REPORT, Ask.REPORT),))
        _add_fits(sheet, state.fit)
    return sheet


def _head(state: StudyState) -> str:
    opened = state.opened
    if state.fit is not None or state.not_fitted is not None or opened is None:
        return _NOTHING if opened is None else opened.study.content.title
    if opened.cohort is None:
        return "The people were not read: see the step Data."
    if opened.cohort.stops:
        return "Nothing is fitted before the stops in the data are seen to: see the step Data."
    return "Not fitted yet. “Fit the model” begins it; it can be cancelled while it runs."


def _add_standing(sheet: StepSheet, state: StudyState, fit: MadeFit) -> None:
    """Whose fit it is, where that is not what is open."""
    if state.is_stale:
        then = "Fit again." if state.may_fit else "What is open now cannot be fitted yet: see the step Data."
        if state.people_only is not None:
            then = "A validation file is open, and nothing is fitted."
        sheet.add_words(
            f"This fit is of {fit.name} and its people as they were then, not of what is open now. {then}",
            semibold=True,
        )
    elif state.not_fitted is not None:
        sheet.add_words("What follows is the fit before, of the same study file and people.", semibold=True)


def _add_fits(sheet: StepSheet, fit: MadeFit) -> None:
    fitted = fit.fitted
    for figures in fitted.figures:
        sheet.add_heading(f"Equation {figures.id}" if len(fitted.figures) > 1 else "What was fitted")
        _add_plain(sheet, figures, fitted)
        add_imputation(sheet, figures)
        add_incidences(sheet, figures)
        add_optimism(sheet, figures)
        _add_found(sheet, figures.screened)
        add_calibrations(sheet, figures, fit.calibrations)
    if fitted.remarks:
        sheet.add_heading("Remarks")
        for remark in name_only_fit_nowhere(fitted.remarks, fitted.figures):
            sheet.add_words(remark)


def _add_plain(sheet: StepSheet, figures: FitFigures, fitted: FittedStudy) -> None:
    """People and events, coefficients, baselines."""
    first = fitted.fits[figures.equations[0]]
    equations = {one.id: one for one in fitted.model.content.equations}
    sheet.add_lines(tuple(figure_lines(figures)))
    facts = tuple(coefficient_facts(first, equations[figures.equations[0]], figures, fitted))
    columns = (*COEFFICIENTS, ratio_column(first.kind))
    sheet.add_table(f"Coefficients of the equation {figures.id}", columns, facts)
    if figures.horizons:
        baselines = tuple(baseline_facts(figures, fitted))
        sheet.add_table(f"Baselines of the equation {figures.id}", BASELINES, baselines)
        sheet.add_words("The log cumulative hazard holds with every term at zero.", soft=True)
    else:
        sheet.add_lines((("Intercept", figure(first.baselines[0].lp0)),))


def _add_found(sheet: StepSheet, screened: Sequence[Screened]) -> None:
    stated = tuple(Stated(_GRADES[found.gravity], word_screened(found)) for found in screened)
    sheet.add_heading(f"What was looked for: {count_stated(stated)}" if stated else "Nothing to be remarked")
    if stated:
        sheet.add_stated(stated)
