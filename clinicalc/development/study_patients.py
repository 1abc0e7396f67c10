"""Three people for worked examples, made from those a fit was made from: low, middle and high in its linear predictor.

Each is made of medians and commonest answers of a quarter, or the middle half, of the people: nobody's own values go
into a file that others read.
"""

from collections.abc import Iterator
from decimal import Decimal

import msgspec
import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.schema import ChoicePredictor, NumberPredictor, Predictor
from clinicalc.cohort.checked import Codes, Column
from clinicalc.development.description import PatientTable
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_people import equations_of
from clinicalc.development.study_ranges import observed

DIGITS = 3


def make_patients(fitted: FittedStudy) -> tuple[PatientTable, ...]:
    """Three for each equation, lowest first; values as they would be typed, in the predictors' own units.

    The middle one is shown once more with each recalibration; where there is no number without one, only so.
    """
    content = fitted.model.content
    plain = [patient for plan in fitted.study.fits for patient in _patients_of(fitted, plan.id)]
    shown = [] if content.recalibration_required else list(plain)
    for recalibration in content.recalibrations:
        for patient in plain[1::3]:
            shown.append(
                msgspec.structs.replace(
                    patient,
                    recalibration=recalibration.id,
                    years=recalibration.years,
                    time=recalibration.time,
                    unit=recalibration.unit,
                )
            )
    return tuple(shown)


def spell_typed(value: float, low: float, high: float) -> str:
    """The value to three digits, or as many as keep it within the ends."""
    for digits in range(DIGITS, 16):
        text = format(Decimal(f"{value:.{digits}g}"), "f")
        if low <= float(text) <= high:
            return text
    return format(Decimal(repr(value)), "f")


def _patients_of(fitted: FittedStudy, fit: str) -> Iterator[PatientTable]:
    plan = next(plan for plan in fitted.study.fits if plan.id == fit)
    people = fitted.people[fit]
    strata = people.stratum[people.complete]
    for place, equation in enumerate(equations_of(fitted.model, plan)):
        own = strata == place
        lp = fitted.predictors[fit]
        low, high = np.quantile(lp[own], (0.25, 0.75))
        for group in (lp <= low, (lp >= low) & (lp <= high), lp >= high):
            rows = people.used[own & group]
            values = {
                predictor.id: text
                for predictor in fitted.model.content.predictors
                if (text := _typical(fitted, predictor, rows))
            }
            values |= {id: answers[0] for id, answers in equation.content.applies_when.items() if len(answers) == 1}
            values |= {exclusion.id: "no" for exclusion in fitted.model.content.exclusions}
            yield PatientTable(values=values)


def _typical(fitted: FittedStudy, predictor: Predictor, rows: Codes) -> str:
    """The median or the commonest answer of these people, or of all where none of them has one; "" where nobody has."""
    column = fitted.cohort.columns[predictor.id]
    known = _known(column[rows])
    known = known if len(known) else _known(column)
    if not len(known):
        return ""
    if isinstance(predictor, NumberPredictor):
        ends = observed(fitted, predictor.id) or (float(known.min()), float(known.max()))
        return spell_typed(float(np.median(known)), *ends)
    common = int(np.bincount(known.astype(np.int64)).argmax())
    return predictor.choices[common].id if isinstance(predictor, ChoicePredictor) else ("no", "yes")[common]


def _known(column: Column) -> NDArray[np.float64]:
    return column[np.isfinite(column)]
