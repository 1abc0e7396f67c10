"""Riley 2019: the paper's two examples, the numbers of its open package, and C to R2 by other ways to the same.

Two kinds of figures differ by rounding. The paper's programs take 1.96 for the normal quantile, here it has all digits
(220.84 and not 220.85 people; 221 both ways). The open package rounds max R2 to 2 and the shrinkage of criterion (ii)
to 3 decimals on the way: 1049 people where unrounded figures give 1039.
"""

from math import ceil, exp, sqrt

import numpy as np
import pytest
import statsmodels.api as sm
from scipy import integrate, stats

from clinicalc.estimation.sample_size import (
    adjust_r2,
    assume_r2,
    max_r2_binary,
    max_r2_survival,
    people_for_prevalence,
    people_for_rate,
    people_for_shrinkage,
    r2_from_c,
    r2_from_likelihoods,
    shrinkage_for_optimism,
    size_for_binary,
    size_for_survival,
)

# r2, parameters, rate, horizon, mean follow-up, people by criterion (i), people by (ii): the expected numbers of the
# open sample-size package that came with the paper (time-to-event examples)
PUBLISHED = (
    (0.051, 25, 0.065, 2.0, 2.07, 4286, 875),
    (0.065, 25, 0.065, 2.0, 2.07, 3335, 868),
    (0.051, 50, 0.065, 2.0, 2.07, 8572, 1749),
    (0.051, 25, 0.1, 2.0, 2.07, 4286, 725),
    (0.051, 25, 0.065, 4.0, 2.07, 4286, 875),
    (0.051, 25, 0.065, 2.0, 4.0, 4286, 684),
    (0.06, 40, 0.08, 3.0, 5.0, 5798, 974),
    (0.03, 10, 0.09, 3.0, 3.0, 2950, 273),
    (0.3, 80, 0.03, 1.0, 5.0, 1974, 2279),
)


def test_the_papers_binary_example() -> None:
    """Chagas disease: 24 parameters, R2 0.288, 17.4 % events: 662 people, 4.8 events each (Stat Med 2019;38:1276)."""
    size = size_for_binary(24, 0.174, 0.288)
    assert [ceil(n) for n in (size.for_shrinkage, size.for_optimism, size.for_risk)] == [623, 662, 221]
    assert size.people == 662
    assert round(size.per_parameter, 1) == 4.8
    # unrounded, from an independent calculation: Python 3.11, numpy 2.4.6, scipy 1.17.1
    assert size.for_shrinkage == pytest.approx(622.3058034960966, rel=1e-12)
    assert size.for_optimism == pytest.approx(661.0973427261007, rel=1e-12)
    assert size.for_risk == pytest.approx(220.84393101817696, rel=1e-12)
    assert size.max_r2 == pytest.approx(0.6032086677670352, rel=1e-12)
    assert size.shrinkage2 == pytest.approx(0.9052036952956451, rel=1e-12)
    assert size.events == pytest.approx(662 * 0.174, rel=1e-12)


def test_the_papers_survival_example() -> None:
    """Recurrent venous thrombosis: 30 parameters, R2 0.051, 0.065 events a year, 2.07 years: 5143 people, EPP 23."""
    size = size_for_survival(30, 0.065, 2.07, 2.0, 0.051)
    assert [ceil(n) for n in (size.for_shrinkage, size.for_optimism, size.for_risk)] == [5143, 1039, 158]
    assert size.people == 5143
    assert round(size.per_parameter) == 23
    assert size.events == pytest.approx(691.99065, rel=1e-12)
    assert size.for_shrinkage == pytest.approx(5142.65934034275, rel=1e-12)
    assert size.for_optimism == pytest.approx(1038.620711554807, rel=1e-12)
    assert size.max_r2 == pytest.approx(0.554637179045187, rel=1e-12)
    assert size.risk == pytest.approx(0.1219045690794387, rel=1e-12)


@pytest.mark.parametrize(("r2", "parameters", "rate", "horizon", "follow_up", "first", "second"), PUBLISHED)
def test_the_open_packages_expected_numbers(
    r2: float, parameters: int, rate: float, horizon: float, follow_up: float, first: int, second: int
) -> None:
    size = size_for_survival(parameters, rate, follow_up, horizon, r2)
    assert ceil(size.for_shrinkage) == first
    rounded = round(shrinkage_for_optimism(r2, round(max_r2_survival(rate * follow_up), 2)), 3)
    assert ceil(people_for_shrinkage(parameters, r2, rounded)) == second
    assert size.for_optimism == pytest.approx(second, rel=0.012)  # what that rounding does, at most


def test_the_papers_rounding_gives_1049_people() -> None:
    rounded = round(shrinkage_for_optimism(0.051, round(max_r2_survival(0.065 * 2.07), 2)), 3)
    assert ceil(people_for_shrinkage(30, 0.051, rounded)) == 1049


def test_the_unit_of_time_does_not_matter() -> None:
    years = size_for_survival(30, 0.065, 2.07, 2.0, 0.051)
    days = size_for_survival(30, 0.065 / 365.25, 2.07 * 365.25, 2.0 * 365.25, 0.051)
    assert days.people == years.people
    assert days.for_risk == pytest.approx(years.for_risk, rel=1e-10)


