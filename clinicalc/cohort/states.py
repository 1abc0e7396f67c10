"""The states of an outcome column: which text means the event, and which texts nobody explained."""

from collections.abc import Iterator, Mapping

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.coefficients.pointers import quoted, suggest
from clinicalc.cohort.dictionary import OutcomeKind, OutcomePlan
from clinicalc.cohort.matching import Matched, match_cells
from clinicalc.cohort.missing_cells import find_missing
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Lines, count_words, name_column, see, share_words

_EVENT_WORDS = ("1", "yes", "true")
_NO_EVENT_WORDS = ("0", "no", "false")
_MANY_MISSING = 0.3


def take_states(raw: RawColumn, plan: OutcomePlan, lines: Lines) -> tuple[Numbers, tuple[DataProblem, ...]]:
    """0, 1 for the event, 2 for a competing event, NaN where missing or not explained; and the problems."""
    meanings = _meanings(plan)
    missing = find_missing(raw, (), meanings)
    matched = match_cells(raw, meanings, missing)
    problems = [*_find_strangers(raw.name, plan, meanings, matched, lines)]
    if not matched.strangers:
        problems += _find_absent(raw.name, plan, matched)
    if missing.any() and not missing.all():
        problems.append(tell_missing_outcome(raw.name, int(missing.sum()), len(missing), see(missing, lines).lines))
    return matched.values, tuple(problems)


def tell_missing_outcome(column: str, count: int, of: int, lines: tuple[int, ...]) -> DataProblem:
    """What is said where the outcome of some people is not known."""
    said = f"{name_column(column)} says nothing in {count:,} of {of:,} lines ({share_words(count, of)}): without an"
    said += " outcome these people cannot be used."
    gravity = Grade.CAUTION if count >= _MANY_MISSING * of else Grade.NOTE
    return DataProblem(gravity, column, ProblemCode.OUTCOME_MISSING, count, lines, said)


def _no_event(plan: OutcomePlan) -> tuple[str, ...]:
    return plan.no_event if plan.kind is OutcomeKind.BINARY else plan.censored


def _meanings(plan: OutcomePlan) -> Mapping[str, float]:
    meanings = dict.fromkeys((text.strip() for text in plan.competing), 2.0)
    meanings |= dict.fromkeys((text.strip() for text in plan.event or _EVENT_WORDS), 1.0)
    for text in _no_event(plan) or _NO_EVENT_WORDS:
        meanings.setdefault(text.strip(), 0.0)
    return meanings


def _find_strangers(
    column: str, plan: OutcomePlan, meanings: Mapping[str, float], matched: Matched, lines: Lines
) -> Iterator[DataProblem]:
    if not matched.strangers:
        return
    seen = see(matched.where, lines)
    named, other = name_column(column), "no_event" if plan.kind is OutcomeKind.BINARY else "censored"
    texts = {text for text, _ in matched.found}
    if texts <= {"1", "2"}:
        said = (
            f"{named} holds {count_words(matched.found)}, where 0 and 1 were expected. Which is the event? Say so: "
            f'event = "2" and {other} = "1", or the other way round.'
        )
        yield DataProblem(Grade.STOP, column, ProblemCode.CODED_ONE_TWO, seen.count, seen.lines, said)
        return
    also = "" if plan.kind is OutcomeKind.BINARY else ", competing"
    close = suggest(matched.strangers[0][0], [text for text in meanings if len(text) > 1])
    said = (
        f"{named} holds {count_words(matched.strangers)}, first in line {seen.lines[0]}, and nobody said what that "
        f"means.{close} Put it under event, {other}{also}, or correct the cells."
    )
    yield DataProblem(Grade.STOP, column, ProblemCode.STATUS, seen.count, seen.lines, said)


def _find_absent(column: str, plan: OutcomePlan, matched: Matched) -> Iterator[DataProblem]:
    known = matched.values[np.isfinite(matched.values)]
    named = name_column(column)
    if not len(known):
        said = f"{named} says of nobody what happened. Name the right column in the dictionary."
        yield DataProblem(Grade.STOP, column, ProblemCode.OUTCOME_MISSING, 0, (), said)
    elif not (known == 1.0).any():
        texts = " or ".join(quoted(text) for text in plan.event or _EVENT_WORDS[:1])
        said = f"{named}: nobody had the event ({texts} stands in no line); it holds {count_words(matched.found)}."
        said += " Without events nothing can be worked out: check which text means the event."
        yield DataProblem(Grade.STOP, column, ProblemCode.NO_EVENTS, 0, (), said)
    elif plan.kind is OutcomeKind.BINARY and not (known == 0.0).any():
        said = f"{named}: everybody had the event (100{NARROW_SPACE}%), so that nothing tells people apart."
        yield DataProblem(Grade.STOP, column, ProblemCode.NO_EVENTS, 0, (), f"{said} Check what no event is.")
    elif plan.kind is OutcomeKind.TIME_TO_EVENT and not (known == 0.0).any():
        texts = " or ".join(quoted(text) for text in plan.censored or _NO_EVENT_WORDS[:1])
        said = f"{named}: nobody left without an event ({texts} stands in no line); it holds"
        said += f" {count_words(matched.found)}. That is rare: check which text means what."
        yield DataProblem(Grade.CAUTION, column, ProblemCode.STATUS, 0, (), said)
    if len(known) and plan.competing and not (known == 2.0).any():
        said = f"{named}: no competing event ({', '.join(map(quoted, plan.competing))}) stands in any line."
        yield DataProblem(Grade.NOTE, column, ProblemCode.STATUS, 0, (), said)
