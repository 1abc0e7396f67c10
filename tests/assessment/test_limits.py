"""Columns against limits, as each value is judged alone."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from clinicalc.assessment.limits import is_within, within_column

LIMITS = st.tuples(st.none() | st.floats(-1e6, 1e6), st.none() | st.floats(-1e6, 1e6))


@settings(deadline=None)
@given(LIMITS, st.lists(st.floats(allow_nan=True)), st.sampled_from([0.0, 1e-12, -1e-12, 4e-10, 6e-9, -6e-9, 1e-7]))
def test_a_column_lies_within_limits_as_each_value_does(
    limits: tuple[float | None, float | None], values: list[float], miss: float
) -> None:
    values = [*values, *(end * (1 + miss) for end in limits if end is not None), float("nan"), float("inf")]
    expected = [is_within(value, limits) for value in values]
    assert within_column(np.array(values), limits).tolist() == expected


@pytest.mark.parametrize(
    ("value", "inside"), [(130.0, True), (130.0000000001, True), (130.001, False), (float("nan"), False)]
)
def test_limits_are_met_to_nine_digits(value: float, inside: bool) -> None:
    assert within_column(np.array([value]), (45.0, 130.0))[0] == inside