@pytest.mark.parametrize("rate", [0.065, 0.01, 0.3, 1.0])
def test_the_third_criterion_gives_limits_within_the_margin_and_no_more_people_than_that(rate: float) -> None:
    """Put back into the paper's own interval: risks from rate -/+ 1.96 sqrt(rate / (n follow-up))."""

    def furthest(people: float) -> float:
        half = stats.norm.ppf(0.975) * sqrt(rate / (people * 2.07))
        risk = 1 - exp(-rate * 2)
        ends = [1 - exp(-max(0.0, rate - half) * 2), 1 - exp(-(rate + half) * 2)]
        return max(abs(end - risk) for end in ends)

    people = people_for_rate(rate, 2.07, 2.0, 0.05)
    assert furthest(people) == pytest.approx(0.05, rel=1e-9)
    assert furthest(1.1 * people) < 0.05 < furthest(0.9 * people)


def test_a_prevalence_is_known_to_within_the_margin() -> None:
    people = people_for_prevalence(0.5, 0.05)
    assert stats.norm.ppf(0.975) * sqrt(0.25 / people) == pytest.approx(0.05, rel=1e-12)


@pytest.mark.parametrize(
    ("c", "prevalence", "expected"),
    [(0.78, 0.2, 0.15887662809757108), (0.89, 0.174, 0.2909549100905193)],
)
def test_r2_of_a_c_statistic(c: float, prevalence: float, expected: float) -> None:
    """From an independent quadrature: numpy 2.4.6, scipy 1.17.1; and below from one made here."""
    assert r2_from_c(c, prevalence) == pytest.approx(expected, rel=1e-12)
    apart = sqrt(2) * stats.norm.ppf(c)

    def gain(x: float) -> float:
        case, other = prevalence * stats.norm.pdf(x, apart), (1 - prevalence) * stats.norm.pdf(x)
        p = case / (case + other)  # Bayes, in the place of the line for the log odds
        return float(case * np.log(p / prevalence) + other * np.log((1 - p) / (1 - prevalence)))

    whole = integrate.quad(gain, -8, 8 + apart, epsabs=1e-13)[0]
    assert r2_from_c(c, prevalence) == pytest.approx(1 - exp(-2 * whole), rel=1e-9)


def test_r2_of_a_c_statistic_is_that_of_a_fit_to_such_people() -> None:
    """400,000 people drawn as the method has it, and a logistic regression of statsmodels."""
    random = np.random.default_rng(20260301)
    y = (random.random(400_000) < 0.2).astype(float)
    x = random.normal(size=400_000) + y * sqrt(2) * stats.norm.ppf(0.78)
    fit = sm.Logit(y, sm.add_constant(x)).fit(disp=0)
    apparent = r2_from_likelihoods(float(fit.llnull), float(fit.llf), len(y))
    assert apparent == pytest.approx(r2_from_c(0.78, float(y.mean())), abs=0.002)


def test_nothing_is_known() -> None:
    """15 % of the largest (BMJ 2020;368:m441, the largest for 5 % and 50 % events from memory)."""
    assert round(max_r2_binary(0.05), 2) == 0.33
    assert round(max_r2_binary(0.5), 2) == 0.75
    assert assume_r2(max_r2_binary(0.5)) == pytest.approx(0.1125, rel=1e-12)


def test_an_apparent_r2_is_adjusted_so_that_the_first_criterion_is_met_exactly() -> None:
    """n = p / ((S - 1) ln(1 - R2_app)) at R2 = S R2_app is criterion (i) solved for S."""
    apparent, parameters, people = 0.32, 24, 662
    adjusted = adjust_r2(apparent, people, parameters)
    shrinkage = adjusted / apparent
    assert people_for_shrinkage(parameters, adjusted, shrinkage) == pytest.approx(people, rel=1e-12)


def test_an_apparent_r2_that_chance_alone_gives_is_nothing() -> None:
    assert adjust_r2(0.01, 200, 12) == 0.0
    assert adjust_r2(0.0, 200, 12) == 0.0


@pytest.mark.parametrize(
    ("parameters", "prevalence", "r2"),
    [(0, 0.2, 0.1), (5, 0.0, 0.1), (5, 1.0, 0.1), (5, 0.2, 0.0), (5, 0.2, 0.64), (5, float("nan"), 0.1)],
)
def test_what_cannot_be_is_refused(parameters: int, prevalence: float, r2: float) -> None:
    with pytest.raises(ValueError, match=r"R2|share|parameter"):
        size_for_binary(parameters, prevalence, r2)


@pytest.mark.parametrize(("rate", "follow_up", "horizon"), [(0.0, 2, 2), (0.1, 0, 2), (0.1, 2, -1), (0.6, 2, 2)])
def test_times_that_cannot_be_are_refused(rate: float, follow_up: float, horizon: float) -> None:
    with pytest.raises(ValueError, match=r"above 0|at most one"):
        size_for_survival(5, rate, follow_up, horizon, 0.05)


@pytest.mark.parametrize("c", [0.5, 1.0, 0.3])
def test_a_c_statistic_that_tells_nothing_or_everything_is_refused(c: float) -> None:
    with pytest.raises(ValueError, match="C statistic"):
        r2_from_c(c, 0.2)
