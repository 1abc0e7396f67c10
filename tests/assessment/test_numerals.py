"""How numbers are written for people."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.assessment.numerals import (
    NARROW_SPACE,
    join_words,
    of_people,
    percent,
    percent_beside,
    percent_in_full,
    percent_of,
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


@pytest.mark.parametrize(
    ("p", "decimals", "text"),
    [(0.00049, 2, "0.05 %"), (0.000049, 2, "<0.01 %"), (0.99996, 2, ">99.99 %"), (0.9996, 2, "99.96 %")],
)
def test_percent_with_more_decimals(p: float, decimals: int, text: str) -> None:
    assert percent(p, decimals=decimals).replace(NARROW_SPACE, " ") == text


@pytest.mark.parametrize(
    ("p", "point", "text"),
    [
        (0.0996, 0.1, "9.96 %"),
        (0.09996, 0.1, "9.996 %"),
        (0.1004, 0.1, "10.0 %"),  # on the point counts as above, so its own figure is not the wrong side
        (0.105, 0.1, "10.5 %"),
        (0.10043, 0.1004, "10.04 %"),
        (0.0999999999, 0.1, "<10.0 %"),
        (0.1234444449, 0.1234444441, "12.34444441 %"),
        (0.0003, 0.0005, "0.03 %"),
        (0.0003, 0.0002, "0.03 %"),
        (0.0003, 0.1, "<0.1 %"),
        (0.9997, 0.9995, "99.97 %"),
        (0.9997, 0.9, ">99.9 %"),
        (0.9996, 0.9999, "99.96 %"),
    ],
)
def test_percent_beside_a_point(p: float, point: float, text: str) -> None:
    assert percent_beside(p, None, [(point, p >= point)]).replace(NARROW_SPACE, " ") == text


def test_percent_beside_nothing_is_percent() -> None:
    assert percent_beside(0.0996, None, []) == percent(0.0996)


@given(st.floats(1e-4, 1 - 1e-4), st.floats(-1e-3, 1e-3), st.integers(1, 4))
def test_a_figure_never_shows_the_other_side_of_a_point(p: float, away: float, digits: int) -> None:
    point = round(min(max(p + away, 1e-4), 1 - 1e-4), digits + 2)
    if 0 < point < 1:
        text = percent_beside(p, None, [(point, p >= point)]).removesuffix(f"{NARROW_SPACE}%")
        figure, beside = float(text.lstrip("<>")), float(percent_in_full(point)[:-2])
        assert figure >= beside if p >= point else figure < beside or text == f"<{percent_in_full(point)[:-2]}"


@pytest.mark.parametrize(
    ("p", "text"), [(0.1, "10.0 %"), (0.075, "7.5 %"), (0.0025, "0.25 %"), (0.1234567891, "12.34567891 %")]
)
def test_percent_in_full(p: float, text: str) -> None:
    assert percent_in_full(p).replace(NARROW_SPACE, " ") == text


def test_percent_range() -> None:
    assert percent_range(0.093, 0.161).replace(NARROW_SPACE, " ") == "9.3–16.1 %"
    assert percent_range(0.0001, 0.02).replace(NARROW_SPACE, " ") == "<0.1 % to 2.0 %"
    assert percent_range(0.0996, 0.12, [0.1]).replace(NARROW_SPACE, " ") == "9.96–12.0 %"


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


@pytest.mark.parametrize(("share", "text"), [(0.0, "0.0 %"), (0.06913, "6.9 %"), (0.9996, "100.0 %"), (1.0, "100.0 %")])
def test_a_share_of_people_may_be_none_or_all(share: float, text: str) -> None:
    assert percent_of(share).replace(NARROW_SPACE, " ") == text
