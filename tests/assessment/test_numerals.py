"""How numbers are written for people."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.assessment.numerals import (
    NARROW_SPACE,
    join_words,
    of_people,
    percent,
    percent_range,
    plain,
    plain_range,
)


@pytest.mark.parametrize(
    ("p", "text"),
    [
        (0.10484, "10.5 %"),
        (0.0, "<0.1 %"),
        (0.0004999, "<0.1 %"),
        (0.0005, "0.1 %"),
        (0.9994, "99.9 %"),
        (0.9996, ">99.9 %"),
        (1.0, ">99.9 %"),
        (0.5, "50.0 %"),
    ],
)
def test_percent(p: float, text: str) -> None:
    assert percent(p).replace(NARROW_SPACE, " ") == text


@given(st.floats(0, 1))
def test_percent_is_never_0_or_100(p: float) -> None:
    number = percent(p).removesuffix(f"{NARROW_SPACE}%").lstrip("<>")
    assert 0 < float(number) < 100


def test_percent_range() -> None:
    assert percent_range(0.093, 0.161).replace(NARROW_SPACE, " ") == "9.3–16.1 %"
    assert percent_range(0.0001, 0.02).replace(NARROW_SPACE, " ") == "<0.1 % to 2.0 %"


@pytest.mark.parametrize(
    ("p", "count"),
    [(0.122, (12, 100)), (0.0042, (4, 1000)), (0.0003, (None, 1000)), (0.9999, (None, 1000)), (0.995, (995, 1000))],
)
def test_of_people(p: float, count: tuple[int | None, int]) -> None:
    assert of_people(p) == count


@pytest.mark.parametrize(
    ("value", "text"), [(1.0344, "1.03"), (800.0, "800"), (20.688, "20.7"), (0.129, "0.129"), (-3.0, "−3"), (0.0, "0")]
)
def test_plain(value: float, text: str) -> None:
    assert plain(value) == text


def test_ranges_and_lists() -> None:
    assert plain_range(30, 74, "years") == "30–74 years"
    assert plain_range(None, 126, "mg/dL") == "up to 126 mg/dL"
    assert plain_range(5, None) == "5 and above"
    assert join_words(["a", "b", "c"]) == "a, b and c"
