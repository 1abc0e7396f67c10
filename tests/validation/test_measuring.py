"""All measures at a horizon against R's figures and those printed in published validations."""

import numpy as np
import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.hazard_sums import Ties, sum_hazards
from clinicalc.validation.calibrating import measure_intercept, shift_to_incidence
from clinicalc.validation.intervals import measure_ratio
from clinicalc.validation.measuring import measure_group, measure_horizon
from clinicalc.validation.observing import Seen
from clinicalc.validation.predicted import FlagPoint, PredictedPeople, YesNo
from clinicalc.validation.validated import HorizonValidation, Interval, Measure, Method, Outcomes
from tests.estimation import cohorts
from tests.estimation.validated import breast_cancer, breast_cancer_in_years, pima

Z = 1.959963984540054


def _se(measure: Measure) -> float:
    """Half the width of an interval on its own scale, in standard errors."""
    assert measure.value is not None
    assert measure.lower is not None
    assert measure.upper is not None
    if measure.interval is Interval.LOGIT:
        odds = [np.log(each / (1 - each)) for each in (measure.lower, measure.upper)]
        return float((odds[1] - odds[0]) / (2 * Z)) * measure.value * (1 - measure.value)
    if measure.interval is Interval.LOG:
        return float(np.log(measure.upper / measure.lower)) / (2 * Z)
    return (measure.upper - measure.lower) / (2 * Z)


def _women() -> HorizonValidation:
    people = breast_cancer()
    points = [FlagPoint(at) for at in (0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7)]
    return measure_horizon(PredictedPeople(people.predictions), people.watched, Span(1825.0, "d"), points)


def test_a_yes_or_no_against_r() -> None:
    # R 4.2.2: glm on Pima.te with the log odds as offset and as column, survival 3.5.3 concordance, sums by hand
    p, y = pima()
    found = measure_horizon(PredictedPeople(p), YesNo(y), None)
    assert (found.outcomes, found.people, found.events, found.competing) == (Outcomes.BINARY, 332, 109, 0)
    assert found.expected * 332 == pytest.approx(111.961360840284, rel=1e-12)
    assert (found.intercept.value, _se(found.intercept)) == pytest.approx(
        (-0.0642305901042746, 0.147766203625782), 1e-9
    )
    assert (found.slope.value, _se(found.slope)) == pytest.approx((0.95545396157234, 0.0121664715817489**0.5), 1e-9)
    assert (found.c.value, _se(found.c)) == pytest.approx((0.865182869132349, 0.0201729784857382), abs=1e-10)
    assert (found.auc.value, _se(found.auc)) == pytest.approx((found.c.value, _se(found.c)), abs=1e-12)
    ratio = found.observed_to_expected
    assert (ratio.value, _se(ratio)) == pytest.approx((0.973550153213051, 0.0785000874766036), abs=1e-10)
    assert (ratio.lower, ratio.upper) == pytest.approx((0.834716376009038, 1.135475387883), abs=1e-9)
    assert found.brier.value == pytest.approx(0.139570988841503, abs=1e-12)
    assert found.brier_null == pytest.approx(0.220523660908695, abs=1e-12)
    assert found.scaled_brier.value == pytest.approx(0.367092908459873, abs=1e-12)
    assert found.ici.value == pytest.approx(0.0230452494795126, abs=1e-6)
    assert found.uno.value is None


@pytest.mark.parametrize(
    ("point", "benefit", "all_flagged", "sensitivity", "specificity"),
    [
        (0.02, 0.314789771330219, 0.314605360216376, 1.0, 0.0134529147982063),
        (0.1, 0.279116465863454, 0.253681392235609, 0.990825688073395, 0.381165919282511),
        (0.2, 0.242469879518072, 0.16039156626506, 0.917431192660551, 0.650224215246637),
        (0.3, 0.195352839931153, 0.0404475043029259, 0.807339449541284, 0.757847533632287),
        (0.5, 0.129518072289157, -0.343373493975904, 0.614678899082569, 0.89237668161435),
        (0.7, 0.0542168674698795, -1.23895582329317, 0.422018348623853, 0.946188340807175),
    ],
)
def test_decisions_of_a_yes_or_no_against_r(
    point: float, benefit: float, all_flagged: float, sensitivity: float, specificity: float
) -> None:
    p, y = pima()
    (found,) = measure_horizon(PredictedPeople(p), YesNo(y), None, [FlagPoint(point, "treat")]).decisions
    assert (found.net_benefit, found.treat_all) == pytest.approx((benefit, all_flagged), abs=1e-12)
    assert (found.sensitivity.value, found.specificity.value) == pytest.approx((sensitivity, specificity), abs=1e-12)
    assert found.sensitivity.interval is Interval.WILSON
    assert found.missed == pytest.approx(100 * (1 - sensitivity) * 109 / 332)
    assert found.label == "treat"


