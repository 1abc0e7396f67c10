"""Groups of people that are looked at one by one: named ones, and the answers to the model's own questions."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.model import Model
from clinicalc.validation.evidence import Evidence, Fitted
from clinicalc.validation.people import UsedPeople
from clinicalc.validation.plan import NamedGroup, group_of_question

Array = NDArray[np.float64]

LEAST_INFORMATION = 5.0
"""Expected events, or the like, on either side of a group: with fewer nothing can be said of it."""


@dataclass(frozen=True, slots=True, eq=False)
class Level:
    """One answer of one question; `rows` (n,) who gave it, 1 or 0. `pair` says that there is only one other."""

    group: NamedGroup
    place: int
    rows: Array
    pair: bool

    @property
    def key(self) -> tuple[str, int]:
        """What tells it from others."""
        return self.group.by, self.place

    @property
    def name(self) -> str:
        """The answer."""
        return self.group.levels[self.place]


def gather_groups(model: Model, people: UsedPeople, named: Sequence[NamedGroup]) -> tuple[NamedGroup, ...]:
    """The named groups, `codes` of the people used only, and the questions of the model that are not among them."""
    found = [NamedGroup(one.by, one.label, one.codes[people.rows], one.levels) for one in named]
    taken = {one.by for one in found}
    for field in model.fields:
        values = people.columns.get(field.id)
        if isinstance(field, QuestionField) and values is not None and field.id not in taken:
            found.append(group_of_question(field, values))
    return tuple(found)


def find_levels(groups: Sequence[NamedGroup], weights: Array) -> Iterator[Level]:
    """The answers of which something can be said; `weights` (n,) is the information of each person.

    A group that holds the same people as one before it is left out.
    """
    seen = set[bytes]()
    whole = float(weights.sum())
    for group in groups:
        count = len(group.levels)
        sums = np.bincount(np.where(group.codes < 0, count, group.codes), weights=weights, minlength=count + 1)
        enough = [place for place in range(count) if min(sums[place], whole - sums[place]) >= LEAST_INFORMATION]
        pair = len(enough) == 2 and float(sums[enough].sum()) >= whole - 1e-9 * whole
        for place in enough:
            rows = group.codes == place
            packed = np.packbits(rows).tobytes()
            if packed not in seen:
                seen.add(packed)
                yield Level(group, place, rows.astype(np.float64), pair)


def score_level(evidence: Evidence, fitted: Fitted, columns: tuple[Array, ...], level: Level) -> tuple[float, float]:
    """The score test of a level beside what is fitted, as chi-square on 1, and the information left about it."""
    expected = evidence.expect(fitted.eta)
    rows = level.rows == 1.0
    weights = evidence.weigh(expected)[rows]
    score = float((evidence.happened[rows] - expected[rows]).sum())
    crossed = np.array([float((weights * column[rows]).sum()) for column in columns])
    left = float(weights.sum()) - float(crossed @ fitted.covariance @ crossed)
    return (score * score / left if left > 0.0 else 0.0), max(left, 0.0)


def score_column(evidence: Evidence, fitted: Fitted, columns: tuple[Array, ...], values: Array) -> tuple[float, float]:
    """The score test of a column of numbers beside what is fitted, as chi-square on 1, and the information left."""
    expected = evidence.expect(fitted.eta)
    weights = evidence.weigh(expected)
    # about its middle, where its information is what it tells and not a difference of large sums
    centred = values - float(values.mean())
    score = float((centred * (evidence.happened - expected)).sum())
    crossed = np.array([float((weights * centred * column).sum()) for column in columns])
    left = float((weights * centred * centred).sum()) - float(crossed @ fitted.covariance @ crossed)
    return (score * score / left if left > 0.0 else 0.0), max(left, 0.0)
