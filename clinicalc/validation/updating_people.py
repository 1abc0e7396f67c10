"""The people a model is updated to: who of them belongs to which equation, their terms, what became of them."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.rows import complete_columns, find_equations
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome, Column, Outcome
from clinicalc.covariates.design import design_columns

Array = NDArray[np.float64]
Places = NDArray[np.int64]
_DECIMALS = 9


@dataclass(frozen=True, slots=True, eq=False)
class EquationPeople:
    """The people of one equation with every value: terms x (n, p) and their sum lp = x'b without the baseline, (n,)."""

    equation: ModelEquation
    rows: Places
    x: Array
    lp: Array
    lead: str
    """Before a sentence about it: "women: ", or "" where the model has no other equation."""

    @property
    def id(self) -> str:
        """The id of the equation."""
        return self.equation.content.id

    @property
    def estimated(self) -> tuple[int, ...]:
        """The places of the terms not marked fixed."""
        return tuple(t for t, term in enumerate(self.equation.content.terms) if term.fixed is not True)

    @property
    def term_ids(self) -> tuple[str, ...]:
        """The ids of the terms not marked fixed."""
        return tuple(self.equation.content.terms[place].id for place in self.estimated)

    def lp0(self, span: Span) -> float:
        """The baseline of the equation at a horizon."""
        return self.equation.line_at(span).lp0

    def part(self, rows: Array) -> Array:
        """Of values of all people those of these, (n,)."""
        return np.asarray(rows[self.rows], dtype=np.float64)


def split_people(
    model: Model, people: Mapping[str, Column], outcome: Outcome
) -> tuple[tuple[EquationPeople, ...], tuple[str, ...]]:
    """The people of each equation, and remarks on who was left out."""
    size = len(next(iter(people.values()), np.empty(0)))
    known = _known(outcome)
    place = find_equations(model, people, size)
    found, lacking = list[EquationPeople](), 0
    for equation in model.equations:
        lead = f"{equation.content.id}: " if len(model.equations) > 1 else ""
        rows = np.flatnonzero((place == equation.place) & known)
        own = complete_columns(model, equation, people, rows)
        x = np.empty((len(rows), len(equation.terms)), order="F")
        with np.errstate(all="ignore"):
            for number, column in enumerate(design_columns(equation.terms, own)):
                x[:, number] = column
        lp = sum_terms(x, equation.lines[0].coefficients)
        whole = np.isfinite(lp)
        for column in own.values():
            whole &= np.isfinite(column)
        lacking += int((~whole).sum())
        found.append(EquationPeople(equation, rows[whole], np.asfortranarray(x[whole]), lp[whole], lead))
    return tuple(found), tuple(_remarks(int((~known).sum()), int((known & (place < 0)).sum()), lacking))


def join_leads(parts: Sequence[EquationPeople]) -> str:
    """Before a sentence about some of the equations."""
    return f"{' and '.join(part.id for part in parts)}: " if len(parts) > 1 else parts[0].lead


def sum_terms(x: Array, coefficients: Sequence[float]) -> Array:
    """x'b of each row, one column after the other, (n,)."""
    total = np.zeros(len(x))
    with np.errstate(all="ignore"):
        for place, coefficient in enumerate(coefficients):
            total += x[:, place] * coefficient
    return total


def in_unit(span: Span, unit: str) -> float:
    """The span in the unit of the times; rounded like these, so that 10 years in months are exactly 120."""
    return span.time if span.unit == unit else round(span.days / Span(1.0, unit).days, _DECIMALS)


def _known(outcome: Outcome) -> NDArray[np.bool_]:
    if isinstance(outcome, BinaryOutcome):
        return np.isfinite(outcome.y)
    known = np.isfinite(outcome.times) & np.isfinite(outcome.status)
    return known if outcome.entry is None else known & np.isfinite(outcome.entry)


def _remarks(no_outcome: int, no_equation: int, lacking: int) -> list[str]:
    found = (
        (no_outcome, "whose outcome is not known"),
        (no_equation, "to whom no equation applies"),
        (lacking, "who lack a value that their equation uses"),
    )
    said = [f"{count:,} {'person' if count == 1 else 'people'} {words}" for count, words in found if count]
    return [f"Left out of the update: {one}." for one in said]
