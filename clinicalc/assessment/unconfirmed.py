"""Figures of a file that nobody has compared with the source, and which of them stand behind a result."""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field

from msgspec import UnsetType

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.assessment.numerals import join_words
from clinicalc.assessment.questions import TakenAnswer
from clinicalc.coefficients.roles import ROLES
from clinicalc.coefficients.schema import ChoicePredictor, Recalibration, ReconstructedBand, Unconfirmed
from clinicalc.coefficients.spans import Span, span_of
from clinicalc.units.unit import unit


@dataclass(frozen=True, slots=True, eq=False)
class Basis:
    """Everything of a model that one result rests on."""

    equation: ModelEquation
    span: Span
    recalibration: Recalibration | None
    numbers: Mapping[str, TakenNumber]
    answers: Mapping[str, TakenAnswer]
    terms: frozenset[int]
    """Places of the terms that are not nought for this patient."""
    worked_out: frozenset[str]
    """Ids of the derived values that were worked out and used."""
    open: frozenset[str] = frozenset()
    """Ids of the values that were not measured: for them the number rests on the described people."""
    compared: Mapping[str, str] = field(default_factory=dict)
    """For places that the file calls unconfirmed, who compared them for the practice."""


def unconfirmed_behind(model: Model, basis: Basis) -> tuple[Unconfirmed, ...]:
    """The unconfirmed figures that a result rests on, in file order."""
    return tuple(entry for entry in model.content.unconfirmed if _is_behind(model, entry.at.split("/")[1:], basis))


def find_unconfirmed(model: Model, basis: Basis) -> tuple[Finding, ...]:
    """One caution that names every unconfirmed figure a result rests on, or nothing.

    Those that somebody compared with their source when the practice approved the file are a note instead.
    """
    behind = unconfirmed_behind(model, basis)
    names = dict.fromkeys(basis.compared[entry.at] for entry in behind if entry.at in basis.compared)
    open = tuple(entry for entry in behind if entry.at not in basis.compared)
    return (*_say_open(open), *_say_compared(list(names)))


def _say_open(entries: tuple[Unconfirmed, ...]) -> Iterator[Finding]:
    by_source: dict[str, list[str]] = {}
    for entry in entries:
        reasons = by_source.setdefault(_sentence(entry.check_against), [])
        if _sentence(entry.why) not in reasons:
            reasons.append(_sentence(entry.why))
    if by_source:
        said = " ".join(f"{' '.join(reasons)} Compare with {source}" for source, reasons in by_source.items())
        message = f"Figures behind this number were not checked against the source. {said}"
        yield Finding(Grade.CAUTION, FindingCode.UNCONFIRMED, "", message)


def _say_compared(names: list[str]) -> Iterator[Finding]:
    if names:
        message = (
            "Figures behind this number that the file itself calls unconfirmed were compared with the source by"
            f" {join_words(names)}, as the practice’s approval says."
        )
        yield Finding(Grade.NOTE, FindingCode.UNCONFIRMED, "", message)


def _is_behind(model: Model, path: list[str], basis: Basis) -> bool:
    """Whether a figure enters the result; a place that no number rests on, such as a worked example, does not."""
    match path:
        case [] | ["equations"] | ["predictors"] | ["derived"]:
            return True
        case ["equations", place, *rest]:
            return int(place) == basis.equation.place and _is_in_equation(rest, basis)
        case ["recalibrations"]:
            return basis.recalibration is not None
        case ["recalibrations", place, *rest]:
            chosen = basis.recalibration is model.content.recalibrations[int(place)]
            return chosen and (rest[:1] != ["equations"] or rest[1:2] in ([], [basis.equation.content.id]))
        case ["predictors", place, *rest]:
            return _is_in_predictor(model, int(place), rest, basis)
        case ["population", *_]:
            return bool(basis.open) and isinstance(basis.equation.content.population, UnsetType)
        case ["derived", place, *_]:
            return model.content.derived[int(place)].id in basis.worked_out
        case _:
            return False


def _is_in_equation(rest: list[str], basis: Basis) -> bool:
    match rest:
        case [] | ["terms"] | ["horizons"] | ["link"] | ["competing_events", *_]:
            return True
        case ["terms", _, "interval", *_]:
            # every coefficient's precision is in every patient's band
            return isinstance(basis.equation.content.uncertainty, ReconstructedBand)
        case ["terms", place, *_]:
            return int(place) in basis.terms
        case ["horizons", place, *figure]:
            used = not figure or figure[0] not in ("survival_interval", "events", "people", "still_at_risk")
            return used and span_of(basis.equation.content.horizons[int(place)]) == basis.span
        case ["population", *_]:
            return bool(basis.open)
        case ["uncertainty", *_]:
            return basis.equation.line_at(basis.span).band is not None
        case _:
            return False


def _is_in_predictor(model: Model, place: int, rest: list[str], basis: Basis) -> bool:
    predictor = model.content.predictors[place]
    match rest:
        case []:
            return predictor.id in basis.numbers or predictor.id in basis.answers
        case ["choices", option, *_] if isinstance(predictor, ChoicePredictor):
            answer = basis.answers.get(predictor.id)
            return answer is not None and answer.option.id == predictor.choices[int(option)].id
        case ["factor"]:
            number = basis.numbers.get(predictor.id)
            return number is not None and (
                number.unit != number.field.unit or _is_converted_further(model, number.field, basis)
            )
        case _:
            return False


def _is_converted_further(model: Model, field: NumberField, basis: Basis) -> bool:
    """Whether a worked-out value takes this one in a unit of another dimension, by way of its factor."""
    own = unit(field.unit).dimension
    for derived in model.derived:
        if derived.id in basis.worked_out and derived.formula is not None:
            inputs = dict(derived.formula.inputs)
            for role in ROLES[derived.formula.equation]:
                named = role.unit not in ("", "sex", "numerator")
                if inputs[role.name] == field.id and named and unit(role.unit).dimension != own:
                    return True
    return False


def _sentence(text: str) -> str:
    return f"{text.rstrip('. ')}."
