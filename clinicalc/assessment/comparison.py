"""Comparison: the same patient with some values changed, and the band of the difference."""

from collections.abc import Mapping
from dataclasses import dataclass, replace
from datetime import date

import numpy as np

from clinicalc.assessment.case import Case
from clinicalc.assessment.changed_values import (
    TakenChanges,
    columns_of,
    own_words,
    shown_words,
    take_changes_of,
    typed_words,
)
from clinicalc.assessment.entered_change import EnteredChange, entered_changes
from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding
from clinicalc.assessment.no_band import say_no_band
from clinicalc.assessment.numerals import join_words
from clinicalc.assessment.questions import TakenAnswer
from clinicalc.assessment.requirements import possible_equations
from clinicalc.prediction.difference import difference
from clinicalc.prediction.predict import Prediction, predict


@dataclass(frozen=True, slots=True)
class ChangedValue:
    """One value of the comparison beside the patient's own, as people read them."""

    field: str
    label: str
    typed: str
    """As typed, with its unit, so that it can be typed again."""
    own: str
    changed: str


@dataclass(frozen=True, slots=True)
class Side:
    """One of the two numbers that are compared; without a band the limits are None."""

    probability: float
    complement: float
    lower: float | None
    upper: float | None


@dataclass(frozen=True, slots=True)
class Comparison:
    """Two probabilities and their difference (changed minus own), each with its band or the reason for none.

    Without numbers `own` and `changed` are None, `because` says why, and `refused` holds the stops of changed values
    that could not be used; they are no findings of the assessment, whose own number stands. `changes` leaves out what
    was changed to the value it had.
    """

    level: float
    changes: tuple[ChangedValue, ...]
    own: Side | None
    changed: Side | None
    difference: float | None
    difference_lower: float | None
    difference_upper: float | None
    because: str
    """Why there are no numbers, or no band of the difference; "" where everything is there."""
    refused: tuple[Finding, ...] = ()
    """Why a changed value cannot be used."""
    findings: tuple[Finding, ...] = ()
    """Cautions and notes about the changed values, by field; their messages begin with "With changes"."""
    entered: tuple[EnteredChange, ...] = ()
    """Every changed value as it was entered, those included that are not used or no change."""


def compare(case: Case, changes: Mapping[str, Typed], today: date) -> Comparison | None:
    """The comparison; None where no change holds any text.

    A changed value that cannot be used leaves a comparison without numbers. Never raises on what a person typed.
    """
    if not any(typed.text.strip() for typed in changes.values()):
        return None
    return replace(_set_against(case, changes, today), entered=entered_changes(case.model, changes, today))


def _set_against(case: Case, changes: Mapping[str, Typed], today: date) -> Comparison:
    lacking = _not_measured(case)
    if lacking:
        are = "is" if len(lacking) == 1 else "are"
        return _without(case, f"{join_words(lacking)} {are} not measured, and a comparison needs every value.")
    taken = take_changes_of(case, changes, today)
    if taken.refused:
        because = " ".join(dict.fromkeys(finding.message for finding in taken.refused))
        return _without(case, because, taken.refused)
    if not _same_equation(case, taken):
        return _without(case, "Another equation answers for the changed values, and nothing compares the two.")
    return replace(_compared(case, taken), findings=taken.findings)


def _compared(case: Case, taken: TakenChanges) -> Comparison:
    """Both numbers, from two rows that differ in the changed values only; equal rows where nothing differs."""
    moved = columns_of(case, taken.values)
    design = tuple(column if column.size == 2 else np.repeat(column, 2) for column in case.design_with(moved))
    result = predict(case.line, design, adjustment=case.adjustment, level=case.level)
    if not all(
        np.isfinite(part).all() for part in (result.eta, result.eta_lower, result.eta_upper) if part is not None
    ):
        return _without(case, "The model’s equation has no finite result for the changed values.")
    apart = difference(case.line, design, adjustment=case.adjustment, level=case.level)
    return Comparison(
        level=case.level,
        changes=tuple(
            ChangedValue(id, value.field.label, typed_words(value), own_words(case, id), shown_words(value))
            for id, value in taken.values.items()
        ),
        own=_side(result, 0),
        changed=_side(result, 1),
        difference=apart.value,
        difference_lower=apart.lower,
        difference_upper=apart.upper,
        because="" if apart.lower is not None else say_no_band(case.line, case.level, case.adjustment),
    )


def _same_equation(case: Case, taken: TakenChanges) -> bool:
    answers = {id: value for id, value in taken.values.items() if isinstance(value, TakenAnswer)}
    possible = possible_equations(case.model, {**case.answers, **answers})
    return [equation.place for equation in possible] == [case.equation.place]


def _side(result: Prediction, row: int) -> Side:
    return Side(
        probability=float(result.probability[row]),
        complement=float(result.complement[row]),
        lower=None if result.lower is None else float(result.lower[row]),
        upper=None if result.upper is None else float(result.upper[row]),
    )


def _without(case: Case, because: str, refused: tuple[Finding, ...] = ()) -> Comparison:
    return Comparison(case.level, (), None, None, None, None, None, because, refused)


def _not_measured(case: Case) -> list[str]:
    """Labels of the values that the equation takes and that nobody measured, in page order."""
    there = case.columns.keys() | case.worked_out.keys()
    lacking: set[str] = set()
    for id in case.equation.uses - there:
        field = case.model.by_id[id]
        sources = field.sources if isinstance(field, NumberField) else ()
        lacking |= {*sources} - there if sources else {id}
    return [field.label for field in case.model.fields if field.id in lacking]
