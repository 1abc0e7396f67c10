"""The data dictionary that the [cohort] tables of a file give, and what is wrong with them."""

from collections.abc import Iterator, Mapping

from msgspec import UNSET, UnsetType

from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.cohort.cohort_tables import (
    BinaryTable,
    Cells,
    CohortTable,
    ColumnTable,
    TimeToEventTable,
    spell_cells,
)
from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, OutcomeKind, OutcomePlan
from clinicalc.errors import Problem


def make_dictionary(cohort: CohortTable, predictors: tuple[str, ...], cluster: str) -> DataDictionary:
    """What the study says of its file; a predictor without a table stands in a column of its own name."""
    entries = [_entry_of(id, cohort.columns.get(id, ColumnTable())) for id in predictors]
    return DataDictionary(
        file=cohort.file,
        person=_text(cohort.person),
        cluster=cluster,
        outcome=_plan_of(cohort.outcome),
        columns=tuple(entries),
    )


def find_cohort_problems(cohort: CohortTable, answers: Mapping[str, tuple[str, ...] | None]) -> Iterator[Problem]:
    """What the [cohort] tables say wrongly. `answers` has the answers of each predictor, None for a number."""
    if isinstance(cohort.outcome, TimeToEventTable):
        yield from _find_time_problems(cohort.outcome)
    yield from _find_double_texts(cohort.outcome)
    for id, column in cohort.columns.items():
        path = point("/cohort/columns", id)
        if id not in answers:
            yield Problem(path, f"there is no predictor {quoted(id)}.{suggest(id, answers)}")
        elif not isinstance(column.levels, UnsetType):
            yield from _find_level_problems(id, column.levels, answers[id], path)
            yield from _find_double_levels(column, column.levels, path)
        if answers.get(id) is not None and not isinstance(column.unit, UnsetType):
            yield Problem(
                point(path, "unit"), f"{quoted(id)} is a question, and its answers have no unit. Leave it out."
            )


def _entry_of(id: str, table: ColumnTable) -> ColumnEntry:
    levels = {} if isinstance(table.levels, UnsetType) else table.levels
    return ColumnEntry(
        column=_text(table.column) or id,
        predictor=id,
        unit=_text(table.unit),
        levels=tuple((answer, text) for answer, cells in levels.items() for text in spell_cells(cells)),
        missing=spell_cells(table.missing),
    )


def _plan_of(table: TimeToEventTable | BinaryTable) -> OutcomePlan:
    if isinstance(table, BinaryTable):
        return OutcomePlan(
            kind=OutcomeKind.BINARY,
            column=table.column,
            event=spell_cells(table.event),
            no_event=spell_cells(table.no_event),
        )
    return OutcomePlan(
        kind=OutcomeKind.TIME_TO_EVENT,
        time=_text(table.time),
        status=table.status,
        entry=_text(table.entry),
        start=_text(table.start),
        end=_text(table.end),
        born=_text(table.born),
        unit=_text(table.unit) or "d",
        event=spell_cells(table.event),
        censored=spell_cells(table.censored),
        competing=spell_cells(table.competing),
    )


def _find_time_problems(table: TimeToEventTable) -> Iterator[Problem]:
    path = "/cohort/outcome"
    has_time, has_dates = table.time is not UNSET, table.start is not UNSET or table.end is not UNSET
    if has_time == has_dates:
        yield Problem(
            path,
            "the time must be given either as a column, time = ..., unit = ..., or by two dates, start = ..., "
            f"end = ...; found {'both' if has_time else 'neither'}.",
        )
    elif has_time and table.unit is UNSET:
        yield Problem(path, 'the unit of the time is missing: unit = "d", "wk", "mo" or "a" (years).')
    elif has_dates:
        if table.start is UNSET or table.end is UNSET:
            yield Problem(path, "both dates are needed, start = ... and end = ....")
        if table.unit is not UNSET and table.unit != "d":
            yield Problem(point(path, "unit"), "between dates time is counted in days. Leave the unit out.")
        if table.entry is not UNSET:
            yield Problem(point(path, "entry"), "with dates people come under observation at start. Leave it out.")
    if table.born is not UNSET:
        yield Problem(
            point(path, "born"),
            "with age as the time a probability depends on the age at which somebody asks, and a coefficient file has "
            "one baseline for everybody. Leave born out: time then counts from start, and age is a predictor.",
        )


def _find_double_texts(table: TimeToEventTable | BinaryTable) -> Iterator[Problem]:
    names = ("event", "no_event") if isinstance(table, BinaryTable) else ("event", "censored", "competing")
    seen: dict[str, str] = {}
    for name in names:
        for text in spell_cells(getattr(table, name)):
            if text in seen:
                yield Problem(
                    point("/cohort/outcome", name),
                    f"{quoted(text)} stands for {quoted(seen[text])} as well. Each text means one thing.",
                )
            seen.setdefault(text, name)


def _find_level_problems(
    id: str, levels: Mapping[str, object], known: tuple[str, ...] | None, path: str
) -> Iterator[Problem]:
    if known is None:
        yield Problem(point(path, "levels"), f"{quoted(id)} is a number and has no answers. Leave the levels out.")
        return
    for answer in levels:
        if answer not in known:
            which = f" It has {listed(map(quoted, known))}." if len(known) > 8 else suggest(answer, known)
            yield Problem(point(path, "levels", answer), f"{quoted(answer)} is no answer to {quoted(id)}.{which}")


def _find_double_levels(column: ColumnTable, levels: Mapping[str, Cells], path: str) -> Iterator[Problem]:
    """Texts that stand for two answers, or for an answer and for a missing value: one of the two would be lost."""
    missing = {text.strip().casefold() for text in spell_cells(column.missing)}
    seen: dict[str, str] = {}
    for answer, cells in levels.items():
        for text in (cell.strip() for cell in spell_cells(cells)):
            other = seen.setdefault(text, answer)
            if other != answer:
                what = f"{quoted(text)} stands for {quoted(other)} as well. Each text means one thing."
                yield Problem(point(path, "levels", answer), what)
            if text.casefold() in missing:
                what = f"{quoted(text)} is named under missing as well. Each text means one thing."
                yield Problem(point(path, "levels", answer), what)


def _text(value: str | UnsetType) -> str:
    return "" if isinstance(value, UnsetType) else value
