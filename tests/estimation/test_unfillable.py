"""Columns that nothing can tell."""

import numpy as np

from clinicalc.estimation.chained_equations import ChainColumn
from clinicalc.estimation.unfillable import FoundUnfillable, Unfillable, find_unfillable

RNG = np.random.default_rng(1)
A, B = RNG.normal(size=50), RNG.normal(size=50)


def gaps(values: np.ndarray, known: int = 30) -> ChainColumn:
    return ChainColumn(np.where(np.arange(50) < known, values, np.nan))


def test_a_column_of_which_nobody_has_a_value() -> None:
    found = list(find_unfillable([gaps(A, 0), ChainColumn(B)]))
    assert found == [FoundUnfillable(0, Unfillable.NOBODY, 0)]


def test_a_column_that_is_the_same_for_all_who_have_it() -> None:
    found = list(find_unfillable([ChainColumn(A), gaps(np.full(50, 4.0))]))
    assert found == [FoundUnfillable(1, Unfillable.CONSTANT, 30, value=4.0)]


def test_a_column_that_few_have() -> None:
    found = list(find_unfillable([ChainColumn(A), gaps(B, 3)]))
    assert found == [FoundUnfillable(1, Unfillable.FEW, 3, (0,))]


def test_a_column_that_follows_from_two_of_three_others() -> None:
    other = RNG.normal(size=50)
    found = list(find_unfillable([ChainColumn(A), ChainColumn(B), gaps(3 * A - B + 7), ChainColumn(other)]))
    assert found == [FoundUnfillable(2, Unfillable.FOLLOWS, 30, (0, 1))]


def test_columns_fit_for_filling_in_and_columns_without_gaps_are_not_named() -> None:
    assert not list(find_unfillable([gaps(A), gaps(B, 40), ChainColumn(np.full(50, 2.0))]))


def test_two_columns_that_nobody_has_both_of() -> None:
    first, second = (np.where((np.arange(50) < 25) == early, A + B * early, np.nan) for early in (True, False))
    found = list(find_unfillable([ChainColumn(first), ChainColumn(second), ChainColumn(B)]))
    assert found == [FoundUnfillable(1, Unfillable.APART, 25, (0,))]
    second[0] = 1.0  # one person is enough to be no such case; how well it then goes, the sets tell
    assert not list(find_unfillable([ChainColumn(first), ChainColumn(second), ChainColumn(B)]))
