"""Open values given known ones, against Bayes' theorem worked out by adaptive quadrature (scipy) and by counting."""

from collections.abc import Mapping
from math import exp, log, prod

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.stats import multivariate_normal

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Array
from clinicalc.prediction.open_values import Cloud, spread_open
from clinicalc.prediction.people import AnswerRow, People

CORRELATION = np.array([[1.0, 0.4, -0.3], [0.4, 1.0, 0.2], [-0.3, 0.2, 1.0]])


def people(answers: tuple[AnswerRow, ...] = ()) -> People:
    """Three numbers, the second described by its logarithm, and a choice of three."""
    return People(
        source="invented",
        numbers=("a", "b", "c"),
        logged=frozenset({"b"}),
        mean=np.array([55.0, 4.8, 1.3]),
        sd=np.array([12.0, 0.15, 0.35]),
        correlation=CORRELATION,
        precision=tuple(tuple(row) for row in np.linalg.inv(CORRELATION).tolist()),
        answers=answers,
        shares={"kind": ((0.0, 0.5), (1.0, 0.3), (2.0, 0.2))},
    )


ROWS = (
    AnswerRow("x", -6.0, (("a", 0.05), ("b", 0.5))),
    AnswerRow("y", 2.5, (("a", -0.02), ("c", -2.0), ("x", 1.5))),
)


def nowhere(id: str, before: Mapping[str, Column], low: Column, high: Column) -> Array:
    return np.empty((low.size, 0))


def spread(people: People, *open: str, numbers: dict[str, float], answers: dict[str, float] | None = None) -> Cloud:
    cloud = spread_open(people, open, numbers, answers or {}, nowhere)
    assert cloud is not None
    assert cloud.weights.sum() == pytest.approx(1.0, abs=1e-14)
    return cloud


def expit(x: float) -> float:
    return 1 / (1 + exp(-x))


def density(a: float, log_b: float, c: float) -> float:
    sd = np.array([12.0, 0.15, 0.35])
    at = np.array([a, log_b, c]) - np.array([55.0, 4.8, 1.3])
    return float(multivariate_normal(cov=CORRELATION * np.outer(sd, sd)).pdf(at))


def likely(a: float, log_b: float, c: float, x: float, y: float) -> float:
    """P(x, y | numbers) by the two rows."""
    p = expit(-6.0 + 0.05 * a + 0.5 * log_b)
    q = expit(2.5 - 0.02 * a - 2.0 * c + 1.5 * x)
    return prod(chance if said else 1 - chance for chance, said in ((p, x), (q, y)))


def test_a_logged_number_has_the_moments_of_a_log_normal() -> None:
    cloud = spread(people(), "b", numbers={})
    mean = float((cloud.weights * cloud.columns["b"]).sum())
    assert mean == pytest.approx(exp(4.8 + 0.15**2 / 2), rel=1e-13)


def test_two_numbers_have_their_joint_moments() -> None:
    cloud = spread(people(), "a", "c", numbers={"b": 130.0})
    known = (log(130.0) - 4.8) / 0.15
    a, c = ((cloud.columns[id] - m) / s for id, m, s in (("a", 55.0, 12.0), ("c", 1.3, 0.35)))
    w = cloud.weights
    expected = [float((w * v).sum()) for v in (a, c)]
    # regression on one standardised value: mean r z, covariance R - r r'
    assert expected == pytest.approx([0.4 * known, 0.2 * known], abs=1e-12)
    second = [float((w * one * other).sum()) for one, other in ((a, a), (c, c), (a, c))]
    wanted = [1 - 0.16 + (0.4 * known) ** 2, 1 - 0.04 + (0.2 * known) ** 2, -0.3 - 0.08 + 0.08 * known**2]
    assert second == pytest.approx(wanted, abs=1e-11)


def test_known_answers_say_something_of_an_open_number() -> None:
    """E[a | b, c, x = yes, y = no], a entering both rows."""
    cloud = spread(people(ROWS), "a", numbers={"b": 110.0, "c": 1.1}, answers={"x": 1.0, "y": 0.0})

    def weigh(a: float) -> float:
        return density(a, log(110.0), 1.1) * likely(a, log(110.0), 1.1, 1, 0)

    total = quad(weigh, -60, 170, epsabs=0, limit=200, points=[55])[0]
    wanted = quad(lambda a: a * weigh(a), -60, 170, epsabs=0, limit=200, points=[55])[0] / total
    assert float((cloud.weights * cloud.columns["a"]).sum()) == pytest.approx(wanted, rel=1e-9)


def test_open_answer_given_a_later_one() -> None:
    """P(x | a, b, c, y = yes): y was asked after x and depends on it."""
    cloud = spread(people(ROWS), "x", numbers={"a": 60.0, "b": 130.0, "c": 1.0}, answers={"y": 1.0})
    no, yes = (likely(60.0, log(130.0), 1.0, x, 1) for x in (0, 1))
    assert float((cloud.weights * cloud.columns["x"]).sum()) == pytest.approx(yes / (no + yes), rel=1e-13)
    assert cloud.combinations == ({"x": 0.0}, {"x": 1.0})


