"""The changed values of a comparison: read and checked as the patient's own, beside those that stay."""

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, replace
from datetime import date

import numpy as np

from clinicalc.assessment.case import Case
from clinicalc.assessment.changeable import why_unchangeable
from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import is_equal
from clinicalc.assessment.not_measured import says_not_measured
from clinicalc.assessment.numbers import TakenNumber, take_number
from clinicalc.assessment.numerals import join_words, plain
from clinicalc.assessment.questions import TakenAnswer, take_answer
from clinicalc.assessment.relations import check_relations
from clinicalc.assessment.worked_out import check_worked_out
from clinicalc.coefficients.answers import NOT_MEASURED
from clinicalc.covariates.transforms import Column

TakenValue = TakenNumber | TakenAnswer


@dataclass(frozen=True, slots=True)
class TakenChanges:
    """The changed values by field, in page order, without those equal to the patient's own.

    `refused` holds the stops of those that cannot be used; `findings` cautions and notes about the others.
    """

    values: Mapping[str, TakenValue]
    refused: tuple[Finding, ...]
    findings: tuple[Finding, ...]


def take_changes_of(case: Case, changes: Mapping[str, Typed], today: date) -> TakenChanges:
    """The changed values with what is to be said about them and about the values worked out from them."""
    values: dict[str, TakenValue] = {}
    findings: list[Finding] = []
    for id in _in_page_order(case, changes):
        value, said = _take(case, id, changes[id], today)
        if value is not None and is_equal(_number_of(value), _number_of(_own(case, id))):
            continue
        findings += said
        if value is not None:
            values[id] = value
    findings += _contradictions(case, values)
    findings += _about_worked_out(case, values)
    refused = tuple(finding for finding in findings if finding.grade is Grade.STOP)
    rest = (finding for finding in findings if finding.grade is not Grade.STOP)
    return TakenChanges(values, refused, tuple(replace(f, message=f"With changes: {f.message}") for f in rest))


def columns_of(case: Case, values: Mapping[str, TakenValue]) -> dict[str, Column]:
    """For each changed value its column of two rows: the patient's own, and the changed one."""
    return {id: np.array([case.columns[id][0], _number_of(value)]) for id, value in values.items()}


def typed_words(value: TakenValue) -> str:
    """What can be typed again for the same value."""
    return value.typed if isinstance(value, TakenNumber) else value.option.id


def shown_words(value: TakenValue) -> str:
    """The value as people read it."""
    return value.shown if isinstance(value, TakenNumber) else value.option.label


def own_words(case: Case, id: str) -> str:
    """The patient's own value as people read it."""
    return shown_words(_own(case, id))


def _take(case: Case, id: str, typed: Typed, today: date) -> tuple[TakenValue | None, tuple[Finding, ...]]:
    reason = why_unchangeable(case.model, id)
    if reason:
        return None, (_stop(id, reason),)
    field = case.model.by_id[id]
    if id not in case.numbers and id not in case.answers:
        message = f"{field.label} has no value of the patient’s own to compare with. Type that first."
        return None, (_stop(id, message),)
    if says_not_measured(field, typed.text):
        return None, (_stop(id, f"{field.label}: a changed value has to be a value, not “{NOT_MEASURED}”. Type one."),)
    if isinstance(field, NumberField):
        return take_number(field, typed, today)
    return take_answer(field, typed)


def _in_page_order(case: Case, changes: Mapping[str, Typed]) -> list[str]:
    """Ids with any text, fields first; ids that are no field of the model after them."""
    texts = [id for id, typed in changes.items() if typed.text.strip()]
    place = {field.id: number for number, field in enumerate(case.model.fields)}
    return sorted(texts, key=lambda id: place.get(id, len(place)))


def _contradictions(case: Case, values: Mapping[str, TakenValue]) -> Iterator[Finding]:
    """What the cross-checks say with the changes and did not say of the patient's own values."""
    numbers = {id: value for id, value in values.items() if isinstance(value, TakenNumber)}
    before = set(check_relations(case.numbers))
    yield from (finding for finding in check_relations({**case.numbers, **numbers}) if finding not in before)


def _about_worked_out(case: Case, values: Mapping[str, TakenValue]) -> Iterator[Finding]:
    """What follows for values worked out from changed ones; one typed by hand does not follow, which is said."""
    moved = columns_of(case, values)
    for field in case.model.derived:
        sources = [id for id in field.sources if id in values]
        if not sources or field.id not in case.equation.uses:
            continue
        column = case.work_out_with(field, moved)
        typed = case.numbers.get(field.id)
        if typed is not None:
            yield _stays(case, typed, sources, None if column is None else float(column[1]))
        elif column is not None:
            yield from check_worked_out(case.model, field, float(column[1]), None)


def _stays(case: Case, typed: TakenNumber, sources: Iterable[str], anew: float | None) -> Finding:
    labels = [case.model.by_id[id].label for id in sources]
    are = "is" if len(labels) == 1 else "are"
    field = typed.field
    unit = "" if field.unit == "1" else f" {field.spelling}"
    would = "" if anew is None or not np.isfinite(anew) else f"; worked out anew it would be {plain(anew)}{unit}"
    message = (
        f"{field.label} was typed, so it stays {typed.shown} although {join_words(labels)} {are} changed{would}."
        " Empty the typed value to let it follow."
    )
    return Finding(Grade.CAUTION, FindingCode.COMPARISON, field.id, message)


def _own(case: Case, id: str) -> TakenValue:
    return case.numbers[id] if id in case.numbers else case.answers[id]


def _number_of(value: TakenValue) -> float:
    return value.value if isinstance(value, TakenNumber) else value.code


def is_same_number(field: NumberField, own: Typed, changed: Typed, today: date) -> bool:
    """Whether two entries of one field say the same value; False where one of them says none that can be used."""
    one, _ = take_number(field, own, today)
    other, _ = take_number(field, changed, today)
    return one is not None and other is not None and is_equal(one.value, other.value)


def _stop(id: str, message: str) -> Finding:
    return Finding(Grade.STOP, FindingCode.COMPARISON, id, message)
