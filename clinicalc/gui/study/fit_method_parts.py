"""The parts of the step Fit beside the plain figures: imputation, competing events, bootstrap, calibration."""

from collections.abc import Sequence

from clinicalc.development.study_calibration import FitCalibration
from clinicalc.development.study_figures import FitFigures
from clinicalc.gui.study.calibration_view import CalibrationView
from clinicalc.gui.study.fit_methods import (
    FILLED,
    INCIDENCE_WORDS,
    INCIDENCES,
    OPTIMISM,
    OPTIMISM_WORDS,
    POOLED,
    drawn_words,
    filled_facts,
    imputation_lines,
    incidence_facts,
    optimism_facts,
    pooled_facts,
)
from clinicalc.gui.study.step_sheet import StepSheet
from clinicalc.report.calibration_figure import ShownCalibration

_APPARENT = "In the people of the fit, in whom every model looks better than in others."
_CENSORED = "Other events are taken as censored: what is observed is that of a world without them."


def add_imputation(sheet: StepSheet, figures: FitFigures) -> None:
    """What was filled in, and what that costs each coefficient."""
    imputed = figures.imputed
    if imputed is None:
        return
    sheet.add_heading("Values filled in")
    sheet.add_lines(tuple(imputation_lines(imputed)))
    sheet.add_table(f"Values filled in, {figures.id}", FILLED, tuple(filled_facts(imputed, figures.people)))
    sheet.add_table(f"Missing information, {figures.id}", POOLED, tuple(pooled_facts(imputed)))


def add_incidences(sheet: StepSheet, figures: FitFigures) -> None:
    """How many have the event where other events come first."""
    if not figures.incidences:
        return
    sheet.add_heading("Where other events come first")
    sheet.add_table(f"Incidence, {figures.id}", INCIDENCES, tuple(incidence_facts(figures)))
    sheet.add_words(INCIDENCE_WORDS, soft=True)


def add_optimism(sheet: StepSheet, figures: FitFigures) -> None:
    """What the figures of the fit come to without their optimism."""
    optimism = figures.optimism
    if optimism is None:
        return
    sheet.add_heading("Optimism")
    if optimism.figures:
        sheet.add_table(f"Optimism, {figures.id}", OPTIMISM, tuple(optimism_facts(optimism)))
    else:
        sheet.add_words("The optimism is not stated: too many samples could not be fitted.", semibold=True)
    sheet.add_words(drawn_words(optimism))
    sheet.add_words(OPTIMISM_WORDS, soft=True)


def add_calibrations(sheet: StepSheet, figures: FitFigures, calibrations: Sequence[FitCalibration]) -> None:
    """What the fit predicts for its own people at each horizon, and what happened to them."""
    for one in calibrations:
        if one.fit != figures.id:
            continue
        span = "" if one.span is None else one.span.words
        of = f", {' and '.join(one.equations)}" if one.equations != figures.equations else ""
        sheet.add_heading(f"Predicted and observed{f' at {span}' if span else ''}{of}")
        note = f"{_APPARENT} {_CENSORED}" if one.censored else _APPARENT
        sheet.add_widget(CalibrationView(ShownCalibration(one.calibration, span, note)))
