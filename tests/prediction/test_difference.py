"""The difference of two probabilities and its band, against integrals, samples and closed forms of other makes."""

from collections.abc import Sequence
from itertools import pairwise
from math import exp, expm1, log, log1p, pi, sqrt
from statistics import NormalDist

import numpy as np
import pytest
from scipy import integrate, special

from clinicalc.prediction.difference import difference
from clinicalc.prediction.joint import JointNormal, join_rows
from clinicalc.prediction.line import Adjustment, Draws, Line, Precision
from clinicalc.prediction.links import Link, complement, difference_between, link_of, probability
from clinicalc.prediction.normal_difference import difference_quantiles
from clinicalc.prediction.predict import predict
from tests.prediction.invented import TEN_YEARS, Array, invent_columns, invent_draws, invent_line, invent_precision

Z = NormalDist().inv_cdf(0.975)


def difference_quantile(link: Link, joint: JointNormal, share: float) -> float:
    """One quantile."""
    return difference_quantiles(link, joint, [share])[0]


def share_below(link: Link, joint: JointNormal, height: float) -> float:
    """P(g(eta2) - g(eta1) <= height) by scipy's QUADPACK (scipy.integrate.quad), over eta1, broken where it ends."""
    sd = sqrt(joint.variance)

    def integrand(z: float) -> float:
        eta = joint.first + sd * z
        if link == "logit":
            share, rest = float(special.expit(eta)) + height, float(special.expit(-eta)) - height
        else:
            share, rest = -expm1(-exp(eta)) + height, exp(-exp(eta)) - height
        weight = exp(-z * z / 2) / sqrt(2 * pi)
        if share <= 0 or rest <= 0:
            return 0.0 if share <= 0 else weight
        other = log(share) - log(rest) if link == "logit" else log(-log(rest) if share > 0.5 else -log1p(-share))
        return weight * float(special.ndtr((other - joint.second - joint.slope * z) / joint.remainder))

    ends = list(np.linspace(-9, 9, 73))
    for edge in (-height, 1 - height):
        if 0 < edge < 1:
            eta = float(special.logit(edge)) if link == "logit" else log(-log1p(-edge))
            ends += [z for z in [(eta - joint.first) / sd] if -9 < z < 9]
    return sum(
        float(integrate.quad(integrand, low, high, epsabs=1e-15, epsrel=1e-13, limit=400)[0])
        for low, high in pairwise(sorted(ends))
    )


JOINTS: list[tuple[Link, JointNormal]] = [
    ("logit", JointNormal(-2.0, -2.7, 0.03, -0.004, 0.02)),
    ("cloglog", JointNormal(-2.2, -2.9, 0.03, -0.01, 0.02)),
    ("logit", JointNormal(-6.0, -5.0, 0.3, 0.05, 0.1)),
    ("cloglog", JointNormal(-7.0, -7.4, 0.36, 0.0, 0.001)),
    ("logit", JointNormal(3.0, 4.0, 0.4, 0.1, 0.1)),
    ("cloglog", JointNormal(0.9, 0.2, 0.1, 0.05, 0.2)),
    ("logit", JointNormal(-1.0, -1.0001, 0.04, 0.0, 1e-7)),
    ("logit", JointNormal(-2.0, -2.0, 0.04, 0.01, 0.02)),
    ("cloglog", JointNormal(1.812, 0.4066, 0.2284, -0.0266, 0.0128)),
    ("logit", JointNormal(0.3, -0.4, 0.5, 0.0, 1e-5)),
]


@pytest.mark.parametrize(("link", "joint"), JOINTS)
@pytest.mark.parametrize("share", [0.0005, 0.025, 0.975])
def test_quantiles_against_an_adaptive_integral(link: Link, joint: JointNormal, share: float) -> None:
    found = difference_quantile(link, joint, share)
    reached = share_below(link, joint, found)
    step = 1e-4 * max(abs(found), 1e-6)
    density = (share_below(link, joint, found + step) - share_below(link, joint, found - step)) / (2 * step)
    assert abs(reached - share) / density < 1e-10
    # and over the other linear predictor, which an integral of ours never walks along with this one
    assert difference_quantile(link, joint.turned, 1 - share) == pytest.approx(-found, abs=1e-10)


