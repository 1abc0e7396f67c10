"""What a new version of a model does to the numbers: on a grid of invented patients, and on both its worked examples.

The grid shows where the versions part, not how often patients there are met: its patients are not weighed.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from msgspec.structs import replace
from numpy.typing import NDArray

from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import recompute
from clinicalc.coefficients.schema import Recalibration, WorkedExample
from clinicalc.coefficients.spans import Span, span_of
from clinicalc.covariates.transforms import Column
from clinicalc.library.grid_answers import GridAnswers, Mask, answer_grid
from clinicalc.library.naming import say_values
from clinicalc.library.standard_patients import Grid, lay_out_grid
from clinicalc.prediction.links import Link

Rows = NDArray[np.int64]
"""Places of patients in a grid."""


@dataclass(frozen=True, slots=True)
class MovedPatient:
    """One patient as typed, by field id, with the probability of either version."""

    typed: tuple[tuple[str, str], ...]
    old: float
    new: float


@dataclass(frozen=True, slots=True)
class Crossed:
    """How many patients change sides of a decision point of either version; on the point counts as above."""

    probability: float
    labels: tuple[str, ...]
    in_old: bool
    in_new: bool
    upwards: int
    downwards: int


@dataclass(frozen=True, slots=True)
class WidthRatio:
    """The band of the new version as a multiple of the old one's, on the link scale, over patients with both bands."""

    least: float
    middle: float
    most: float
    patients: int


@dataclass(frozen=True, slots=True)
class GridEffect:
    """The effect at one horizon with one recalibration (None: without).

    `old` and `new` are the probabilities of every patient for whom both versions give a number, in grid order.
    """

    span: Span
    recalibration: str | None
    patients: int
    whole: int
    both: int
    only_old: int
    only_new: int
    unchanged: int
    largest_rise: MovedPatient | None
    largest_fall: MovedPatient | None
    crossed: tuple[Crossed, ...]
    crossing: int
    """How many patients change sides of at least one of the decision points."""
    width: WidthRatio | None
    old: tuple[float, ...]
    new: tuple[float, ...]


class Whose(StrEnum):
    """Which version states a worked example; part of exported records."""

    OLD = "old"
    NEW = "new"
    BOTH = "both"


@dataclass(frozen=True, slots=True)
class ExampleEffect:
    """A worked example of one version, answered by both; None where there is no number, and why not.

    An exclusion question that the example does not answer counts as answered no, as on the grid. `typed` are its values
    by field id, `within` its horizon in words, "" for none, and `values` all of it in one line.
    """

    stated_by: Whose
    values: str
    typed: tuple[tuple[str, str], ...]
    within: str
    recalibration: str
    stated: float
    old: float | None
    new: float | None
    old_because: str
    new_because: str


@dataclass(frozen=True, slots=True)
class Effect:
    """Everything the change does; `not_compared` says which horizons or recalibrations only one version has.

    `link` is that of the new version, on whose ruler both are drawn.
    """

    grids: tuple[GridEffect, ...]
    examples: tuple[ExampleEffect, ...]
    not_compared: tuple[str, ...]
    link: Link


def find_effect(old: Model, new: Model) -> Effect:
    """The effect of taking `new` in the place of `old`, at every horizon and recalibration that both offer."""
    grid = lay_out_grid(old, new)
    shared = [span for span in old.spans if span in new.spans]
    choices = [(span, id) for span in shared for id in _recalibrations(old, new, span)]
    return Effect(
        grids=tuple(compare_on_grid(old, new, grid, span, id) for span, id in choices),
        examples=tuple(_examples(old, new)),
        not_compared=tuple(_not_compared(old, new)),
        link=new.equations[0].content.link,
    )


def compare_on_grid(old: Model, new: Model, grid: Grid, span: Span, recalibration: str | None) -> GridEffect:
    """The effect at a horizon, with a recalibration or none, that both versions offer."""
    before = answer_grid(old, grid, span, recalibration)
    after = answer_grid(new, grid, span, recalibration)
    both = before.gives & after.gives
    at = np.flatnonzero(both)
    rises = after.probability[at] - before.probability[at]
    points = {point.probability for model in (old, new) for point in model.content.decision_points}
    sides = [(point, before.is_above(point)[at], after.is_above(point)[at]) for point in sorted(points)]
    moved = [was != now for _, was, now in sides]
    return GridEffect(
        span=span,
        recalibration=recalibration,
        patients=len(grid.rows),
        whole=grid.whole,
        both=at.size,
        only_old=int((before.gives & ~after.gives).sum()),
        only_new=int((after.gives & ~before.gives).sum()),
        unchanged=int((rises == 0.0).sum()),
        largest_rise=_patient(grid, before, after, at, rises),
        largest_fall=_patient(grid, before, after, at, -rises),
        crossed=tuple(_crossed(old, new, point, was, now) for point, was, now in sides),
        crossing=int(np.logical_or.reduce(moved).sum()) if moved else 0,
        width=_width_ratio(before, after, at),
        old=tuple(before.probability[at].tolist()),
        new=tuple(after.probability[at].tolist()),
    )


