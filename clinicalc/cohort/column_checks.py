"""What is wrong with the values of any predictor, number or question: none, the same for all, or many missing."""

from collections.abc import Iterator

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import quoted
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Lines, Mask, name_column, see, share_words

MANY_MISSING = 0.3
"""From this share on what is missing is a caution."""


def check_values(raw: RawColumn, label: str, values: Numbers, missing: Mask, lines: Lines) -> Iterator[DataProblem]:
    """The problems of one column. `values` are NaN where missing or unusable, `missing` where nothing was measured."""
    count, people = int(missing.sum()), len(values)
    named = name_column(raw.name, label)
    if count == people:
        said = f"{named} holds no value at all. Name the right column, or leave the predictor out."
        yield DataProblem(Grade.STOP, raw.name, ProblemCode.EMPTY, count, (), said)
        return
    known = np.isfinite(values)
    is_all_read = int((~known).sum()) == count
    if is_all_read and values[known].min() == values[known].max():
        row = int(np.flatnonzero(known)[0])
        said = f"{named} is {quoted(raw.text(row))} for everybody for whom it is known, so it tells nobody apart and"
        said += " has no coefficient. Leave it out, or check how its values are read."
        yield DataProblem(Grade.STOP, raw.name, ProblemCode.CONSTANT, int(known.sum()), (), said)
    if count:
        many = count >= MANY_MISSING * people
        said = f"{named}: missing in {count:,} of {people:,} lines ({share_words(count, people)})."
        said += " Complete cases leave so many out, and serve only if they differ in nothing else." * many
        gravity = Grade.CAUTION if many else Grade.NOTE
        yield DataProblem(gravity, raw.name, ProblemCode.MISSING, count, see(missing, lines).lines, said)
