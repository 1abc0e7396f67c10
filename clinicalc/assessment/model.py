"""A coefficient file made ready: fields, compiled terms and lines of every equation."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from importlib import import_module
from typing import Any

from clinicalc.assessment.fields import Field, NumberField, QuestionField, fields_of
from clinicalc.coefficients.reader import ReadFile
from clinicalc.coefficients.schema import Equation, ModelContent, Recalibration
from clinicalc.coefficients.spans import Span, span_of
from clinicalc.covariates.design import DesignTerm, compile_terms
from clinicalc.prediction.line import Line, lines_of
from clinicalc.prediction.people import People, people_of


@dataclass(frozen=True, slots=True, eq=False)
class ModelEquation:
    """One equation with its place in the file, its terms, a line for each horizon, and the people it was made from."""

    place: int
    content: Equation
    terms: tuple[DesignTerm, ...]
    lines: tuple[Line, ...]
    people: People | None = None
    uses: frozenset[str] = field(init=False)
    """Ids of the predictors and derived values that its terms are made of."""

    def __post_init__(self) -> None:
        uses = frozenset(factor.of for term in self.terms for factor in term.factors)
        object.__setattr__(self, "uses", uses)

    def line_at(self, span: Span) -> Line:
        """The line for one of the model's horizons."""
        return next(line for line in self.lines if line.span == span)


@dataclass(frozen=True, slots=True, eq=False)
class Model:
    """A coefficient file ready to be used; made by `prepare_model`, proved by `load_model`."""

    name: str
    fingerprint: str
    content: ModelContent
    fields: tuple[Field, ...]
    by_id: Mapping[str, Field]
    equations: tuple[ModelEquation, ...]
    derived: tuple[NumberField, ...] = field(init=False)
    """The values that can be worked out, in file order."""

    def __post_init__(self) -> None:
        found = (self.by_id[derived.id] for derived in self.content.derived)
        object.__setattr__(self, "derived", tuple(field for field in found if isinstance(field, NumberField)))

    @property
    def spans(self) -> tuple[Span, ...]:
        """The horizons, in file order; every equation has the same."""
        return tuple(line.span for line in self.equations[0].lines)

    @property
    def exclusions(self) -> tuple[QuestionField, ...]:
        """The questions that stop the model when answered yes."""
        return tuple(f for f in self.fields if isinstance(f, QuestionField) and f.excludes)

    def score(self, frame: Any, **choices: Any) -> Any:
        """The rows of a pandas frame with their numbers, bands and findings: `scoring.score_frame.score_frame`."""
        # a room above this one, with pandas behind it: loaded by whoever scores a table, and by no start
        return import_module("clinicalc.scoring.score_frame").score_frame(self, frame, **choices)

    def recalibrations_at(self, span: Span) -> tuple[Recalibration, ...]:
        """The recalibrations that the file offers for one horizon."""
        return tuple(r for r in self.content.recalibrations if span_of(r) == span)


def prepare_model(read: ReadFile) -> Model:
    """The model of a file that has passed the rules."""
    content = read.content.model
    fields = fields_of(content)
    return Model(
        name=read.name,
        fingerprint=read.fingerprint,
        content=content,
        fields=fields,
        by_id={field.id: field for field in fields},
        equations=tuple(
            ModelEquation(
                place, equation, compile_terms(content, equation), lines_of(equation), people_of(content, equation)
            )
            for place, equation in enumerate(content.equations)
        ),
    )
