"""Cells matched with the texts that mean something: the answers of a question, the states of an outcome."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from clinicalc.cohort.cells import read_number
from clinicalc.cohort.raw import Numbers, RawColumn, number_text
from clinicalc.cohort.sightings import Mask

_MOST_DISTINCT = 1000
"""A column of more distinct numbers has no answers; beyond that none are counted one by one."""


@dataclass(frozen=True, slots=True, eq=False)
class Matched:
    """`values` has the meaning of each cell, NaN where it is missing or a stranger.

    `strangers` are texts that mean nothing here, with how many cells hold each, the most frequent first; `found`
    the same of all texts; `where` says in which cells the strangers stand.
    """

    values: Numbers
    found: tuple[tuple[str, int], ...]
    strangers: tuple[tuple[str, int], ...]
    where: Mask


def match_cells(raw: RawColumn, meanings: Mapping[str, float], missing: Mask) -> Matched:
    """Each cell by its text: exactly, else without regard to capitals, else as the same number (1, 1.0, 01)."""
    values = np.full(len(raw.numbers), np.nan)
    counts: dict[str, int] = {}
    if raw.codes is not None:
        spoken = (raw.codes >= 0) & ~missing
        read = np.array([_meaning(text, meanings) for text in raw.levels] + [np.nan])
        values = np.where(spoken, read[raw.codes], values)
        tally = np.bincount(raw.codes[spoken], minlength=len(raw.levels))
        counts |= {raw.levels[place]: int(tally[place]) for place in np.flatnonzero(tally)}
    plain = ~np.isnan(raw.numbers) & ~missing
    distinct, tally = np.unique(raw.numbers[plain], return_counts=True)
    for number, count in zip(distinct[:_MOST_DISTINCT], tally[:_MOST_DISTINCT], strict=True):
        text = number_text(float(number))
        counts[text] = counts.get(text, 0) + int(count)
        meaning = _meaning(text, meanings)
        if not np.isnan(meaning):
            values[plain & (raw.numbers == number)] = meaning
    found = tuple(sorted(counts.items(), key=lambda pair: -pair[1]))
    strangers = tuple(pair for pair in found if np.isnan(_meaning(pair[0], meanings)))
    return Matched(values, found, strangers, ~missing & np.isnan(values))


def _meaning(text: str, meanings: Mapping[str, float]) -> float:
    if text in meanings:
        return meanings[text]
    folded = {value for key, value in meanings.items() if key.casefold() == text.casefold()}
    if len(folded) == 1:
        return folded.pop()
    number = read_number(text, exactly=False)
    if number is None:
        return np.nan
    same = {value for key, value in meanings.items() if read_number(key, exactly=False) == number}
    return same.pop() if len(same) == 1 else np.nan
