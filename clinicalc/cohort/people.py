"""Who the lines are about: people who stand twice, and the clusters they belong to."""

from collections.abc import Iterator

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import quoted
from clinicalc.cohort.checked import Codes
from clinicalc.cohort.missing_cells import find_missing
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import RawColumn, RawTable
from clinicalc.cohort.sightings import Lines, name_column, see

_FACTOR = np.uint64(0x9E3779B97F4A7C15)
"""Odd, its digits those of the golden ratio: sums of small numbers times its powers fall far apart."""
_MOST_IDENTICAL = 10


def number_groups(raw: RawColumn) -> Codes:
    """Equal cells get equal numbers from 0, in no order that means anything; −1 where the cell is missing."""
    missing = find_missing(raw)
    groups = np.full(len(raw.numbers), -1, dtype=np.int64)
    plain = np.isfinite(raw.numbers) & ~missing
    _, groups[plain] = np.unique(raw.numbers[plain], return_inverse=True)
    if raw.codes is not None:
        texts = (raw.codes >= 0) & ~missing
        groups[texts] = raw.codes[texts] + 1 + groups.max(initial=-1)
    _, settled = np.unique(groups[groups >= 0], return_inverse=True)
    groups[groups >= 0] = settled
    return groups


def find_duplicates(raw: RawColumn, lines: Lines) -> Iterator[DataProblem]:
    """The stop about people who stand in several lines, and the note about lines that name nobody."""
    groups = number_groups(raw)
    counts = np.bincount(groups[groups >= 0])
    nobody = groups < 0
    if (counts > 1).any():
        again = np.concatenate([counts > 1, [False]])[groups]
        rows = np.flatnonzero(again)
        first = int(rows[0])
        same = see(groups == groups[first], lines)
        people = int((counts > 1).sum())
        who = "1 person stands" if people == 1 else f"{people} people stand"
        said = (
            f"{name_column(raw.name)}: {who} in more than one line, such as {quoted(raw.text(first))} {same.words}. "
            "Everybody counts once: take the doubled lines out, or correct the numbers."
        )
        seen = see(again, lines)
        yield DataProblem(Grade.STOP, raw.name, ProblemCode.DUPLICATE, seen.count, seen.lines, said)
    if nobody.any():
        seen = see(nobody, lines)
        said = f"{name_column(raw.name)} is empty {seen.words}: there it is not known whether somebody stands twice."
        yield DataProblem(Grade.NOTE, raw.name, ProblemCode.MISSING, seen.count, seen.lines, said)


def find_identical(table: RawTable) -> Iterator[DataProblem]:
    """The caution about lines that are alike in every column, where no column says who they are about.

    In a table of few texts many lines are alike by nature; from a tenth of all lines on nothing is said.
    """
    mixed = np.zeros(table.rows, dtype=np.uint64)
    for raw in table.columns:
        # groups instead of cells: lines equal in every column are equal in the sum, and others as good as never
        mixed = mixed * _FACTOR + number_groups(raw).astype(np.uint64)
    _, first, back = np.unique(mixed, return_index=True, return_inverse=True)
    again = first[back] != np.arange(table.rows)
    if again.any() and _MOST_IDENTICAL * again.sum() < table.rows:
        seen = see(again, table.lines)
        original = int(table.lines[first[back][seen.first]])
        said = f"Line {seen.lines[0]} is the same as line {original} in every column"
        said += f", and {seen.count - 1} more repeat another one." if seen.count > 1 else "."
        said += " Perhaps somebody stands twice: take the doubled lines out, or name the column of the person."
        yield DataProblem(Grade.CAUTION, "", ProblemCode.DUPLICATE, seen.count, seen.lines, said)


def find_cluster_problems(raw: RawColumn, clusters: Codes, lines: Lines) -> Iterator[DataProblem]:
    """What is wrong with the clusters: some not stated, or only one."""
    nowhere = clusters < 0
    if nowhere.any():
        seen = see(nowhere, lines)
        said = f"{name_column(raw.name)} is empty {seen.words}: people without a cluster cannot be used. Fill it in."
        yield DataProblem(Grade.STOP, raw.name, ProblemCode.MISSING, seen.count, seen.lines, said)
    elif clusters.max(initial=0) < 1:
        said = f"{name_column(raw.name)}: everybody is in one cluster, which tells nothing of how clusters differ."
        yield DataProblem(Grade.STOP, raw.name, ProblemCode.CONSTANT, 0, (), f"{said} Leave it out, or correct it.")
