"""The weight in a stretch of a sequence of ranks that is below a rank, and that has the same, for many stretches.

A wavelet matrix (Claude & Navarro, Inform Syst 2015;47:15) as in `ranks`, with running sums of weights at each bit.
"""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Places = NDArray[np.int64]


class WeighedRanks:
    """Answers for one sequence of ranks (whole numbers from 0 to `highest`) with a weight each, both (n,)."""

    __slots__ = ("_bits", "_lighter", "_running", "_zeros")

    def __init__(self, ranks: NDArray[np.integer], weights: Array, highest: int) -> None:
        left, carried = np.asarray(ranks, dtype=np.int32), weights
        self._bits = highest.bit_length()
        self._zeros: list[NDArray[np.int32]] = []
        self._lighter: list[Array] = []
        for bit in reversed(range(self._bits)):
            zero = (left & (1 << bit)) == 0
            zeros, lighter = np.zeros(len(left) + 1, dtype=np.int32), np.zeros(len(left) + 1)
            np.cumsum(zero, dtype=np.int32, out=zeros[1:])
            np.cumsum(np.where(zero, carried, 0.0), out=lighter[1:])
            self._zeros.append(zeros)
            self._lighter.append(lighter)
            parted = np.concatenate([np.flatnonzero(zero), np.flatnonzero(~zero)])
            left, carried = left[parted], carried[parted]
        self._running = np.append(0.0, np.cumsum(carried))

    def sum_first(self, end: Places, rank: NDArray[np.integer]) -> tuple[Array, Array]:
        """The weight of ranks below `rank` among the first `end`, and of those equal to it; all of one shape (m,)."""
        until = np.asarray(end, dtype=np.int32)
        since = np.zeros(len(until), dtype=np.int32)
        rank = np.asarray(rank, dtype=np.int32)
        lower = np.zeros(len(until))
        for level, (zeros, lighter) in enumerate(zip(self._zeros, self._lighter, strict=True)):
            one = np.flatnonzero(rank & (1 << (self._bits - 1 - level)))
            # to the places among the zeros; those whose bit is one are then put among the ones
            ends, begins = zeros[until], zeros[since]
            last, first = until[one], since[one]
            lower[one] += lighter[last] - lighter[first]
            ends[one] = zeros[-1] + last - ends[one]
            begins[one] = zeros[-1] + first - begins[one]
            until, since = ends, begins
        return lower, self._running[until] - self._running[since]
