"""Times of people as numbers in a unit, or as days between dates; which of them cannot be."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.spans import TIME_UNITS, Span
from clinicalc.cohort.dates import DateCells, take_dates
from clinicalc.cohort.dictionary import OutcomePlan
from clinicalc.cohort.number_cells import take_numbers, tell_texts
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Lines, Mask, name_column, see

_LONGEST_YEARS = 120.0


@dataclass(slots=True, eq=False)
class TakenTimes:
    """When people left and came (`entry` None: all at nought), in `unit`, with the problems found on the way."""

    times: Numbers
    entry: Numbers | None
    unit: str
    problems: list[DataProblem] = field(default_factory=list)


FindColumn = Callable[[str, str], RawColumn | None]
"""The column of a name, or None; the second text is what it is for. What is not there it tells by itself."""


def take_times(plan: OutcomePlan, find: FindColumn, states: Numbers, lines: Lines) -> TakenTimes:
    """The times of a plan. `states` tell in which lines an event would lie before the entry."""
    taken = _take_between_dates(plan, find, lines) if plan.start or plan.end else _take_stated(plan, find, lines)
    taken.problems += [*_judge_times(plan, taken, states, lines), *_judge_unit(plan, taken, lines)]
    if taken.entry is not None:
        name = plan.entry or plan.start
        unknown = np.isnan(taken.entry) & np.isfinite(taken.times)
        if unknown.any():
            seen = see(unknown, lines)
            said = f"{name_column(name)}: there is no entry to the time {seen.words}; they cannot be used."
            taken.problems.append(_problem(Grade.CAUTION, name, ProblemCode.OUTCOME_MISSING, unknown, lines, said))
    return taken


def _take_stated(plan: OutcomePlan, find: FindColumn, lines: Lines) -> TakenTimes:
    taken = TakenTimes(np.full(len(lines), np.nan), None, plan.unit)
    if plan.unit not in TIME_UNITS:
        said = f"{name_column(plan.time)}: time cannot be counted in {quoted(plan.unit)}. Use "
        said += f"{listed([f'{quoted(code)} ({Span(2, code).words[2:]})' for code in TIME_UNITS], 'or')}."
        taken.problems.append(DataProblem(Grade.STOP, plan.time, ProblemCode.UNIT, 0, (), said))
    for name, what in ((plan.time, "the time"), (plan.entry, "the entry")):
        if not name and what == "the entry":
            continue
        raw = find(name, what)
        if raw is None:
            continue
        cells = take_numbers(raw)
        told = tell_texts(raw, cells, lines, "")
        taken.problems += [told] if told else []
        if what == "the time":
            taken.times = cells.numbers
        else:
            taken.entry = cells.numbers
    return taken


def _take_between_dates(plan: OutcomePlan, find: FindColumn, lines: Lines) -> TakenTimes:
    taken = TakenTimes(np.full(len(lines), np.nan), None, "d")
    days: dict[str, Numbers] = {}
    for name, what in ((plan.born, "the birth"), (plan.start, "the start"), (plan.end, "the end")):
        raw = find(name, what) if name or what != "the birth" else None
        if raw is not None:
            cells = take_dates(raw)
            taken.problems += _tell_odd_dates(raw, cells, lines)
            days[what] = cells.days
    for earlier, later in (("the birth", "the start"), ("the start", "the end")):
        if earlier in days and later in days:
            columns = {"the birth": plan.born, "the start": plan.start, "the end": plan.end}
            wrong = days[later] < days[earlier]
            if wrong.any():
                seen = see(wrong, lines)
                said = (
                    f"{name_column(columns[later])} lies before {quoted(columns[earlier])} {seen.words}. "
                    "Perhaps the two were exchanged, or a year was mistyped: correct the dates."
                )
                code = ProblemCode.DATES_OUT_OF_ORDER
                taken.problems.append(_problem(Grade.STOP, columns[later], code, wrong, lines, said))
    if "the end" in days and "the start" in days:
        nought = days.get("the birth", days["the start"])
        taken.times = days["the end"] - nought
        if "the birth" in days:
            taken.entry = days["the start"] - nought
    return taken


def _tell_odd_dates(raw: RawColumn, cells: DateCells, lines: Lines) -> Iterator[DataProblem]:
    if not cells.odd.any():
        return
    seen = see(cells.odd, lines)
    example = quoted(raw.text(seen.first))
    if cells.is_ambiguous:
        said = f"{name_column(raw.name)}: {example} may be day and month or month and day, and no other date tells."
    else:
        said = f"{name_column(raw.name)}: {example} {'is no date' if seen.count == 1 else 'and others are no dates'},"
        said += f" {seen.words}."
    said += " Write every date as year, month and day: 2021-03-05."
    yield _problem(Grade.STOP, raw.name, ProblemCode.NOT_A_DATE, cells.odd, lines, said)


def _judge_times(plan: OutcomePlan, taken: TakenTimes, states: Numbers, lines: Lines) -> Iterator[DataProblem]:
    name = plan.time or plan.end
    disordered = any(problem.code is ProblemCode.DATES_OUT_OF_ORDER for problem in taken.problems)
    if taken.entry is not None:
        early = taken.times <= taken.entry
        if disordered:
            # what lies before the entry was told as dates out of order
            early = taken.times == taken.entry
        happened = states >= 1.0
        yield from _tell_early(name, taken, early & happened, ProblemCode.EVENT_BEFORE_ENTRY, lines)
        yield from _tell_early(name, taken, early & ~happened, ProblemCode.EXIT_BEFORE_ENTRY, lines)
        yield from _tell_before_nought(name, taken, (taken.times <= 0) & (taken.times > taken.entry), lines)
        return
    where = taken.times == 0 if disordered else taken.times <= 0
    if where.any():
        seen = see(where, lines)
        said = (
            f"{name_column(name)}: a time of {quoted(float(taken.times[seen.first]))} cannot be, {seen.words}; times "
            "are above zero. Perhaps it happened on the first day: write down how that is counted (half a day, one "
            "day), or leave these people out and say so."
        )
        yield _problem(Grade.STOP, name, ProblemCode.TIME_NOT_POSITIVE, where, lines, said)


_EARLY_WORDS = {
    ProblemCode.EVENT_BEFORE_ENTRY: "the event lies at or before the entry",
    ProblemCode.EXIT_BEFORE_ENTRY: "people leave at or before their entry",
}


def _tell_early(name: str, taken: TakenTimes, where: Mask, code: ProblemCode, lines: Lines) -> Iterator[DataProblem]:
    if taken.entry is None or not where.any():
        return
    seen = see(where, lines)
    came, left = float(taken.entry[seen.first]), float(taken.times[seen.first])
    said = (
        f"{name_column(name)}: {_EARLY_WORDS[code]} {seen.words}, such as {quoted(left)} after {quoted(came)}. Whoever "
        "is watched for no time cannot be counted: correct the two, or leave these people out and say so."
    )
    yield _problem(Grade.STOP, name, code, where, lines, said)


def _tell_before_nought(name: str, taken: TakenTimes, where: Mask, lines: Lines) -> Iterator[DataProblem]:
    """Whoever came and left before time nought: an event there would count towards every horizon."""
    if not where.any():
        return
    seen = see(where, lines)
    said = (
        f"{name_column(name)}: a time of {quoted(float(taken.times[seen.first]))} cannot be, {seen.words}; times are "
        "above zero, also where people come under observation before it. Time zero is the moment at which the model "
        "will be used: correct the times, or leave these people out and say so."
    )
    yield _problem(Grade.STOP, name, ProblemCode.TIME_NOT_POSITIVE, where, lines, said)


def _judge_unit(plan: OutcomePlan, taken: TakenTimes, lines: Lines) -> Iterator[DataProblem]:
    name = plan.time or plan.end
    year = Span(1.0).days / Span(1.0, taken.unit).days
    where = taken.times > _LONGEST_YEARS * year
    if where.any():
        seen = see(where, lines)
        span = Span(float(taken.times[seen.first]), taken.unit).words
        said = (
            f"{name_column(name)}: {span} is longer than anybody lives, {seen.words}. Perhaps the unit of the time is"
        )
        yield _problem(
            Grade.STOP, name, ProblemCode.UNIT, where, lines, f"{said} another one: correct it, or the cells."
        )


def _problem(gravity: Grade, column: str, code: ProblemCode, where: Mask, lines: Lines, sentence: str) -> DataProblem:
    seen = see(where, lines)
    return DataProblem(gravity, column, code, seen.count, seen.lines, sentence)
