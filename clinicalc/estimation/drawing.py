"""Samples of a bootstrap: how often each person is drawn. A draw belongs to its number, whoever works it out."""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


def draw_counts(people: int, seed: int, replicate: int, cluster: Codes | None = None) -> Array:
    """How often each of the people is drawn in a sample as large as they are, with replacement, (people,).

    With `cluster`, a code for each person, as many whole clusters are drawn as there are: people of one cluster are
    alike, and to draw them one by one would make a sample too like its original.
    """
    rng = np.random.default_rng((seed, replicate))
    if cluster is None:
        drawn = rng.integers(0, people, people)
        return np.bincount(drawn, minlength=people).astype(np.float64)
    codes, places = np.unique(cluster, return_inverse=True)
    drawn = rng.integers(0, len(codes), len(codes))
    return np.asarray(np.bincount(drawn, minlength=len(codes))[places], dtype=np.float64)


def repeat_rows(counts: Array) -> NDArray[np.intp]:
    """The places of the people drawn, each as often as he was, (sum of counts,)."""
    return np.repeat(np.arange(len(counts)), counts.astype(np.int64))