def _patient(grid: Grid, before: GridAnswers, after: GridAnswers, at: Rows, by: Column) -> MovedPatient | None:
    """The patient who moves furthest (the first of several in the grid); None where nobody moves that way."""
    if not at.size or not by.max() > 0.0:
        return None
    row = int(at[int(np.argmax(by))])
    typed = tuple(grid.typed(row).items())
    return MovedPatient(typed, float(before.probability[row]), float(after.probability[row]))


def _crossed(old: Model, new: Model, point: float, was: Mask, now: Mask) -> Crossed:
    mine = [p.label for p in old.content.decision_points if p.probability == point]
    yours = [p.label for p in new.content.decision_points if p.probability == point]
    return Crossed(
        probability=point,
        labels=tuple(dict.fromkeys((*mine, *yours))),
        in_old=bool(mine),
        in_new=bool(yours),
        upwards=int((~was & now).sum()),
        downwards=int((was & ~now).sum()),
    )


def _width_ratio(before: GridAnswers, after: GridAnswers, at: Rows) -> WidthRatio | None:
    """None where one of the two has no band, or where their links differ and widths cannot be compared."""
    links = [np.array([e.content.link == "logit" for e in a.model.equations])[a.equation[at]] for a in (before, after)]
    old, new = before.width[at], after.width[at]
    good = np.isfinite(old) & np.isfinite(new) & (old > 0.0) & (links[0] == links[1])
    if not good.any():
        return None
    ratios = new[good] / old[good]
    return WidthRatio(float(ratios.min()), float(np.median(ratios)), float(ratios.max()), int(good.sum()))


def _recalibrations(old: Model, new: Model, span: Span) -> Iterator[str | None]:
    """None unless one of the two gives no number without, then the ids that both offer at the horizon."""
    if not old.content.recalibration_required and not new.content.recalibration_required:
        yield None
    yield from _shared_ids(old.recalibrations_at(span), new.recalibrations_at(span))


def _shared_ids(old: tuple[Recalibration, ...], new: tuple[Recalibration, ...]) -> list[str]:
    offered = {recalibration.id for recalibration in new}
    return [recalibration.id for recalibration in old if recalibration.id in offered]


def _not_compared(old: Model, new: Model) -> Iterator[str]:
    for mine, yours, whose in ((old, new, "old"), (new, old, "new")):
        for span in mine.spans:
            if span not in yours.spans:
                yield f"Only the {whose} version answers for {span.words}."
                continue
            offered = {recalibration.id for recalibration in yours.recalibrations_at(span)}
            for recalibration in mine.recalibrations_at(span):
                if recalibration.id not in offered:
                    yield f"Only the {whose} version has the recalibration {recalibration.id} for {span.words}."
    if old.content.recalibration_required != new.content.recalibration_required:
        whose = "old" if old.content.recalibration_required else "new"
        yield f"The {whose} version gives no number without a recalibration, the other one does."


def _examples(old: Model, new: Model) -> Iterator[ExampleEffect]:
    """The examples of both; one that both state alike is given once."""
    mine = {(say_values(example), example.probability): example for example in old.content.worked_examples}
    yours = {(say_values(example), example.probability): example for example in new.content.worked_examples}
    for key, example in {**mine, **yours}.items():
        stated_by = Whose.BOTH if key in mine and key in yours else Whose.OLD if key in mine else Whose.NEW
        before, old_because = _answer(old, example)
        after, new_because = _answer(new, example)
        span = span_of(example)
        yield ExampleEffect(
            stated_by=stated_by,
            values=key[0],
            typed=tuple(sorted(example.values.items())),
            within="" if span is None else span.words,
            recalibration=example.recalibration if isinstance(example.recalibration, str) else "",
            stated=example.probability,
            old=before,
            new=after,
            old_because=old_because,
            new_because=new_because,
        )


def _answer(model: Model, example: WorkedExample) -> tuple[float | None, str]:
    """The probability as a patient with these values would get it, or why there is none."""
    excluded = {exclusion.id: "no" for exclusion in model.content.exclusions}
    result = recompute(model, replace(example, values=excluded | example.values))
    if result.estimate is not None:
        return result.estimate.probability, ""
    return None, " ".join(finding.message for finding in (*result.stops, *result.missing))
