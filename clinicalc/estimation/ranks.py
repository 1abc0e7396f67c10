"""How many of a stretch of a sequence of ranks are below a rank, and how many the same, for many stretches at once.

A wavelet matrix (Claude & Navarro, Inform Syst 2015;47:15): the ranks are parted by their bits from the highest down,
each time keeping their order, with a count of zeros before each place; a stretch is followed down through the bits.
O(n log n) for n ranks and n questions, without a loop over either.
"""

import numpy as np
from numpy.typing import NDArray

Places = NDArray[np.int64]


class RankCounter:
    """Answers for one sequence of ranks (whole numbers from 0, shape (n,))."""

    __slots__ = ("_bits", "_zeros")

    def __init__(self, ranks: NDArray[np.integer]) -> None:
        left = np.asarray(ranks, dtype=np.int64)
        self._bits = int(left.max()).bit_length() if len(left) else 0
        self._zeros: list[Places] = []
        for bit in reversed(range(self._bits)):
            one = ((left >> bit) & 1).astype(bool)
            self._zeros.append(np.append(0, np.cumsum(~one)))
            left = np.concatenate([left[~one], left[one]])

    def count(self, begin: Places, end: Places, rank: NDArray[np.integer]) -> tuple[Places, Places]:
        """In [begin, end) the number of ranks below `rank`, and of those equal to it; all of one shape (m,)."""
        begin, end = np.asarray(begin, dtype=np.int64), np.asarray(end, dtype=np.int64)
        whole = end - begin
        lower = np.zeros(len(rank), dtype=np.int64)
        for level, zeros in enumerate(self._zeros):
            one = ((rank >> (self._bits - 1 - level)) & 1).astype(bool)
            from_zero, to_zero, all_zeros = zeros[begin], zeros[end], zeros[-1]
            lower += np.where(one, to_zero - from_zero, 0)
            begin = np.where(one, all_zeros + begin - from_zero, from_zero)
            end = np.where(one, all_zeros + end - to_zero, to_zero)
        # a rank with more bits than any in the sequence is above them all
        above = (rank >> self._bits) > 0
        return np.where(above, whole, lower), np.where(above, 0, end - begin)
