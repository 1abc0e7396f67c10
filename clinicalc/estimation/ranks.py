"""How many of a stretch of a sequence of ranks are below a rank, and how many the same, for many stretches at once.

A wavelet matrix (Claude & Navarro, Inform Syst 2015;47:15): the ranks are parted by their bits from the highest down,
each time keeping their order, with a count of zeros before each place; a stretch is followed down through the bits.
O(n log n) for n ranks and n questions, without a loop over either.
"""

import numpy as np
from numpy.typing import NDArray

Places = NDArray[np.int64]


def rank(values: NDArray[np.float64]) -> Places:
    """The place of each value among the different ones, from 0; those that are the same have one place."""
    return part_values(values)[1]


def part_values(values: NDArray[np.float64]) -> tuple[NDArray[np.float64], Places]:
    """The different values, ascending, and the place of each among them, (n,); values in order are not sorted again."""
    if len(values) and bool((values[1:] >= values[:-1]).all()):  # not for NaN
        new = np.append(True, values[1:] > values[:-1])
        return values[new], np.cumsum(new) - 1
    different, places = np.unique(values, return_inverse=True)
    return different, np.asarray(places, dtype=np.int64)


class RankCounter:
    """Answers for one sequence of ranks (whole numbers from 0, shape (n,))."""

    __slots__ = ("_bits", "_zeros")

    def __init__(self, ranks: NDArray[np.integer]) -> None:
        # half the bytes are found twice as fast; there are never more people than these can count
        left = np.asarray(ranks, dtype=np.int32)
        self._bits = int(left.max()).bit_length() if len(left) else 0
        self._zeros: list[NDArray[np.int32]] = []
        for bit in reversed(range(self._bits)):
            zero = (left & (1 << bit)) == 0
            zeros = np.zeros(len(left) + 1, dtype=np.int32)
            np.cumsum(zero, dtype=np.int32, out=zeros[1:])
            self._zeros.append(zeros)
            left = np.concatenate([left[zero], left[~zero]])

    def count(self, begin: Places, end: Places, rank: NDArray[np.integer]) -> tuple[Places, Places]:
        """In [begin, end) the number of ranks below `rank`, and of those equal to it; all of one shape (m,)."""
        since, until = np.asarray(begin, dtype=np.int32), np.asarray(end, dtype=np.int32)
        rank = np.asarray(rank, dtype=np.int32)
        whole = until - since
        lower = np.zeros(len(rank), dtype=np.int32)
        for level, zeros in enumerate(self._zeros):
            one = np.flatnonzero(rank & (1 << (self._bits - 1 - level)))
            # to the places among the zeros; those whose bit is one are then put among the ones
            begins, ends = zeros[since], zeros[until]
            first, last = begins[one], ends[one]
            lower[one] += last - first
            begins[one] = zeros[-1] + since[one] - first
            ends[one] = zeros[-1] + until[one] - last
            since, until = begins, ends
        # a rank with more bits than any in the sequence is above them all
        above = (rank >> self._bits) > 0
        return np.where(above, whole, lower).astype(np.int64), np.where(above, 0, until - since).astype(np.int64)
