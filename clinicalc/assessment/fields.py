"""The fields of a model: what can be typed for it, in page order."""

from dataclasses import dataclass

from msgspec import UnsetType

from clinicalc.coefficients.schema import (
    ChoicePredictor,
    Derived,
    DerivedEquation,
    Exclusion,
    Limits,
    ModelContent,
    NumberPredictor,
    WithinPerson,
    YesNoPredictor,
)
from clinicalc.units.fitting import possible_in, usual_in
from clinicalc.units.quantity import Quantity, Range, quantity
from clinicalc.units.unit import unit

OPEN: Limits = (None, None)


@dataclass(frozen=True, slots=True)
class Formula:
    """How a derived value is worked out: the named equation and, by role, the fields it takes."""

    equation: DerivedEquation
    inputs: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True)
class NumberField:
    """A value with a unit, measured or worked out. All ranges are in `unit`, the file's own unit."""

    id: str
    label: str
    group: str
    quantity: Quantity
    unit: str
    factor: float | None
    possible: Limits
    usual: Limits
    derivation: Limits
    derivation_stops: bool
    valid_days: int | None
    meaning: str
    formula: Formula | None = None
    may_be_typed: bool = True
    within_person: WithinPerson | None = None
    may_be_missing: bool = False

    @property
    def spelling(self) -> str:
        """The file's unit as it is written on screen and in print."""
        return unit(self.unit).spelling

    @property
    def sources(self) -> tuple[str, ...]:
        """Ids of the values that it is worked out from; () where it can only be typed."""
        return () if self.formula is None else tuple(id for _, id in self.formula.inputs)

    @property
    def is_bare(self) -> bool:
        """Whether it is a bare number, without unit or limits of its own."""
        return self.quantity.id == "number"


@dataclass(frozen=True, slots=True)
class AnswerOption:
    """One answer of a question, with the caution the file attaches to it ("" for none)."""

    id: str
    label: str
    caution: str = ""


@dataclass(frozen=True, slots=True)
class QuestionField:
    """A question with a closed set of answers; `excludes` is the reason when "yes" stops the model."""

    id: str
    label: str
    group: str
    options: tuple[AnswerOption, ...]
    meaning: str = ""
    excludes: str = ""
    may_be_missing: bool = False


Field = NumberField | QuestionField

YES_NO = (AnswerOption("no", "No"), AnswerOption("yes", "Yes"))


def fields_of(model: ModelContent) -> tuple[Field, ...]:
    """Every field in page order: exclusions, then group by group; a derived value stands after its group's others."""
    groups: dict[str, list[Field]] = {}
    home: dict[str, str] = {}
    for predictor in model.predictors:
        home[predictor.id] = predictor.group
        groups.setdefault(predictor.group, []).append(_field_of(predictor))
    for derived in model.derived:
        first_input = next(iter(derived.inputs.values()))
        group = home.get(first_input, "") if isinstance(derived.group, UnsetType) else derived.group
        home[derived.id] = group
        groups.setdefault(group, []).append(_number_field(derived, group))
    return (*(_exclusion_field(e) for e in model.exclusions), *(field for group in groups.values() for field in group))


def _field_of(predictor: NumberPredictor | ChoicePredictor | YesNoPredictor) -> Field:
    if isinstance(predictor, NumberPredictor):
        return _number_field(predictor, predictor.group)
    options: tuple[AnswerOption, ...] = YES_NO
    if isinstance(predictor, ChoicePredictor):
        options = tuple(AnswerOption(c.id, c.label, c.caution or "") for c in predictor.choices)
    return QuestionField(
        predictor.id,
        predictor.label,
        predictor.group,
        options,
        predictor.meaning or "",
        may_be_missing=predictor.may_be_missing is True,
    )


def _exclusion_field(exclusion: Exclusion) -> QuestionField:
    return QuestionField(exclusion.id, exclusion.ask, "", YES_NO, excludes=exclusion.because)


def _number_field(source: NumberPredictor | Derived, group: str) -> NumberField:
    kind = quantity(source.quantity)
    factor = None if isinstance(source.factor, UnsetType) else source.factor
    formula, may_be_typed = None, True
    if isinstance(source, Derived):
        formula = Formula(source.equation, tuple(source.inputs.items()))
        may_be_typed = source.may_be_typed is True
    valid = source.valid_for if isinstance(source, NumberPredictor) else None
    within = source.within_person if isinstance(source, NumberPredictor) else None
    return NumberField(
        id=source.id,
        label=source.label,
        group=group,
        quantity=kind,
        unit=source.unit,
        factor=factor,
        possible=_narrow(source.possible, possible_in(kind, source.unit, factor)),
        usual=_narrow(source.usual, usual_in(kind, source.unit, factor)),
        derivation=OPEN if isinstance(source.derivation, UnsetType) else source.derivation,
        derivation_stops=source.outside_derivation == "stop",
        valid_days=None if isinstance(valid, UnsetType) or valid is None else valid.days,
        meaning=source.meaning or "",
        formula=formula,
        may_be_typed=may_be_typed,
        within_person=None if isinstance(within, UnsetType) else within,
        may_be_missing=isinstance(source, NumberPredictor) and source.may_be_missing is True,
    )


def _narrow(stated: Limits | UnsetType, table: Range | None) -> Limits:
    """The file's range where it states one, each open side filled from the table's."""
    low, high = OPEN if isinstance(stated, UnsetType) else stated
    if table is None:
        return low, high
    return (table.low if low is None else low), (table.high if high is None else high)
