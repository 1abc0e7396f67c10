"""The people of a fit for its report: their way from the file into the fit, and the table of what they were like."""

from collections.abc import Iterator
from dataclasses import dataclass
from math import floor, log10

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.numerals import EN_DASH, MINUS, NARROW_SPACE, plain
from clinicalc.coefficients.questions import ChoicePredictor, NumberPredictor, YesNoPredictor
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_people import equations_of, predictors_of
from clinicalc.development.study_strata import FitPlan
from clinicalc.report.contents import Block, Column, FlowPart, NotedCell, Prose, Row, Section, Table, TypedCell
from clinicalc.report.flow_figure import Flow, Leaving, Stage
from clinicalc.units.unit import unit as unit_of

Mask = NDArray[np.bool_]

_ABSENT = EN_DASH
_LABEL, _ALL, _GAP = 136.0, 510.0, 6.0
_DIGITS = 3
"""Significant digits of a median and of quartiles, at least."""
_LACKS_SEVERAL = "Somebody who lacks several values is counted under each of them."


@dataclass(frozen=True, slots=True, eq=False)
class _Group:
    """Some of the people to whom a fit applies, by what they are called."""

    name: str
    members: Mask


def tell_people(fitted: FittedStudy, plan: FitPlan, figures: FitFigures, of: str) -> Iterator[Section]:
    """The way into the fit, and table one; `of` names the fit in headings, "" for the only one."""
    yield Section(f"People{of}", (FlowPart(draw_up_flow(fitted, figures)), *_follow_up(figures)), whole=True)
    yield Section(f"What they were like{of}", (_explain(fitted, figures), _table_one(fitted, plan)))


def draw_up_flow(fitted: FittedStudy, figures: FitFigures) -> Flow:
    """From everybody in the file to those the fit is made from."""
    left, imputed = figures.left_out, figures.imputed
    others = fitted.cohort.rows - left.applicable
    elsewhere = Leaving(others, "to whom this equation does not apply, or of whom that is not known")
    reasons, notes = _why_left(fitted, figures)
    what = "nothing missing" if imputed is None else "missing values filled in"
    used = Stage(figures.people, f"used, {what}; {figures.events:,} with the event")
    if not others:
        return Flow((Stage(fitted.cohort.rows, "people in the file", reasons, notes), used))
    applies = Stage(left.applicable, "to whom it applies", reasons, notes)
    return Flow((Stage(fitted.cohort.rows, "people in the file", (elsewhere,)), applies, used))


def _why_left(fitted: FittedStudy, figures: FitFigures) -> tuple[tuple[Leaving, ...], tuple[str, ...]]:
    """What those lack who are left out, and how many they are where one of them lacks several values."""
    labels = {one.id: one.label for one in fitted.model.content.predictors} | {"": "outcome"}
    lacking = figures.left_out.missing if figures.imputed is None else figures.imputed.not_filled
    reasons = tuple(Leaving(count, f"{labels.get(id, id)} missing") for id, count in lacking.items() if count)
    gone = figures.left_out.applicable - figures.people
    if gone == sum(one.count for one in reasons):
        return reasons, ()
    who = "1 person was left out" if gone == 1 else f"{gone:,} people were left out"
    return reasons, (f"{who} in all. {_LACKS_SEVERAL}" if reasons else f"{who} for what the fit needs beside values.",)


def _follow_up(figures: FitFigures) -> Iterator[Block]:
    said = []
    follow = figures.follow_up
    if follow is not None:
        unit = Span(2.0, follow.unit).words.split(" ", 1)[1]
        median = "not reached" if follow.median is None else f"{follow.median:,.6g} {unit}"
        said.append(f"Follow-up: median {median} (reverse Kaplan{EN_DASH}Meier), longest {follow.longest:,.6g} {unit}.")
    if figures.competing:
        counted = "counted as such" if figures.kind == "fine-gray" else "taken as censored"
        who = "1 of the people used" if figures.competing == 1 else f"{figures.competing:,} of the people used"
        said.append(f"Another event came first in {who}, {counted} in the fit.")
    if said:
        yield Prose((" ".join(said),))


def _explain(fitted: FittedStudy, figures: FitFigures) -> Prose:
    said = [
        "Numbers: mean (standard deviation), under it median [quartiles]; answers: people (per cent of those who gave"
        " one). “All” are those to whom it applies."
    ]
    if figures.left_out.applicable > figures.people:
        said.append("“Used” are those of them the fit is made from.")
    if not isinstance(fitted.cohort.outcome, BinaryOutcome):
        said.append("Events are those seen at any time of the follow-up.")
    if figures.imputed is not None:
        said.append("Values that were filled in are not among these figures.")
    return Prose((" ".join(said),), keep=True)


