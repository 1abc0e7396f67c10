"""Rows that are alike in everything that matters to a question, so that it is asked once for each of the patterns."""

from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

from clinicalc.scoring.scored import Places

_LARGEST = 1 << 40
"""Keys beyond are numbered anew: times the codes of one more part they still fit into 64 bits."""


def find_patterns(parts: Iterable[NDArray[np.int64]], size: int) -> tuple[Places, Places]:
    """The first row of each distinct combination of the parts, and for each row the place of its own, (size,).

    `parts` are small codes from 0 upwards, shape (size,) each.
    """
    key = np.zeros(size, dtype=np.int64)
    for part in parts:
        highest = int(part.max(initial=0))
        if not highest:
            continue
        key = key * (highest + 1) + part
        if key.max() >= _LARGEST:
            key = np.unique(key, return_inverse=True)[1].astype(np.int64)
    _, first, at = np.unique(key, return_index=True, return_inverse=True)
    return first, at
