"""A grid of invented patients for two versions of a model: from the files' own questions and ranges, always the same.

Every number is low, in the middle and high in the usual range of either version, and inside what the model was made
from where that is stated; every question has each of its answers.
"""

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from math import gcd, prod

from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.limits import clamp, giving_limits, shown_limits
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import MINUS, plain
from clinicalc.coefficients.schema import Limits
from clinicalc.units.reading import Reading, read_value

MOST_PATIENTS = 4096
"""A larger grid is thinned, evenly and without chance."""

_GOLDEN = 0.6180339887498949
"""Steps of this share of the grid fall evenly between each other (Weyl's sequence of the golden ratio)."""


@dataclass(frozen=True, slots=True)
class Entered:
    """A field and the texts that are typed into it, one after the other through the grid."""

    id: str
    texts: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Grid:
    """`rows` has, for each patient, the place of the text of each field; `whole` is the size of the unthinned grid."""

    entered: tuple[Entered, ...]
    rows: tuple[tuple[int, ...], ...]
    whole: int

    def typed(self, row: int) -> dict[str, str]:
        """One patient as typed, by field id."""
        return {entered.id: entered.texts[place] for entered, place in zip(self.entered, self.rows[row], strict=True)}


def lay_out_grid(old: Model, new: Model, most: int = MOST_PATIENTS) -> Grid:
    """The grid for two versions. Exclusion questions are answered no; a patient has what either version asks for."""
    models = (old, new)
    wanted = {id: None for model in (new, old) for id in _typed_fields(model)}
    entered = [
        Entered(id, texts)
        for id in wanted
        if (texts := _texts_for(id, [model for model in models if id in model.by_id]))
    ]
    sizes = [len(field.texts) for field in entered]
    whole = prod(sizes)
    return Grid(tuple(entered), tuple(_place(number, sizes) for number in _thin(whole, most)), whole)


def _typed_fields(model: Model) -> Iterator[str]:
    """The ids that a whole entry for any equation of the model needs, in page order.

    A derived value is typed where it may be, unless everything it is worked out from is asked for in any case.
    """
    uses = {id for equation in model.equations for id in (*equation.uses, *equation.content.applies_when)}
    derived = {field.id: field for field in model.derived}
    direct = {id for id in uses if id not in derived} | {exclusion.id for exclusion in model.exclusions}
    needed = set(direct)
    for id in uses & derived.keys():
        field = derived[id]
        if not field.may_be_typed or direct.issuperset(field.sources):
            needed.update(field.sources)
        else:
            needed.add(id)
    return (field.id for field in model.fields if field.id in needed)


def _texts_for(id: str, models: Sequence[Model]) -> tuple[str, ...]:
    """Every text for one field, each once: what the versions make of it in turn."""
    texts: dict[str, None] = {}
    for model in models:
        texts |= dict.fromkeys(_texts(model, model.by_id[id]))
    return tuple(sorted(texts, key=_by_size)) if isinstance(models[0].by_id[id], NumberField) else tuple(texts)


def _texts(model: Model, field: Field) -> Iterable[str]:
    if isinstance(field, QuestionField):
        return ("no",) if field.excludes else (option.id for option in field.options)
    return (_type(field, value) for value in _low_middle_high(model, field))


def _low_middle_high(model: Model, field: NumberField) -> tuple[float, ...]:
    """Three values in the file's unit, rounded as a person would type them.

    The ends of the usual range, inside the derivation's where the two meet and the values for which there is a number;
    where a side is open, the ends of what stands in the worked examples.
    """
    inside = giving_limits(field)
    ends = _inside(_inside(field.usual, field.derivation), inside)
    low, high = shown_limits(field, ends, field.unit)
    if low is None or high is None:
        examples = _values_in_examples(model, field.id) or [1.0]
        low = clamp(min(examples), inside) if low is None else low
        high = clamp(max(examples), inside) if high is None else high
    middle = (low + high) / 2.0
    whole = field.quantity.id == "age"
    return low, float(round(middle)) if whole else float(f"{middle:.3g}"), high


def _inside(limits: Limits, others: Limits) -> Limits:
    """The limits moved inside others; as they are where the two do not meet."""
    low, high = (None if end is None else clamp(end, others) for end in limits)
    low, high = others[0] if low is None else low, others[1] if high is None else high
    apart = low is not None and high is not None and low >= high
    return limits if apart else (low, high)


def _values_in_examples(model: Model, id: str) -> list[float]:
    readings = (read_value(example.values.get(id, "")) for example in model.content.worked_examples)
    return [reading.number for reading in readings if isinstance(reading, Reading) and reading.unit is None]


def _type(field: NumberField, value: float) -> str:
    digits = plain(value).replace(MINUS, "-")
    return digits if field.unit == "1" else f"{digits} {field.unit}"


def _by_size(text: str) -> tuple[str, float]:
    number, _, unit = text.partition(" ")
    return unit, float(number)


def _thin(whole: int, most: int) -> Iterator[int]:
    """The numbers of the patients in the grid: all of them, or `most` spread evenly."""
    if whole <= most:
        yield from range(whole)
        return
    step = int(whole * _GOLDEN)
    while gcd(step, whole) > 1:
        step += 1
    yield from sorted(number * step % whole for number in range(most))


def _place(number: int, sizes: Sequence[int]) -> tuple[int, ...]:
    places = []
    for size in reversed(sizes):
        number, place = divmod(number, size)
        places.append(place)
    return tuple(reversed(places))
