"""Numbers of a row that rarely occur together: `find_rare` for every row at once.

Distances are summed in another order than for one patient, so rows that the last digits could decide are left to it.
"""

from collections.abc import Mapping
from functools import cache

import numpy as np

from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.rarity import FEWEST, RARE, WORTH_NAMING, chi_square_beyond
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.people import People
from clinicalc.scoring.field_texts import FieldColumn
from clinicalc.scoring.finding_sets import FindingSets, SaidCode
from clinicalc.scoring.scored import Places, Rows

_DOUBTFUL = 1e-8


def say_rare(
    people: People, columns: Mapping[str, FieldColumn], rows: Places, sets: FindingSets, said: Places
) -> Places:
    """Adds to what is `said` a note in rows whose numbers together are rare; gives the rows left undecided."""
    described = [id for id in people.numbers if id in columns]
    known = {id: _is_known(people, id, columns[id], rows) for id in described}
    key = np.zeros(len(rows), dtype=np.int64)
    for id in described:
        key = key * 2 + known[id]
    undecided = [np.zeros(0, dtype=np.intp)]
    for pattern in np.flatnonzero(np.bincount(key)) if len(rows) else ():
        ids = [id for place, id in enumerate(reversed(described)) if pattern >> place & 1][::-1]
        if len(ids) >= FEWEST:
            undecided.append(_say_of(people, ids, columns, rows[key == pattern], sets, said))
    return np.concatenate(undecided)


@cache
def critical_distance(degrees: int) -> float:
    """The squared distance beyond which less than `RARE` of the people lie, by halving."""
    low, high = 0.0, 1000.0
    while high - low > 1e-12 * high:
        middle = (low + high) / 2.0
        low, high = (low, middle) if chi_square_beyond(middle, degrees) < RARE else (middle, high)
    return high


def _is_known(people: People, id: str, column: FieldColumn, rows: Places) -> Rows:
    if column.table.usable_everywhere and id not in people.logged:
        return np.ones(len(rows), dtype=np.bool_)
    value = column.value[rows]
    with np.errstate(invalid="ignore"):
        known: Rows = value > 0.0 if id in people.logged else ~np.isnan(value)
    return known


def _say_of(
    people: People, ids: list[str], columns: Mapping[str, FieldColumn], rows: Places, sets: FindingSets, said: Places
) -> Places:
    """The rows in which exactly these numbers are known."""
    carried = _carried(people, ids, columns, rows)
    whole = carried[0].copy()
    for part in carried[1:]:
        whole += part
    limit = critical_distance(len(ids))
    ranged = np.zeros(len(rows), dtype=np.bool_)
    near = np.flatnonzero(~(whole < limit * (1.0 - _DOUBTFUL)))
    for id in ids:
        ranged[near] |= columns[id].table.ranged[columns[id].at[rows[near]]]
    near = near[~ranged[near]]
    parts = np.stack([part[near] for part in carried])
    total = whole[near]
    order = np.argsort(-parts, axis=0, kind="stable")
    first, second = (parts[order[place], np.arange(len(near))] for place in (0, 1))
    both = second >= WORTH_NAMING * total
    named = np.where(both, np.minimum(order[0], order[1]), order[0])
    # a distance that is not finite is in doubt too
    slack = _DOUBTFUL * np.abs(parts).sum(axis=0)
    doubt = ~(total > limit * (1.0 + _DOUBTFUL)) | (np.abs(second - WORTH_NAMING * total) <= slack)
    doubt |= ~both & (first - second <= slack)
    if len(ids) > FEWEST:
        third = parts[order[2], np.arange(len(near))]
        doubt |= both & (second - third <= slack)
    for place, id in enumerate(ids):
        mine = near[~doubt & (named == place)]
        sets.add(said, rows[mine], SaidCode(Grade.NOTE, FindingCode.RARE_COMBINATION, id))
    left: Places = rows[near[doubt]]
    return left


def _carried(people: People, ids: list[str], columns: Mapping[str, FieldColumn], rows: Places) -> list[Column]:
    """What each number carries of the squared distance, shape (rows,) each; as `People.carried_distance`."""
    z = []
    for id in ids:
        place = people.numbers.index(id)
        values = columns[id].value[rows]
        values = np.log(values) if id in people.logged else values
        z.append((values - float(people.mean[place])) / float(people.sd[place]))
    carried = []
    with np.errstate(all="ignore"):
        for own, row in zip(z, people.precision_of(ids), strict=True):
            total = row[0] * z[0]
            for weight, other in zip(row[1:], z[1:], strict=True):
                total = total + weight * other
            carried.append(own * total)
    return carried
