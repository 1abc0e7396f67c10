"""Values left out of fitted models against the conditional normal and logistic distributions worked out elsewhere."""

from statistics import NormalDist

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.prediction.people import people_of
from tests.reference.figures import BinaryFit, load
from tests.reference.not_measured import (
    BIRTHS,
    PIMA,
    OpenAnswer,
    OpenNumbers,
    births_model,
    described,
    pima_model,
    pima_population,
    texts_of,
)
from tests.reference.packaging import complete_square, inverse_link

CLOSE = 1e-12
UPPER = NormalDist().inv_cdf(0.975)


def pima(case: OpenNumbers) -> tuple[Assessment, Estimate]:
    assessment = assess(pima_model(), entry_from_texts(texts_of(case.profile)))
    assert assessment.estimate is not None, assessment.findings
    return assessment, assessment.estimate


@pytest.mark.parametrize("case", PIMA.cases)
def test_conditional_moments(case: OpenNumbers) -> None:
    model = pima_model()
    people = people_of(model.content, model.equations[0].content)
    assert people is not None
    known = {id: value for id, value in case.profile.items() if value is not None}
    mean, covariance = people.given(case.missing, people.scaled(known))
    assert mean == pytest.approx(case.conditional_mean, rel=CLOSE)
    assert covariance == pytest.approx(np.array(case.conditional_cov), rel=CLOSE)


@pytest.mark.parametrize("case", PIMA.cases)
def test_risk_averaged_over_numbers(case: OpenNumbers) -> None:
    _, estimate = pima(case)
    assert estimate.probability == pytest.approx(case.marginal_risk, rel=CLOSE)
    assert estimate.complement == pytest.approx(1 - case.marginal_risk, rel=CLOSE)
    assert inverse_link("logit", estimate.eta) == pytest.approx(case.marginal_risk, rel=CLOSE)
    open_ = estimate.not_measured
    assert open_ is not None
    assert open_.fields == case.missing
    assert open_.link_sd == pytest.approx(case.lp_sd_missing, rel=CLOSE)
    assert (open_.lower, open_.upper) == pytest.approx(case.band95_missing_only, rel=CLOSE)
    known = [inverse_link("logit", case.lp_mean + z * case.lp_se_coefficients_at_mean) for z in (-UPPER, UPPER)]
    assert (open_.known_lower, open_.known_upper) == pytest.approx(known, rel=1e-10)


@pytest.mark.parametrize("case", PIMA.cases)
def test_band_of_numbers_and_coefficients(case: OpenNumbers) -> None:
    """The reference leaves trace(V Sigma) out of the variance; without it our limits are the reference's."""
    _, estimate = pima(case)
    assert estimate.band is not None
    fit = load("pima_logit", BinaryFit)
    slopes = np.array(complete_square(fit.covariance)[0])
    at = [fit.predictors.index(id) for id in case.missing]
    second_order = float(np.trace(slopes[np.ix_(at, at)] @ np.array(case.conditional_cov)))
    assert second_order > 0.001
    for ours, theirs, side in zip(
        (estimate.band.lower, estimate.band.upper), case.band95_missing_and_coefficients, (-1, 1), strict=True
    ):
        half = side * (np.log(ours / (1 - ours)) - case.lp_mean) / UPPER
        without = case.lp_mean + side * UPPER * np.sqrt(half * half - second_order)
        assert inverse_link("logit", without) == pytest.approx(theirs, rel=1e-8)


def births(case: OpenAnswer) -> Assessment:
    return assess(births_model(), entry_from_texts(texts_of(case.profile)))


@pytest.mark.parametrize("case", BIRTHS.cases)
def test_risk_averaged_over_an_answer(case: OpenAnswer) -> None:
    assessment = births(case)
    estimate = assessment.estimate
    assert estimate is not None
    assert estimate.probability == pytest.approx(case.marginal_risk, rel=CLOSE)
    open_ = estimate.not_measured
    assert open_ is not None
    assert (open_.lower, open_.upper) == pytest.approx((case.risk_if_0, case.risk_if_1), rel=1e-10)
    share = case.p_smoke_given_rest
    apart = np.log(case.risk_if_1 / (1 - case.risk_if_1)) - np.log(case.risk_if_0 / (1 - case.risk_if_0))
    assert open_.link_sd == pytest.approx(np.sqrt(share * (1 - share)) * apart, rel=1e-10)


@pytest.mark.parametrize("case", BIRTHS.cases)
def test_the_finding_says_both_results(case: OpenAnswer) -> None:
    (said,) = [f for f in births(case).findings if f.code is FindingCode.NOT_MEASURED]
    assert said.grade is Grade.CAUTION
    assert said.field == "smoke"
    share = case.p_smoke_given_rest
    assert f"{percent(case.risk_if_0)} for No ({percent(1 - share)} of such people)" in said.message
    assert f"{percent(case.risk_if_1)} for Yes ({percent(share)})" in said.message


@pytest.mark.parametrize("case", BIRTHS.cases)
def test_band_over_an_answer_is_that_of_two_normals(case: OpenAnswer) -> None:
    """Below the lower limit lies 2.5 % of the mixture, above the upper one too: each answer's own band weighed."""
    estimate = births(case).estimate
    assert estimate is not None
    assert estimate.band is not None
    parts = []
    for answer in ("no", "yes"):
        known = assess(births_model(), entry_from_texts(texts_of(case.profile) | {"smoke": answer})).estimate
        assert known is not None
        assert known.band is not None
        upper = known.band.upper
        parts.append(NormalDist(known.eta, (np.log(upper / (1 - upper)) - known.eta) / UPPER))
    weights = (1 - case.p_smoke_given_rest, case.p_smoke_given_rest)
    for end, share in ((estimate.band.lower, 0.025), (estimate.band.upper, 0.975)):
        below = sum(w * part.cdf(np.log(end / (1 - end))) for w, part in zip(weights, parts, strict=True))
        assert below == pytest.approx(share, abs=1e-9)


def test_a_number_without_spread_is_as_good_as_known() -> None:
    """A population in which a number hardly varies leaves the plug-in result and its band."""
    case = PIMA.cases[0]
    fit = load("pima_logit", BinaryFit)
    model = described(fit, pima_population({"bmi": 1e-9}))
    open_ = assess(model, entry_from_texts(texts_of(case.profile))).estimate
    known = assess(model, entry_from_texts(texts_of(case.profile) | {"bmi": "32.31"})).estimate
    assert open_ is not None
    assert known is not None
    assert open_.band is not None
    assert known.band is not None
    assert open_.eta == pytest.approx(known.eta, abs=1e-8)
    assert (open_.band.lower, open_.band.upper) == pytest.approx((known.band.lower, known.band.upper), abs=1e-8)


def test_without_a_population_there_is_a_range_or_nothing() -> None:
    case = PIMA.cases[0]
    assessment = assess(described(load("pima_logit", BinaryFit), None), entry_from_texts(texts_of(case.profile)))
    assert assessment.estimate is None
    (said,) = assessment.stops
    assert said.code is FindingCode.NOT_MEASURED
    # a bare number has no usual limits, so there is nothing to take a range over
    assert said.message.endswith("there is no single number. Measure it first.")
