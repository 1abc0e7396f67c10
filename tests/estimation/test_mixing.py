"""The ratio of Gelman and Rubin, by hand."""

from math import inf

import numpy as np
import pytest

from clinicalc.estimation.mixing import find_mixing


def test_the_later_half_of_two_chains() -> None:
    """1, 3 and 2, 6 of chains of four rounds: W = (2 + 8) / 2, means 2 and 4 with variance 2: sqrt(1/2 + 2/5)."""
    traces = np.array([[9.0, 9.0, 1.0, 3.0], [-9.0, 9.0, 2.0, 6.0]])
    assert find_mixing(traces) == pytest.approx(np.sqrt(0.5 + 0.4), rel=1e-15)


def test_chains_that_stand_still() -> None:
    assert find_mixing(np.full((3, 4), 2.0)) == 1.0
    assert find_mixing(np.array([[1.0] * 4, [2.0] * 4])) == inf


def test_a_single_round_tells_nothing() -> None:
    assert find_mixing(np.array([[1.0], [2.0]])) == inf