def sampled(
    line: Line, band: Precision, rows: Sequence[Array], adjustment: Adjustment | None = None
) -> tuple[float, float]:
    """Percentiles of the difference over two million sets of coefficients drawn from their normal, fixed seed."""
    rng, count = np.random.default_rng(20261201), 2_000_000
    covariance = band.root @ band.root.T
    errors = rng.multivariate_normal(np.zeros(len(band.centre)), covariance, size=count)
    level = rng.normal(size=count) * sqrt(band.variance)
    etas = []
    moves = np.zeros((count, 2))
    if adjustment is not None and adjustment.covariance is not None:
        v00, v01, v11 = adjustment.covariance
        moves = rng.multivariate_normal([0, 0], [[v00, v01], [v01, v11]], size=count)
    for row in range(2):
        x = np.array([float(column[row]) for column in rows])
        centre = float(line.lp0 + x @ np.array(line.coefficients))
        eta = centre + level + errors @ (x[list(band.estimated)] - np.array(band.centre))
        if adjustment is not None:
            eta = adjustment.intercept + adjustment.slope * eta + moves[:, 0] + moves[:, 1] * centre
        etas.append(eta)
    low, high = np.quantile(special.expit(etas[1]) - special.expit(etas[0]), [0.025, 0.975])
    return float(low), float(high)


@pytest.mark.parametrize("adjustment", [None, Adjustment(-0.2, 0.9, None), Adjustment(-0.2, 0.9, (0.02, 0.004, 0.01))])
def test_the_band_is_that_of_sampled_coefficients(adjustment: Adjustment | None) -> None:
    band = invent_precision(3, estimated=(0, 2))
    line = invent_line("logit", 3, band)
    rows = (np.array([0.3, 0.3]), np.array([1.0, -1.0]), np.array([0.4, 1.6]))
    found = difference(line, rows, adjustment=adjustment)
    # the standard error of a sampled 2.5 % point is about 0.0015 of the sampled standard deviation
    width = (found.upper or 0) - (found.lower or 0)
    assert (found.lower, found.upper) == pytest.approx(sampled(line, band, rows, adjustment), abs=0.0025 * width)
    ends = predict(line, rows, adjustment=adjustment)
    assert found.value == pytest.approx(float(ends.probability[1] - ends.probability[0]), abs=1e-15)


def test_the_joint_normal_has_the_variances_of_the_two_numbers() -> None:
    adjustment = Adjustment(-0.2, 0.9, (0.02, 0.004, 0.01))
    band = invent_precision(4)
    line, rows = invent_line("cloglog", 4, band), invent_columns(2, 4)
    joint = join_rows(line, band, rows, adjustment)
    ends = predict(line, rows, adjustment=adjustment)
    assert ends.eta_upper is not None
    sds = (ends.eta_upper - ends.eta) / Z
    assert sqrt(joint.variance) == pytest.approx(float(sds[0]), rel=1e-12)
    assert sqrt(joint.turned.variance) == pytest.approx(float(sds[1]), rel=1e-12)
    assert (joint.first, joint.second) == pytest.approx(tuple(ends.eta), rel=1e-15)


@pytest.mark.parametrize("band", [invent_precision(3), invent_draws(400, 3)])
@pytest.mark.parametrize("adjustment", [None, Adjustment(0.1, 1.1, (0.02, 0.0, 0.01))])
def test_the_same_row_twice_differs_by_exactly_nought(band: Precision, adjustment: Adjustment | None) -> None:
    line = invent_line("cloglog", 3, band)
    rows = tuple(np.repeat(column, 2) for column in invent_columns(1, 3))
    found = difference(line, rows, adjustment=adjustment)
    assert (found.value, found.lower, found.upper) == (0.0, 0.0, 0.0)


def test_a_change_in_a_term_that_counts_for_nothing_is_exactly_nought() -> None:
    line = Line(TEN_YEARS, "logit", -2.0, (0.3, 0.0), invent_precision(2, estimated=(0,)), "covariance")
    found = difference(line, (np.array([1.0, 1.0]), np.array([0.0, 1.0])))
    assert (found.value, found.lower, found.upper) == (0.0, 0.0, 0.0)


def test_a_change_in_a_fixed_term_moves_both_ends_together() -> None:
    """Correlation one and far from one half: the difference is monotone, so its quantiles are those of the normal."""
    band = invent_precision(2, estimated=(0,))
    line = Line(TEN_YEARS, "logit", -4.0, (0.3, -0.7), band, "covariance")
    rows = (np.array([1.0, 1.0]), np.array([0.0, 1.0]))
    found = difference(line, rows)
    sd = sqrt(join_rows(line, band, rows, None).variance)
    ends = sorted(float(special.expit(-4.4 + z * sd) - special.expit(-3.7 + z * sd)) for z in (-Z, Z))
    assert (found.lower, found.upper) == pytest.approx(tuple(ends), abs=1e-14)