def test_times_against_r() -> None:
    # R 4.2.2, survival 3.5.3: survfit, coxph, concordance of gbsg with a model of rotterdam at 1825 days
    found = _women()
    assert (found.outcomes, found.people, found.events) == (Outcomes.TIMES, 686, 285)
    assert found.observed.value == pytest.approx(0.508355129705995, abs=1e-12)
    assert (found.observed.lower, found.observed.upper) == pytest.approx((0.46418581143253, 0.554202776333841), 1e-10)
    assert found.expected == pytest.approx(0.457910493554776, abs=1e-12)
    ratio = found.observed_to_expected
    assert (ratio.value, _se(ratio)) == pytest.approx((1.11016265593657, 0.0452518065304544), abs=1e-10)
    assert (ratio.lower, ratio.upper) == pytest.approx((1.01594034352913, 1.21312351703139), abs=1e-9)
    assert (found.slope.value, _se(found.slope)) == pytest.approx((1.00408869264207, 0.0991024223360739), 1e-8)
    assert (found.c.value, _se(found.c)) == pytest.approx((0.655314416255862, 0.0165234725416373), abs=1e-10)
    assert found.uno.value == pytest.approx(0.640230462576788, abs=1e-10)
    assert found.auc.value == pytest.approx(0.691236410769169, abs=1e-12)
    assert found.brier.value == pytest.approx(0.225437741128885, abs=1e-12)
    assert found.brier_null == pytest.approx(0.249930191807596, abs=1e-12)
    assert found.scaled_brier.value == pytest.approx(0.097997166735124, abs=1e-12)
    # the cumulative hazard of a baseline made anew with the coefficients as they are, over that predicted
    assert found.intercept.value == pytest.approx(np.log(0.311608833831746 / 0.259684693301373), abs=1e-10)
    assert found.intercept.method is Method.COX_OFFSET


def test_c_cut_at_the_horizon_against_r() -> None:
    people = breast_cancer()
    cut = people.watched.times > people.horizon
    times = np.minimum(people.watched.times, people.horizon)
    outcome = type(people.watched)(times, np.where(cut, 0.0, people.watched.status))
    found = measure_horizon(PredictedPeople(people.predictions), outcome, Span(1825.0, "d"))
    assert (found.c.value, _se(found.c)) == pytest.approx((0.655402646502836, 0.0166422082873813), abs=1e-10)


def test_decisions_of_times_against_r() -> None:
    # R 4.2.2: survfit among those flagged
    wanted = [
        (0.1, 686, 0.508355129705995, 0.45372792189555, 0.45372792189555),
        (0.2, 686, 0.508355129705995, 0.385443912132493, 0.385443912132493),
        (0.3, 593, 0.543110041118627, 0.300217106171066, 0.297650185294278),
        (0.4, 360, 0.634552378755263, 0.205147853138714, 0.180591882843325),
        (0.5, 195, 0.707150347695834, 0.117767690381013, 0.0167102594119894),
        (0.6, 124, 0.789585480496169, 0.0856727389997267, -0.229112175735013),
        (0.7, 76, 0.778700620061418, 0.0290633971072293, -0.638816234313351),
    ]
    for found, (point, flagged, risk, benefit, all_flagged) in zip(_women().decisions, wanted, strict=True):
        assert (found.point, found.flagged) == (point, flagged)
        assert found.positive_value.value == pytest.approx(risk, abs=1e-12)
        assert (found.net_benefit, found.treat_all) == pytest.approx((benefit, all_flagged), abs=1e-12)


def test_calibration_in_the_large_over_all_follow_up_against_r() -> None:
    # R 4.2.2: glm(event by 1825 days ~ offset(log cumulative hazard until then), poisson); Crowson 2016
    women, cohort = breast_cancer(), cohorts.rotterdam().cohort
    fit = fit_cox(cohort)
    until = np.minimum(women.watched.times, women.horizon)
    when, place = np.unique(until, return_inverse=True)
    baseline = np.array([each.hazard for each in sum_hazards(cohort, fit.coefficients, when.tolist(), Ties.EFRON)])
    lp = np.log(-np.log1p(-women.predictions)) - np.log(baseline[-1])
    predicted = PredictedPeople(women.predictions, hazards=baseline[place] * np.exp(lp))
    found = measure_intercept(Seen(predicted, women.watched, Span(1825.0, "d")))
    assert found.method is Method.POISSON_OFFSET
    assert (found.value, _se(found)) == pytest.approx((0.125940963633342, 0.0592348877758335), abs=1e-7)


