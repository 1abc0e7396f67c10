"""From the names in a validation file and the table of people to a plan: groups and exclusions, row by row."""

from collections.abc import Iterator

import numpy as np

from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.model import Model
from clinicalc.coefficients.pointers import quoted, suggest
from clinicalc.cohort.checked import CheckedCohort
from clinicalc.cohort.matching import match_cells
from clinicalc.cohort.missing_cells import find_missing
from clinicalc.cohort.people import number_groups
from clinicalc.cohort.raw import RawColumn, RawTable
from clinicalc.errors import Problem, ValidationRefused
from clinicalc.validation.plan import Codes, ExcludedPeople, NamedGroup, ValidationPlan, group_of_question
from clinicalc.validation.settled import ExclusionColumn, GroupName, SettledValidation

MOST_GROUPS = 50
"""A column of more different answers is none to look at people apart by."""


def make_plan(settled: SettledValidation, table: RawTable, cohort: CheckedCohort) -> ValidationPlan:
    """The plan, with groups and exclusions taken from the table; `cohort` is the same people checked.

    Raises ValidationRefused where a group or an exclusion names neither a predictor nor a column, or a column with too
    many different answers.
    """
    problems = list(_find_problems(settled, table))
    if problems:
        raise ValidationRefused(settled.name, tuple(problems))
    return ValidationPlan(
        cohort=settled.cohort,
        spans=settled.spans,
        recalibration=settled.recalibration,
        groups=tuple(_take_group(group, settled.model, table, cohort) for group in settled.groups),
        exclusions=tuple(_take_exclusion(one, settled.model, table) for one in settled.exclusions),
        points=settled.points,
        resamples=settled.resamples,
        seed=settled.seed,
    )


def _find_problems(settled: SettledValidation, table: RawTable) -> Iterator[Problem]:
    for place, group in enumerate(settled.groups):
        if group.is_predictor:
            continue
        raw = table.find(group.column)
        if raw is None:
            questions = [one.id for one in settled.model.fields if isinstance(one, QuestionField) and not one.excludes]
            close = suggest(group.column, (*questions, *table.names))
            said = f"{quoted(group.column)} is neither a question of the model nor a column of {table.file}.{close}"
            yield Problem(f"groups {place + 1}", said)
            continue
        answers = int(number_groups(raw).max(initial=-1)) + 1
        if answers > MOST_GROUPS:
            said = f"the column {quoted(group.column)} has {answers:,} different answers, and groups are {MOST_GROUPS}"
            yield Problem(f"groups {place + 1}", f"{said} at most. Name a column with fewer, such as one of bands.")
    for exclusion in settled.exclusions:
        if table.find(exclusion.column) is None:
            close = suggest(exclusion.column, table.names)
            said = f"the column {quoted(exclusion.column)} is not in {table.file}.{close}"
            yield Problem(f"cohort.exclusions.{exclusion.id}", said)


def _take_exclusion(exclusion: ExclusionColumn, model: Model, table: RawTable) -> ExcludedPeople:
    raw = table.find(exclusion.column)
    assert raw is not None
    meanings = {text.strip(): 1.0 for text in exclusion.yes}
    missing = find_missing(raw, (), meanings)
    return ExcludedPeople(
        exclusion.id,
        model.by_id[exclusion.id].label,
        match_cells(raw, meanings, missing).values == 1.0,
        column=exclusion.column,
        means_yes=exclusion.yes,
        texts=_take_levels(raw)[1],
        empty=int(missing.sum()),
    )


def _take_group(group: GroupName, model: Model, table: RawTable, cohort: CheckedCohort) -> NamedGroup:
    if group.is_predictor:
        field = model.by_id[group.name]
        assert isinstance(field, QuestionField)
        return group_of_question(field, cohort.columns[group.name])
    raw = table.find(group.column)
    assert raw is not None
    codes, levels = _take_levels(raw)
    return NamedGroup(group.name, group.name, codes, levels)


def _take_levels(raw: RawColumn) -> tuple[Codes, tuple[str, ...]]:
    """The cells by their texts: numbers first, in their order, then words."""
    groups = number_groups(raw)
    count = int(groups.max(initial=-1)) + 1
    first = [int(np.flatnonzero(groups == code)[0]) for code in range(count)]
    numbers = [float(raw.numbers[row]) for row in first]
    order = sorted(
        range(count),
        key=lambda at: (np.isnan(numbers[at]), 0.0 if np.isnan(numbers[at]) else numbers[at], raw.text(first[at])),
    )
    place = np.empty(count + 1, dtype=np.int64)
    place[[*order, count]] = [*range(count), -1]
    return place[groups], tuple(raw.text(first[code]) for code in order)
