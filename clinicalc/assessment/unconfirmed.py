"""Figures of a file that nobody has compared with the source, and which of them stand behind a result."""

from collections.abc import Mapping
from dataclasses import dataclass

from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.assessment.questions import TakenAnswer
from clinicalc.coefficients.schema import ChoicePredictor, Recalibration, Unconfirmed
from clinicalc.coefficients.spans import Span, span_of

_NOT_BEHIND_A_NUMBER = frozenset(
    {"worked_examples", "decision_points", "population", "documentation", "use", "source", "title", "outcome"}
)


@dataclass(frozen=True, slots=True, eq=False)
class Basis:
    """Everything of a model that one result rests on."""

    equation: ModelEquation
    span: Span
    recalibration: Recalibration | None
    numbers: Mapping[str, TakenNumber]
    answers: Mapping[str, TakenAnswer]


def unconfirmed_behind(model: Model, basis: Basis) -> tuple[Unconfirmed, ...]:
    """The unconfirmed figures that a result rests on, in file order."""
    return tuple(entry for entry in model.content.unconfirmed if _is_behind(model, entry.at.split("/")[1:], basis))


def find_unconfirmed(model: Model, basis: Basis) -> tuple[Finding, ...]:
    """One caution that names every unconfirmed figure a result rests on, or nothing."""
    used = unconfirmed_behind(model, basis)
    reasons = dict.fromkeys(f"{_sentence(entry.why)} Compare with {_sentence(entry.check_against)}" for entry in used)
    if not reasons:
        return ()
    message = f"Figures behind this number were not checked against the source. {' '.join(reasons)}"
    return (Finding(Grade.CAUTION, FindingCode.UNCONFIRMED, "", message),)


def _is_behind(model: Model, path: list[str], basis: Basis) -> bool:
    equation, recalibration = basis.equation, basis.recalibration
    match path:
        case ["equations", place, "horizons", horizon, *_]:
            return int(place) == equation.place and span_of(equation.content.horizons[int(horizon)]) == basis.span
        case ["equations", _, "terms", _, "interval", *_]:
            return False
        case ["equations", place, *_]:
            return int(place) == equation.place
        case ["recalibrations", place, "equations", id, *_]:
            return recalibration is model.content.recalibrations[int(place)] and id == equation.content.id
        case ["recalibrations", place, *_]:
            return recalibration is model.content.recalibrations[int(place)]
        case ["recalibrations"]:
            return recalibration is not None
        case ["predictors", place, "choices", option, *_]:
            predictor = model.content.predictors[int(place)]
            answer = basis.answers.get(predictor.id)
            return (
                isinstance(predictor, ChoicePredictor)
                and answer is not None
                and answer.option.id == predictor.choices[int(option)].id
            )
        case ["predictors", place, "factor"]:
            number = basis.numbers.get(model.content.predictors[int(place)].id)
            return number is not None and number.unit != number.field.unit
        case ["predictors", place, "within_person" | "valid_for" | "loinc", *_]:
            return False
        case [first, *_]:
            return first not in _NOT_BEHIND_A_NUMBER
        case _:
            return True


def _sentence(text: str) -> str:
    return f"{text.rstrip('. ')}."