def test_shift_of_risks_to_an_observed_one_against_r() -> None:
    # R 4.2.2: uniroot of mean(1 - (1 - p)^exp(d)) - Kaplan-Meier risk
    people = breast_cancer()
    eta = PredictedPeople(people.predictions).log_hazard
    value, _ = shift_to_incidence(eta, 0.508355129705995, 0.0230039879782197)
    assert value == pytest.approx(0.164785021817673, abs=1e-7)


def test_every_printed_digit_of_the_guidance_of_stratos() -> None:
    # McLernon et al., Ann Intern Med 2023;176:105-114, companion text. They print limits of C on its own scale
    people = breast_cancer_in_years()
    predicted = PredictedPeople(people.predictions)
    found = measure_horizon(predicted, people.watched, Span(5.0), [FlagPoint(0.23)])
    early = measure_horizon(predicted, people.watched, Span(4.99))
    for measure, printed in (
        (found.c, (0.65, 0.62, 0.68)),
        (found.uno, (0.64, 0.61, 0.67)),
        (early.auc, (0.69, 0.63, 0.74)),
        (early.brier, (0.22, 0.21, 0.24)),
        (early.scaled_brier, (0.10, 0.04, 0.16)),
    ):
        assert measure.value is not None
        assert (round(measure.value, 2), round(measure.value - Z * _se(measure), 2)) == printed[:2]
        assert round(measure.value + Z * _se(measure), 2) == printed[2]
        # and the limits given, on the scale of the log odds, are the same two digits within one
        assert (measure.lower, measure.upper) == pytest.approx(printed[1:], abs=0.0101)
    ratio = found.observed_to_expected
    assert ratio.value is not None
    assert ratio.value == pytest.approx(1.0444489, abs=5e-8)
    # theirs takes the events as a Poisson count
    poisson = measure_ratio(ratio.value, found.events**-0.5, Method.KAPLAN_MEIER)
    assert (poisson.lower, poisson.upper) == pytest.approx((0.9299645, 1.173027), abs=1e-6)
    assert ratio.lower is not None
    assert poisson.lower is not None
    assert poisson.lower < ratio.lower
    assert found.decisions[0].net_benefit == pytest.approx(0.36, abs=0.005)
    assert found.decisions[0].net_benefit == pytest.approx(0.361500168449344, abs=1e-12)
    assert (found.slope.value, _se(found.slope)) == pytest.approx((1.07032568393481, 0.127605123637229), 1e-8)
    width = 0.684121950727937 - 0.619326064394936  # of their limits, with 1.96 as 1.959964
    assert (found.c.value, _se(found.c)) == pytest.approx((0.651724007561437, width / (2 * 1.959964)), abs=1e-10)
    assert found.ici.value == pytest.approx(0.0272520591291002, abs=1e-10)


def test_a_group_has_the_figures_of_those_people_alone() -> None:
    people = breast_cancer()
    predicted, span = PredictedPeople(people.predictions), Span(1825.0, "d")
    found, whole = measure_group(predicted, people.watched, span, "sex", "female"), _women()
    assert (found.by, found.level, found.people, found.events, found.why) == ("sex", "female", 686, 285, "")
    assert (found.observed, found.observed_to_expected) == (whole.observed, whole.observed_to_expected)
    assert (found.c.value, found.slope.value) == pytest.approx((whole.c.value, whole.slope.value), rel=1e-12)


def test_the_order_of_people_makes_no_difference() -> None:
    people = breast_cancer()
    rows = np.random.default_rng(1).permutation(686)
    predicted, span = PredictedPeople(people.predictions[rows]), Span(1825.0, "d")
    found, whole = measure_horizon(predicted, people.watched.part(rows), span), _women()
    for name in ("observed", "observed_to_expected", "intercept", "slope", "c", "uno", "auc", "brier", "scaled_brier"):
        one, other = getattr(found, name), getattr(whole, name)
        assert (one.value, one.lower, one.upper) == pytest.approx((other.value, other.lower, other.upper), rel=1e-10)
