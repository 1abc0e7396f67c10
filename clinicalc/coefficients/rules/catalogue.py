"""What a model's names stand for: predictors, derived values, exclusions and the answers they know."""

from collections.abc import Mapping
from dataclasses import dataclass

from clinicalc.coefficients.pointers import point
from clinicalc.coefficients.schema import (
    ChoicePredictor,
    Derived,
    Exclusion,
    ModelContent,
    NumberPredictor,
    Predictor,
    YesNoPredictor,
)

MODEL = "/model"
YES_NO = ("yes", "no")


@dataclass(frozen=True, slots=True)
class Catalogue:
    """A model's names, looked up by id; where an id stands twice, the first counts."""

    predictors: Mapping[str, Predictor]
    derived: Mapping[str, Derived]
    exclusions: Mapping[str, Exclusion]

    def find(self, name: str) -> Predictor | Derived | None:
        """The predictor or derived value of that id."""
        return self.predictors.get(name) or self.derived.get(name)

    def answers_of(self, name: str) -> tuple[str, ...]:
        """The ids of the answers to a choice or yes/no predictor; empty for anything else."""
        match self.predictors.get(name):
            case ChoicePredictor(choices=choices):
                return tuple(choice.id for choice in choices)
            case YesNoPredictor():
                return YES_NO
            case _:
                return ()

    @property
    def values(self) -> tuple[str, ...]:
        """Ids of everything a term can be made of."""
        return (*self.predictors, *self.derived)

    @property
    def questions(self) -> tuple[str, ...]:
        """Ids of the predictors that are answered by choosing."""
        return tuple(name for name, part in self.predictors.items() if not isinstance(part, NumberPredictor))

    @property
    def typed(self) -> tuple[str, ...]:
        """Ids of everything that may be typed about a patient, exclusions not among them."""
        return (*self.predictors, *(name for name, part in self.derived.items() if part.may_be_typed is True))


def list_names(model: ModelContent) -> Catalogue:
    """The catalogue of a model."""
    return Catalogue(
        predictors={part.id: part for part in reversed(model.predictors)},
        derived={part.id: part for part in reversed(model.derived)},
        exclusions={part.id: part for part in reversed(model.exclusions)},
    )


def at(*parts: str | int) -> str:
    """The pointer to a place in the model: at("equations", 0) is "/model/equations/0"."""
    return point(MODEL, *parts)
