"""Restricted cubic splines against R's Hmisc, 3 to 7 knots, on two columns of data."""

from pathlib import Path

import msgspec
import numpy as np
import pytest

from clinicalc.covariates.transforms import restricted_cubic

FOLDER = Path(__file__).parent / "data"


class Basis(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One set of knots and the columns at the points: the value itself, then the K-2 terms."""

    knots: tuple[float, ...]
    basis: tuple[tuple[float, ...], ...]


class Evaluated(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """Figures of `Hmisc::rcspline.eval` with norm=2, which divides by (last knot - first knot)^2."""

    source: str
    points: tuple[float, ...]
    cases: tuple[Basis, ...]


def read(name: str) -> Evaluated:
    return msgspec.json.decode((FOLDER / f"{name}.json").read_bytes(), type=Evaluated)


CASES = [(name, case) for name in ("pbc_bili", "rotterdam_age10") for case in range(len(read(name).cases))]


def test_from_three_to_seven_knots() -> None:
    assert {len(read(name).cases[case].knots) for name, case in CASES} == {3, 4, 5, 6, 7}


@pytest.mark.parametrize(("name", "case"), CASES)
def test_against_r(name: str, case: int) -> None:
    figures = read(name)
    knots, expected = figures.cases[case].knots, np.array(figures.cases[case].basis)
    x = np.array(figures.points)
    assert expected.shape == (x.size, len(knots) - 1)
    assert np.array_equal(expected[:, 0], x)
    for basis in range(1, len(knots) - 1):
        column = expected[:, basis]
        # R's own columns are good to some 1e-14 of their largest value
        assert restricted_cubic(x, knots, basis) == pytest.approx(column, rel=0, abs=1e-12 * column.max())


def test_straight_outside_the_knots() -> None:
    knots = (1.0, 2.0, 4.0, 7.0)
    for basis in (1, 2):
        below = restricted_cubic(np.array([-50.0, 0.0, 1.0]), knots, basis)
        assert list(below) == [0, 0, 0]
        above = restricted_cubic(np.array([7.0, 8.0, 9.0, 107.0]), knots, basis)
        slope = above[1] - above[0]
        assert slope > 0
        assert above == pytest.approx(above[0] + slope * np.array([0, 1, 2, 100]), rel=1e-11)


def test_far_outside_no_digit_is_lost() -> None:
    """The slope beyond the last knot kK is 3 (kK - kj) (kK-1 - kj) / (kK - k1)^2.

    As a difference of cubes the two come out as 4e18 and 0 in place of 1.5e12 and 8.3e11.
    """
    for basis, slope in ((1, 3 * 6 * 3 / 36), (2, 3 * 5 * 2 / 36)):
        assert restricted_cubic(np.array([1e12]), (1.0, 2.0, 4.0, 7.0), basis)[0] == pytest.approx(
            1e12 * slope, rel=1e-11
        )


def test_in_the_unit_of_its_variable() -> None:
    """Knots and values a thousand times larger give a column a thousand times larger."""
    x, knots = np.linspace(0, 10, 41), (1.0, 3.0, 6.0, 9.0)
    larger = restricted_cubic(x * 1000, tuple(1000 * knot for knot in knots), 2)
    assert larger == pytest.approx(1000 * restricted_cubic(x, knots, 2), rel=1e-12, abs=1e-9)