def _table_one(fitted: FittedStudy, plan: FitPlan) -> Table:
    people = fitted.people[plan.id]
    groups = list(_groups(fitted, people.rows, people.complete))
    width = (_ALL - _LABEL) / len(groups) - _GAP
    columns = [Column("", 0.0, _LABEL - _GAP)]
    columns += [Column(one.name, _LABEL + place * (width + _GAP), width) for place, one in enumerate(groups)]
    rows = [Row((TypedCell("People"), *(f"{int(one.members.sum()):,}" for one in groups)), keep=True)]
    equations = equations_of(fitted.model, plan)
    named = predictors_of(fitted.model, equations)
    for predictor in fitted.model.content.predictors:
        if predictor.id in named:
            values = fitted.cohort.columns[predictor.id][people.rows]
            rows += _rows_of(predictor, values, groups)
    return Table(tuple(columns), tuple(rows), small=True)


def _groups(fitted: FittedStudy, rows: NDArray[np.int64], complete: Mask) -> Iterator[_Group]:
    """Everybody, those used, and everybody by outcome."""
    outcome = fitted.cohort.outcome
    status = (outcome.y if isinstance(outcome, BinaryOutcome) else outcome.status)[rows]
    yield _Group("all", np.ones(len(rows), dtype=np.bool_))
    if not complete.all():
        yield _Group("used", complete)
    yield _Group("with the event", status == 1)
    yield _Group("without it", status == 0)
    if (status == 2).any():
        yield _Group("another event", status == 2)


def _rows_of(
    predictor: NumberPredictor | ChoicePredictor | YesNoPredictor, values: NDArray[np.float64], groups: list[_Group]
) -> Iterator[Row]:
    missing = int(np.isnan(values).sum())
    lack = f"{missing:,} missing ({_per_cent(missing, len(values))})" if missing else "none missing"
    if isinstance(predictor, NumberPredictor):
        places = _decimals(_spread(values))
        cells = [_number(values[one.members], places) for one in groups]
        unit = unit_of(predictor.unit).spelling if predictor.unit != "1" else ""
        yield Row((NotedCell(f"{predictor.label}, {unit}".rstrip(", "), (lack,)), *cells))
    elif isinstance(predictor, YesNoPredictor):
        cells = [_answer(values[one.members], 1.0) for one in groups]
        yield Row((NotedCell(predictor.label, (lack,)), *cells))
    else:
        yield Row((NotedCell(predictor.label, (lack,)), *("" for _ in groups)), keep=True)
        for place, choice in enumerate(predictor.choices):
            counted = (_answer(values[one.members], float(place)) for one in groups)
            yield Row((f"   {choice.label}", *counted), keep=place + 1 < len(predictor.choices))


def _number(values: NDArray[np.float64], places: int) -> NotedCell | str:
    known = values[np.isfinite(values)]
    if not len(known):
        return _ABSENT
    sd = f" ({_spread(known):.{places}f})" if len(known) > 1 else ""
    low, middle, high = (plain(float(at), _DIGITS) for at in np.quantile(known, (0.25, 0.5, 0.75)))
    return NotedCell(f"{_fixed(float(known.mean()), places)}{sd}", (f"{middle} [{low} to {high}]",))


def _spread(values: NDArray[np.float64]) -> float:
    """The standard deviation of the known ones, with n - 1; 0 where there is none."""
    known = values[np.isfinite(values)]
    return float(known.std(ddof=1)) if len(known) > 1 else 0.0


def _decimals(spread: float) -> int:
    """Decimals of means by the spread of all: one where that is 1 or more, else as many as show two digits of it."""
    return 1 if spread >= 1 or spread == 0 else min(12, 1 - floor(log10(spread)))


def _fixed(value: float, places: int) -> str:
    return f"{value:.{places}f}".replace("-", MINUS)


def _answer(values: NDArray[np.float64], answer: float) -> str:
    known = int(np.isfinite(values).sum())
    count = int((values == answer).sum())
    return f"{count:,} ({_per_cent(count, known)})" if known else _ABSENT


def _per_cent(count: int, of: int) -> str:
    """Also "0.0 %" and "100.0 %": shares of people that were counted, and no probabilities."""
    return f"{100.0 * count / of:.1f}{NARROW_SPACE}%" if of else _ABSENT