@pytest.mark.parametrize(
    ("link", "first", "second"), [("logit", 0.3, -0.4), ("logit", -0.2, 1.1), ("cloglog", 0.1, -0.5)]
)
@pytest.mark.parametrize("share", [0.025, 0.3, 0.975])
def test_a_difference_that_turns(link: Link, first: float, second: float, share: float) -> None:
    """Correlation one across the middle: the share below a height is counted on four million strips of the normal."""
    found = difference_quantile(link, JointNormal(first, second, 0.5, 0.0, 0.0), share)
    edges = np.linspace(-9, 9, 4_000_001)
    z = (edges[1:] + edges[:-1]) / 2
    weights = np.diff(special.ndtr(edges))
    heights = difference_between(link, first + sqrt(0.5) * z, second + sqrt(0.5) * z)
    rises = bool(np.any(np.diff(heights) > 0)) and bool(np.any(np.diff(heights) < 0))
    assert rises, "this case was meant to turn"
    assert float(weights[heights <= found].sum()) == pytest.approx(share, abs=5e-6)


@pytest.mark.parametrize(
    ("link", "joint", "share"),
    [
        ("logit", JointNormal(-0.3157614154873176, -0.3157620582944103, 0.30236052978006034, -7.132247613280137e-07,
                              1.682394062946732e-12), 0.975),
        ("logit", JointNormal(2.7535161573464517, 2.754369542837037, 0.4134502519233727, 0.0001675158352374779,
                              6.787166031407006e-08), 0.0005),
    ],
)  # fmt: skip
def test_correlation_one_that_rounding_hides_on_one_side(link: Link, joint: JointNormal, share: float) -> None:
    """One coefficient and two rows: correlation one, told from one side only. As if it were told from the other too."""
    assert joint.remainder > joint.turned.remainder == 0.0
    sd = sqrt(joint.variance)
    edges = np.linspace(-9, 9, 1_000_001)
    z = (edges[1:] + edges[:-1]) / 2
    weights = np.diff(special.ndtr(edges))
    heights = difference_between(link, joint.first + sd * z, joint.second + joint.slope * z)
    found = difference_quantile(link, joint, share)
    assert float(weights[heights <= found].sum()) == pytest.approx(share, abs=2e-5)


@pytest.mark.parametrize("level", [0.5, 0.95])
def test_the_band_holds_the_largest_difference_there_can_be(level: float) -> None:
    """A known step round one half: any other value of the coefficients makes it smaller, so no quantile reaches it."""
    line = Line(TEN_YEARS, "logit", -0.05, (0.3, 0.1), invent_precision(2, estimated=(0,)), "covariance")
    found = difference(line, (np.array([0.0, 0.0]), np.array([0.0, 1.0])), level=level)
    assert found.value == pytest.approx(float(special.expit(0.05) - special.expit(-0.05)), abs=1e-15)
    assert found.upper == found.value
    assert found.lower is not None
    assert 0 < found.lower < found.value


def test_where_both_are_certain_the_band_lies_on_the_side_of_the_difference() -> None:
    """Everybody has the event under both. The search ends at -4e-15, which would read as a difference of that sign."""
    line = Line(TEN_YEARS, "cloglog", 5.0, (0.1, 0.001), invent_precision(2), "covariance")
    found = difference(line, (np.array([0.5, 0.5]), np.array([0.0, 1.0])), level=0.5)
    assert found.lower is not None
    assert found.upper is not None
    assert 0.0 < found.lower <= found.value <= found.upper < 1e-14


def test_two_numbers_that_are_nought_differ_by_nought() -> None:
    """Probabilities of 1e-130: the density of their difference is beyond what a float holds."""
    joint = JointNormal(
        -268.9850264989134, -268.9850264954862, 7.162023891470441, 1.3824399382854167e-07, 2.668436224271717e-15
    )
    assert abs(difference_quantile("cloglog", joint, 0.0005)) < 1e-13


def test_one_certain_number_leaves_the_quantiles_of_the_other() -> None:
    """At the centre without a baseline variance eta1 is certain; then D is a monotone function of eta2."""
    found = difference_quantile("cloglog", JointNormal(-2.0, -1.5, 0.0, 0.0, 0.09), 0.975)
    assert found == pytest.approx(-expm1(-exp(-1.5 + Z * 0.3)) + expm1(-exp(-2.0)), abs=1e-13)
    assert difference_quantile("logit", JointNormal(-2.0, -1.5, 0.0, 0.0, 0.0), 0.975) == pytest.approx(
        float(special.expit(-1.5) - special.expit(-2.0)), abs=1e-15
    )


