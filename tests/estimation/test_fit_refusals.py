"""What no fit is made from: each refusal with its code and the places of the columns."""

import pickle

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.errors import FitRefused
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.faults import FitFault, refuse_fit
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.logistic import Link, fit_logistic

Array = NDArray[np.float64]

PEOPLE = 400


def draw() -> tuple[Array, Array, Array, Array]:
    """Invented times, events, answers and three columns."""
    rng = np.random.default_rng(11)
    x = rng.normal(size=(PEOPLE, 3))
    times = rng.exponential(size=PEOPLE) * np.exp(-x[:, 0] / 2) + 0.01
    events = (rng.random(PEOPLE) < 0.5).astype(np.float64)
    y = (rng.random(PEOPLE) < 1 / (1 + np.exp(-x[:, 0]))).astype(np.float64)
    return times, events, y, x


def refusals(times: Array, events: Array, y: Array, x: Array) -> list[tuple[str, tuple[int, ...]]]:
    """Code and columns from a Cox fit under both rules, and from logit (with and without weights) and cloglog."""
    found = []
    for ties in Ties:
        with pytest.raises(FitRefused) as refused:
            fit_cox(Cohort(times, events, x), ties=ties)
        found.append((refused.value.code, refused.value.columns))
    return found + binary_refusals(y, x)


def binary_refusals(y: Array, x: Array) -> list[tuple[str, tuple[int, ...]]]:
    found = []
    for link, weights in ((Link.LOGIT, None), (Link.LOGIT, np.full(len(y), 2.0)), (Link.CLOGLOG, None)):
        with pytest.raises(FitRefused) as refused:
            fit_logistic(y, x, link=link, weights=weights)
        found.append((refused.value.code, refused.value.columns))
    return found


def test_a_column_of_one_value() -> None:
    times, events, y, x = draw()
    # 0.1 is not exact: the mean of many differs from it in its last bits
    constant = np.column_stack([x, np.full(PEOPLE, 0.1), np.zeros(PEOPLE)])
    assert set(refusals(times, events, y, constant)) == {(FitFault.CONSTANT, (3, 4))}


def test_columns_that_follow_from_one_another() -> None:
    times, events, y, x = draw()
    sums = np.column_stack([x, 2 * x[:, 0] + x[:, 2] - 3])
    assert set(refusals(times, events, y, sums)) == {(FitFault.COLLINEAR, (0, 2, 3))}


def test_a_group_in_which_nobody_has_the_event() -> None:
    times, events, y, x = draw()
    spared = (np.arange(PEOPLE) % 5 == 0) * 1.0
    events, y = events * (1 - spared), y * (1 - spared)
    assert set(refusals(times, events, y, np.column_stack([x, spared]))) == {(FitFault.SEPARATED, (3,))}


def test_a_rare_group_in_which_nobody_has_the_event() -> None:
    """Seven of 4000: the column's sd is 0.04, its standard error tells and not the steepness."""
    rng = np.random.default_rng(3)
    x = np.column_stack([rng.normal(size=4000), np.arange(4000) < 7])
    y = (rng.random(4000) < 0.3) * (1 - x[:, 1])
    times = rng.exponential(size=4000) + 0.1
    assert set(refusals(times, y, y, x)) == {(FitFault.SEPARATED, (1,))}


def test_a_column_that_is_the_outcome() -> None:
    times, events, y, x = draw()
    noise = np.random.default_rng(4).random(PEOPLE)
    assert set(binary_refusals(y, np.column_stack([x, 3 * y + noise]))) == {(FitFault.SEPARATED, (3,))}
    order = np.argsort(np.argsort(times)) * 1.0
    with pytest.raises(FitRefused) as refused:
        fit_cox(Cohort(times, events, np.column_stack([x, order])))
    assert (refused.value.code, refused.value.columns) == (FitFault.SEPARATED, (3,))


@pytest.mark.parametrize(
    ("outcome", "code"), [(0.0, FitFault.NO_EVENTS), (2.0, FitFault.OUTCOME_NOT_BINARY), (1.0, FitFault.NO_OTHERS)]
)
def test_outcomes_that_are_no_outcome(outcome: float, code: FitFault) -> None:
    times, _, _, x = draw()
    given = np.full(PEOPLE, outcome)
    assert set(binary_refusals(given, x)) == {(code, ())}
    if code is not FitFault.NO_OTHERS:
        assert set(refusals(times, given, given, x)) == {(code, ())}


def test_missing_values_columns_and_people() -> None:
    times, events, y, x = draw()
    holes = x.copy()
    holes[5, 1] = np.nan
    holes[6, 2] = np.inf
    assert set(refusals(times, events, y, holes)) == {(FitFault.NOT_FINITE, (1, 2))}
    assert set(refusals(times, events, y, x[:, :0])) == {(FitFault.NO_COLUMNS, ())}
    assert set(refusals(times[:0], events[:0], y[:0], x[:0])) == {(FitFault.NO_PEOPLE, ())}
    times[3], y[3] = np.nan, np.nan
    assert set(refusals(times, events, y, x)) == {(FitFault.NOT_FINITE, ())}


def test_more_columns_than_events() -> None:
    times, _, _, _ = draw()
    few = (np.arange(PEOPLE) < 4).astype(np.float64)
    x = np.random.default_rng(2).normal(size=(PEOPLE, 5))
    assert set(refusals(times, few, few, x)) == {(FitFault.MORE_COLUMNS_THAN_EVENTS, ())}


def test_times_entries_and_weights() -> None:
    times, events, _, x = draw()
    early = times.copy()
    early[7] = 0
    entry = times / 2
    entry[7] = times[7]
    cases = [
        (Cohort(early, events, x), FitFault.TIME_NOT_POSITIVE),
        (Cohort(times, events, x, entry), FitFault.ENTRY_NOT_BEFORE_TIME),
        (Cohort(times, events, x, weights=events), FitFault.WEIGHT_NOT_POSITIVE),
        (Cohort(times, events, x, np.where(events == 1, np.nan, 0)), FitFault.NOT_FINITE),
    ]
    for cohort, code in cases:
        with pytest.raises(FitRefused) as refused:
            fit_cox(cohort)
        assert refused.value.code == code
    with pytest.raises(FitRefused) as refused:
        fit_logistic(events, x, weights=events)
    assert refused.value.code == FitFault.WEIGHT_NOT_POSITIVE


def test_a_column_that_only_tells_the_strata_apart() -> None:
    times, events, _, x = draw()
    strata = np.arange(PEOPLE) % 2
    with pytest.raises(FitRefused) as refused:
        fit_cox(Cohort(times, events, np.column_stack([x, strata])), strata=strata)
    assert (refused.value.code, refused.value.columns) == (FitFault.CONSTANT, (3,))


def test_every_code_has_its_words_and_survives_copying() -> None:
    for fault in FitFault:
        error = refuse_fit(fault, (0, 4))
        assert str(error).endswith(" (columns 1, 5).")
        copied = pickle.loads(pickle.dumps(error))
        assert (copied.code, copied.columns, str(copied)) == (fault, (0, 4), str(error))
    assert str(refuse_fit(FitFault.SEPARATED, tuple(range(12)))).endswith(
        "(columns 1, 2, 3, 4, 5, 6, 7, 8, 9, 10 and 2 more)."
    )
