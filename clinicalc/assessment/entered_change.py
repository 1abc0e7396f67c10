"""The changed values of a comparison as they were entered, used or not: what a record holds to ask for it again."""

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import Field, NumberField
from clinicalc.assessment.model import Model
from clinicalc.assessment.numbers import take_number, typed_unused
from clinicalc.assessment.questions import take_answer
from clinicalc.units.quoting import visible


@dataclass(frozen=True, slots=True)
class EnteredChange:
    """One changed value: the text that can be typed again, and what it says in the file's unit or by its answer id.

    `value` is None where the text says no value of the field, `unit` is a UCUM code and None for answers.
    """

    field: str
    typed: str
    value: float | str | None
    unit: str | None


def entered_changes(model: Model, changes: Mapping[str, Typed], today: date) -> tuple[EnteredChange, ...]:
    """Every change that holds any text, in page order, ids that are no field of the model after them."""
    texts = {id: typed for id, typed in changes.items() if typed.text.strip()}
    known = [field.id for field in model.fields if field.id in texts]
    return tuple(_entered(model.by_id.get(id), id, texts[id], today) for id in dict.fromkeys((*known, *texts)))


def _entered(field: Field | None, id: str, typed: Typed, today: date) -> EnteredChange:
    if field is None:
        return EnteredChange(id, visible(typed.text), None, None)
    if isinstance(field, NumberField):
        number, _ = take_number(field, typed, today)
        if number is None:
            return EnteredChange(id, typed_unused(field, typed), None, None)
        return EnteredChange(id, number.typed, number.value, field.unit)
    answer, _ = take_answer(field, typed)
    return EnteredChange(id, visible(typed.text), None if answer is None else answer.option.id, None)