def test_the_ends_turn_over_with_the_rows() -> None:
    line, rows = invent_line("logit", 3, invent_precision(3)), invent_columns(2, 3)
    one = difference(line, rows, level=0.9)
    other = difference(line, tuple(np.ascontiguousarray(column[::-1]) for column in rows), level=0.9)
    assert other.value == -one.value
    assert (other.lower, other.upper) == pytest.approx((-(one.upper or 0), -(one.lower or 0)), abs=1e-12)


def test_draws_are_compared_row_by_row() -> None:
    draws = invent_draws(400, 3)
    line, rows = invent_line("logit", 3, draws), invent_columns(2, 3)
    apart = sorted(
        float(special.expit(etas[1]) - special.expit(etas[0]))
        for k in range(400)
        for etas in [
            [draws.baselines[k] + sum(draws.coefficients[j, k] * rows[j][row] for j in range(3)) for row in range(2)]
        ]
    )
    # type 7 by hand: place 399 * 0.025 = 9.975 and 399 * 0.975 = 389.025
    expected = apart[9] + 0.975 * (apart[10] - apart[9]), apart[389] + 0.025 * (apart[390] - apart[389])
    found = difference(line, rows)
    assert (found.lower, found.upper) == pytest.approx(expected, abs=1e-13)


def test_draws_and_an_imprecise_recalibration_are_joined_as_distances() -> None:
    line, rows = invent_line("logit", 3, invent_draws(400, 3)), invent_columns(2, 3)
    plain, moved = Adjustment(0.1, 0.8, None), Adjustment(0.1, 0.8, (0.04, 0.0, 0.0))
    alone = difference(line, rows, adjustment=plain)
    both = difference(line, rows, adjustment=moved)
    # the intercept alone, with standard deviation 0.2, moves both numbers together
    etas = predict(line, rows, adjustment=plain).eta
    shifted = [float(special.expit(etas[1] + z * 0.2) - special.expit(etas[0] + z * 0.2)) for z in (-Z, Z)]
    assert isinstance(line.band, Draws)
    before = [line.band.baselines + sum(line.band.coefficients[j] * rows[j][row] for j in range(3)) for row in range(2)]
    drawn = 0.1 + 0.8 * np.array(before)
    middle = float(np.median(special.expit(drawn[1]) - special.expit(drawn[0])))
    assert alone.lower is not None
    assert alone.upper is not None
    below, above = min(shifted) - alone.value, max(shifted) - alone.value
    assert both.lower == pytest.approx(middle - sqrt((middle - alone.lower) ** 2 + below**2), abs=1e-12)
    assert both.upper == pytest.approx(middle + sqrt((alone.upper - middle) ** 2 + above**2), abs=1e-12)


def test_no_band_without_a_covariance_or_with_too_few_draws() -> None:
    rows = invent_columns(2, 3)
    for line, level in ((invent_line("logit", 3), 0.95), (invent_line("logit", 3, invent_draws(399, 3)), 0.98)):
        found = difference(line, rows, level=level)
        assert (found.lower, found.upper) == (None, None)
        assert found.value != 0


@pytest.mark.parametrize("link", ["logit", "cloglog"])
def test_there_and_back(link: Link) -> None:
    eta = np.array([-30.0, -3.0, -0.3, 0.0, 0.5, 3.0])
    assert link_of(link, probability(link, eta), complement(link, eta)) == pytest.approx(eta, abs=1e-14)


@pytest.mark.parametrize("link", ["logit", "cloglog"])
def test_small_differences_keep_their_digits(link: Link) -> None:
    """Against the first two terms of the Taylor series, which is exact here to 1e-14 of itself."""
    for eta in (-20.0, -2.0, 0.5):
        found = float(difference_between(link, np.array([eta]), np.array([eta + 1e-7]))[0])
        step = (eta + 1e-7) - eta
        if link == "logit":
            p = 1 / (1 + exp(-eta))
            expected = p * (1 - p) * step * (1 + (1 - 2 * p) * step / 2)
        else:
            h = exp(eta)
            expected = h * exp(-h) * step * (1 + (1 - h) * step / 2)
        assert found == pytest.approx(expected, rel=1e-13)