def test_open_number_and_open_answer_together() -> None:
    cloud = spread(people(ROWS), "c", "y", numbers={"a": 50.0, "b": 125.0}, answers={"x": 0.0})

    def weigh(c: float, y: float) -> float:
        return density(50.0, log(125.0), c) * likely(50.0, log(125.0), c, 0, y)

    def over(power: int, y: float) -> float:
        return float(quad(lambda c: c**power * weigh(c, y), -2, 5, epsabs=0, limit=200)[0])

    total = over(0, 0) + over(0, 1)
    yes = cloud.columns["y"] == 1.0
    assert float(cloud.weights[yes].sum()) == pytest.approx(over(0, 1) / total, rel=1e-10)
    assert float((cloud.weights * cloud.columns["c"])[yes].sum()) == pytest.approx(over(1, 1) / total, rel=1e-10)


def test_two_open_answers_are_four_combinations() -> None:
    cloud = spread(people(ROWS), "x", "y", numbers={"a": 60.0, "b": 130.0, "c": 1.0})
    assert len(cloud.combinations) == 4
    for place, codes in enumerate(cloud.combinations):
        wanted = likely(60.0, log(130.0), 1.0, codes["x"], codes["y"])
        assert float(cloud.weights[cloud.combination == place].sum()) == pytest.approx(wanted, rel=1e-12)


def test_a_choice_has_its_shares_whatever_is_known() -> None:
    cloud = spread(people(ROWS), "kind", numbers={"a": 60.0, "b": 130.0, "c": 1.0}, answers={"x": 1.0})
    shares = [float(cloud.weights[cloud.columns["kind"] == code].sum()) for code in range(3)]
    assert shares == pytest.approx([0.5, 0.3, 0.2], abs=1e-14)


def test_what_was_not_asked_is_averaged_over_as_well() -> None:
    """y depends on x, which nobody knows, and x on b, which nobody knows either: both are averaged over."""
    cloud = spread(people(ROWS), "y", numbers={"a": 60.0, "c": 1.0})

    def weigh(log_b: float, y: float) -> float:
        return density(60.0, log_b, 1.0) * sum(likely(60.0, log_b, 1.0, x, y) for x in (0, 1))

    yes, no = (quad(lambda b, y=y: weigh(b, y), 3.3, 6.3, epsabs=0, limit=200)[0] for y in (1, 0))
    assert float((cloud.weights * cloud.columns["y"]).sum()) == pytest.approx(yes / (yes + no), rel=1e-10)
    assert [dict(codes) for codes in cloud.combinations] == [{"y": 0.0}, {"y": 1.0}]


def test_two_open_numbers_and_a_known_answer() -> None:
    """Against the sum over a fine grid, which for functions that die out on both sides is as good as an integral."""
    cloud = spread(people(ROWS), "a", "c", numbers={"b": 120.0}, answers={"x": 1.0, "y": 1.0})
    a, c = np.meshgrid(np.linspace(-45, 155, 401), np.linspace(-1.7, 4.3, 401))
    sd = np.array([12.0, 0.15, 0.35])
    at = np.stack([a, np.full_like(a, log(120.0)), c], axis=-1) - np.array([55.0, 4.8, 1.3])
    weight = multivariate_normal(cov=CORRELATION * np.outer(sd, sd)).pdf(at)
    weight = weight / (1 + np.exp(6.0 - 0.05 * a - 0.5 * log(120.0))) / (1 + np.exp(-4.0 + 0.02 * a + 2.0 * c))
    for id, grid in (("a", a), ("c", c)):
        wanted = float((weight * grid).sum() / weight.sum())
        assert float((cloud.weights * cloud.columns[id]).sum()) == pytest.approx(wanted, rel=1e-9)


def test_nothing_follows_where_somebody_is_not_described() -> None:
    assert spread_open(people(), ("z",), {}, {}, nowhere) is None
    assert spread_open(people(), ("a", "z"), {}, {}, nowhere) is None


def test_a_known_number_without_a_logarithm_says_nothing() -> None:
    with_nought = spread(people(), "a", numbers={"b": 0.0, "c": 1.0})
    without = spread(people(), "a", numbers={"c": 1.0})
    assert with_nought.columns["a"].tolist() == without.columns["a"].tolist()


def test_answers_against_all_odds_leave_weights() -> None:
    rows = (AnswerRow("x", -900.0, (("a", 0.5),)),)
    cloud = spread(people(rows), "a", numbers={"b": 120.0, "c": 1.0}, answers={"x": 1.0})
    assert np.isfinite(cloud.weights).all()
