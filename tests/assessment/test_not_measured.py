"""Values said to be not measured: how that is said, what may be, and the number that comes out."""

from itertools import pairwise
from math import exp

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.stats import norm

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.record import record_of
from clinicalc.coefficients.schema import Population
from tests.assessment.cases import MAN_50, NOW, WOMAN_61, WOMAN_EGFR_90, about, probability, run, shipped
from tests.assessment.open_models import WOMAN_WEIGHED, estimated, model_of, of, open_finding, with_people
from tests.coefficients.tiny_model import changed, tiny_cloglog_model, tiny_logit_model, tree_of

LIPIDS = "general-cvd-2008-lipids"
DIABETES = "diabetes-2007-clinical"
KIDNEYS = "total-cvd-2024-base"

CREATININE = {**{id: text for id, text in WOMAN_EGFR_90.items() if id != "egfr"}, "creatinine": "0.8"}


@pytest.mark.parametrize("text", ["unknown", " Unknown ", "UNKNOWN", "not measured", "Not  Measured"])
@pytest.mark.parametrize("field", ["smoker", "hdl_cholesterol"])
def test_how_it_is_said(field: str, text: str) -> None:
    assessment = run(LIPIDS, WOMAN_61, changed=(field, text))
    assert estimated(assessment).not_measured is not None
    (line,) = [line for line in assessment.values if line.id == field]
    assert (line.typed, line.shown, line.used) == ("unknown", "not measured", "not measured")
    assert line.not_measured
    assert open_finding(assessment, field).grade is Grade.CAUTION
    typed = record_of(assessment)["values"]
    assert isinstance(typed, list)
    assert {"id": field, "typed": "unknown", "value": None, "unit": None, "dated": None}.items() <= next(
        value for value in typed if value["id"] == field
    ).items()


def test_left_empty_is_still_missing() -> None:
    assessment = run(LIPIDS, WOMAN_61, changed=("smoker", " "))
    assert assessment.estimate is None
    assert [finding.field for finding in assessment.missing] == ["smoker"]
    assert about(assessment, FindingCode.NOT_MEASURED) == []


@pytest.mark.parametrize(
    ("field", "words"),
    [
        ("age", "Age: not measured. This model gives no number without it: measure it first. Only Total"),
        ("sex", "Sex: not measured. This model gives no number without it: find out first."),
        ("prior_cvd", "This must be known: it decides whether the model may be used at all."),
    ],
)
def test_what_must_be_known(field: str, words: str) -> None:
    assessment = run(LIPIDS, WOMAN_61, changed=(field, "unknown"))
    assert assessment.estimate is None
    (stop,) = assessment.stops
    assert (stop.field, stop.code) == (field, FindingCode.NOT_MEASURED)
    assert words in stop.message


def test_a_file_that_lets_nothing_stand_open_names_nothing() -> None:
    (stop,) = run("cvd-2021-regional", MAN_50, recalibration="low", changed=("smoker", "unknown")).stops
    assert stop.message == "Smokes now: not measured. This model gives no number without it: find out first."


def test_a_worked_out_value_cannot_be_marked() -> None:
    (stop,) = of(with_people(DIABETES, "weight"), WOMAN_WEIGHED, bmi="unknown").stops
    assert stop.message == (
        "Body mass index is worked out from other values and cannot be marked as not measured. Leave it empty."
    )


def test_no_more_than_two() -> None:
    open_ = WOMAN_61 | {"smoker": "unknown", "hdl_cholesterol": "unknown", "total_cholesterol": "unknown"}
    assessment = run(LIPIDS, open_)
    (stop,) = assessment.stops
    assert "Total cholesterol, HDL cholesterol and Smokes now are all not measured" in stop.message
    assert estimated(run(LIPIDS, open_, smoker="yes")).probability > 0


def test_an_answer_of_that_name_is_an_answer() -> None:
    """A choice may offer "unknown" itself, by id or by label: that is then no value left open."""
    tree = tree_of(tiny_cloglog_model())
    choice = {
        "id": "stage",
        "label": "Stage",
        "kind": "choice",
        "group": "History",
        "may_be_missing": True,
        "choices": [{"id": "early", "label": "Early"}, {"id": "none", "label": "Unknown"}],
    }
    model = model_of(changed(tree, ("/model/predictors/-", choice)))
    full = {"sex": "female", "age": "60", "bp_treated": "yes", "total_cholesterol": "5"}
    assessment = of(model, full, stage="unknown")
    (line,) = [line for line in assessment.values if line.id == "stage"]
    assert line.answer == "none"
    assert not line.not_measured
    assert next(line for line in of(model, full, stage="not measured").values if line.id == "stage").not_measured


def smoking_share(changed: dict[str, float]) -> float:
    """P(smoker) of the woman by the row of the file itself: log odds in age and the logarithm of HDL in its unit."""
    content = shipped(LIPIDS).content
    population = content.equations[0].population
    assert isinstance(population, Population)
    row = next(row for row in population.yes_no if row.id == "smoker")
    values = {"age": 61.0, "hdl_cholesterol": np.log(47.0)} | changed
    return 1 / (1 + exp(-row.intercept - sum(b * values[id] for id, b in row.coefficients.items())))


def test_open_answer_is_the_two_results_weighed() -> None:
    share = smoking_share({})
    no, yes = (probability(run(LIPIDS, WOMAN_61, changed=("smoker", answer))) for answer in ("no", "yes"))
    assessment = run(LIPIDS, WOMAN_61, changed=("smoker", "unknown"))
    estimate = estimated(assessment)
    assert estimate.probability == pytest.approx(share * yes + (1 - share) * no, rel=1e-12)
    assert estimate.probability + estimate.complement == pytest.approx(1, abs=1e-15)
    # the linear predictor of a hazard model: log(-log(1 - p))
    assert estimate.eta == pytest.approx(np.log(-np.log1p(-estimate.probability)), abs=1e-12)
    message = open_finding(assessment, "smoker").message
    assert f"would be {percent(no)} for No ({percent(1 - share)} of such people) or {percent(yes)} for Yes" in message
    assert "The band widens from " in message
    assert "Source: Means, standard deviations and shares of the women" in message


def test_the_described_people_are_named_when_they_are_unconfirmed() -> None:
    known, open_ = (run(LIPIDS, WOMAN_61, changed=("smoker", answer)) for answer in ("no", "unknown"))
    words = "shares of the women of the cohort are from memory"
    (said,) = about(open_, FindingCode.UNCONFIRMED)
    assert words in said.message
    assert not any(words in finding.message for finding in about(known, FindingCode.UNCONFIRMED))


def test_open_number_given_known_numbers_through_cuts_of_a_worked_out_value() -> None:
    """Weight enters by body mass index in two cuts, and the known answer about parents says something of it.

    So the number is that of three classes, each weighed with the people in it: worked out here by quadrature over
    weight with the class ends as they follow from the height.
    """
    model = with_people(DIABETES, "weight")
    # no number but age, height and glucose known: the conditional normal of weight by hand, on the correlation scale
    r = np.array([[1, -0.1, 0.2], [-0.1, 1, 0], [0.2, 0, 1]])
    across = np.array([0.05, 0.5, 0.3])
    z = np.array([(55 - 54) / 10, (165 - 168) / 9, (np.log(90) - 4.57) / 0.1])
    weights = np.linalg.solve(r, across)
    mean, sd = 78 + 14 * weights @ z, 14 * np.sqrt(1 - weights @ across)

    def weigh(weight: float) -> float:
        parent = 1 / (1 + exp(3 - 0.02 * weight))
        treated = 1 / (1 + exp(6 - 0.06 * 55 - 0.02 * weight - 0.3))
        return float(norm.pdf(weight, mean, sd)) * parent * (1 - treated)

    ends = [mean - 9 * sd, 25 * 1.65**2, 30 * 1.65**2, mean + 9 * sd]
    mass = np.array([quad(weigh, low, high, epsabs=1e-14, limit=200)[0] for low, high in pairwise(ends)])
    risks = [probability(of(model, WOMAN_WEIGHED, weight=weight)) for weight in ("60", "75", "90")]
    assert len(set(risks)) == 3
    estimate = estimated(of(model, WOMAN_WEIGHED, weight="unknown"))
    assert estimate.probability == pytest.approx(float(mass @ risks / mass.sum()), rel=1e-10)
    assert estimate.band is None
    assert estimate.not_measured is not None
    assert estimate.not_measured.known_lower is None


def test_two_open_numbers_of_one_worked_out_value() -> None:
    """Height and weight both: against the sum over a fine grid, where each pair falls in one of three classes."""
    model = with_people(DIABETES, "weight", "height")
    r = np.array([[1, 0.2], [0.2, 1]])
    z = np.array([(55 - 54) / 10, (np.log(90) - 4.57) / 0.1])
    across = np.array([[-0.1, 0.0], [0.05, 0.3]])
    slopes = across @ np.linalg.inv(r)
    mean = np.array([168.0, 78.0]) + np.array([9.0, 14.0]) * (slopes @ z)
    covariance = (np.array([[1, 0.5], [0.5, 1]]) - slopes @ across.T) * np.outer([9.0, 14.0], [9.0, 14.0])
    root = np.linalg.cholesky(covariance)
    # weight given height: the share in a class is exact in weight, summed over height
    steps = np.linspace(-8, 8, 2001)
    height = mean[0] + root[0, 0] * steps
    parts = np.zeros(3)
    for h, w in zip(height, norm.pdf(steps), strict=True):
        middle, sd = mean[1] + root[1, 0] * (h - mean[0]) / root[0, 0], root[1, 1]
        ends = np.array([-np.inf, 25, 30, np.inf]) * (h / 100) ** 2
        points = np.linspace(-8, 8, 401)
        kilos = middle + sd * points
        weigh = norm.pdf(points) / (1 + np.exp(3 - 0.02 * kilos)) / (1 + np.exp(-6 + 3.3 + 0.02 * kilos + 0.3))
        below = np.concatenate([[0], np.cumsum((weigh[1:] + weigh[:-1]) / 2)])
        parts += w * np.diff(np.interp(np.clip((ends - middle) / sd, -8, 8), points, below))
    risks = [probability(of(model, WOMAN_WEIGHED, weight=weight)) for weight in ("60", "75", "90")]
    estimate = estimated(of(model, WOMAN_WEIGHED, weight="unknown", height="unknown"))
    # a straight line between 401 points of a smooth weight is good to some millionths
    assert estimate.probability == pytest.approx(float(parts @ risks / parts.sum()), rel=5e-5)


def test_open_number_behind_a_worked_out_value_with_its_own_formula() -> None:
    """Creatinine enters by eGFR: against quadrature over results of measured values."""
    model = with_people(KIDNEYS, "creatinine", "hdl_cholesterol")
    assessment = of(model, CREATININE, creatinine="unknown")
    z = np.array([(50 - 52) / 12, (np.log(45 * 0.02586) - 0.3) / 0.25, (200 * 0.02586 - 5.2) / 1.0])
    r = np.array([[1, 0.05, 0.1], [0.05, 1, 0.1], [0.1, 0.1, 1]])
    across = np.array([0.3, -0.1, 0.0])
    weights = np.linalg.solve(r, across)
    mean, sd = -0.2 + 0.25 * weights @ z, 0.25 * np.sqrt(1 - weights @ across)

    def at(step: float) -> float:
        return probability(of(model, CREATININE, creatinine=f"{exp(mean + sd * step):.15f}")) * float(norm.pdf(step))

    grid = np.linspace(-6, 6, 1201)
    values = np.array([at(step) for step in grid])
    weighed = float((values * np.gradient(grid)).sum())
    assert estimated(assessment).probability == pytest.approx(weighed, rel=2e-6)


def test_values_beyond_the_limits_are_moved_onto_them() -> None:
    """Glucose above 126 mg/dL stops this model: people who would lie there count as lying on the limit."""
    model = with_people(DIABETES, "glucose")
    r = np.array([[1, -0.1, 0.05], [-0.1, 1, 0.5], [0.05, 0.5, 1]])
    across = np.array([0.2, 0, 0.3])
    weights = np.linalg.solve(r, across)
    mean = 4.57 + 0.1 * weights @ np.array([0.1, -3 / 9, 0.0])
    above = float(norm.sf(np.log(100), mean, 0.1 * np.sqrt(1 - weights @ across)))
    low, high = (probability(of(model, WOMAN_WEIGHED, glucose=text)) for text in ("90", "126"))
    estimate = estimated(of(model, WOMAN_WEIGHED, glucose="unknown"))
    assert estimate.probability == pytest.approx(above * high + (1 - above) * low, rel=1e-11)


def test_a_recalibration_applies_to_each_of_such_people() -> None:
    """eta' = alpha + beta eta before the average, in which an open answer has its two results."""
    recalibration = {
        "id": "there",
        "label": "There",
        "source": "invented",
        "years": 10,
        "equations": {"all": {"intercept": -0.3, "slope": 0.8, "covariance": [[0.02, 0.001], [0.001, 0.01]]}},
    }
    people = {
        "source": "invented",
        "numbers": [{"id": "age", "mean": 55, "sd": 9}],
        "correlations": [[1]],
        "yes_no": [{"id": "smoker", "intercept": -0.5, "coefficients": {"age": 0.01}}],
    }
    tree = tree_of(tiny_logit_model())
    tree = changed(
        tree,
        ("/model/recalibrations/-", recalibration),
        ("/model/population", people),
        ("/model/predictors/1/may_be_missing", True),
    )
    model = model_of(tree)
    entry = {"age": "50", "prior_event": "no"}
    known = [
        assess(model, entry_from_texts(entry | {"smoker": answer}), recalibration="there", at=NOW).estimate
        for answer in ("no", "yes")
    ]
    open_ = assess(model, entry_from_texts(entry | {"smoker": "unknown"}), recalibration="there", at=NOW).estimate
    share = 1 / (1 + exp(0.0))
    assert open_ is not None
    assert open_.band is not None
    no, yes = known
    assert no is not None
    assert yes is not None
    assert no.band is not None
    assert yes.band is not None
    assert open_.probability == pytest.approx((1 - share) * no.probability + share * yes.probability, rel=1e-12)
    assert no.band.lower < open_.band.lower < yes.band.lower
    assert no.band.upper < open_.band.upper < yes.band.upper


def test_a_known_value_near_a_cut_says_what_the_average_would_be_there() -> None:
    model = with_people(DIABETES, "weight")
    assessment = of(model, WOMAN_WEIGHED, weight="unknown", hdl_cholesterol="50")
    (near,) = about(assessment, FindingCode.NEAR_CUT)
    beyond = estimated(of(model, WOMAN_WEIGHED, weight="unknown", hdl_cholesterol="49.50005"))
    assert f"the result would be {percent(beyond.probability, beyond.complement)}." in near.message
    # a cut in the open value is averaged over and is nobody's rounding
    assert near.field == "hdl_cholesterol"


@pytest.mark.parametrize(
    ("open_", "words"),
    [
        (("parent_diabetes",), "Over all answers to "),
        (("glucose",), "Over the usual limits of Fasting glucose, "),
        (("glucose", "parent_diabetes"), "Over "),
    ],
)
def test_undescribed_people_give_a_range_and_no_number(open_: tuple[str, ...], words: str) -> None:
    model = with_people(DIABETES, "glucose", "parent_diabetes", described=False)
    assessment = of(model, WOMAN_WEIGHED, **dict.fromkeys(open_, "unknown"))
    assert assessment.estimate is None
    assert [stop.field for stop in assessment.stops] == [f.id for f in model.fields if f.id in open_]
    tried: list[dict[str, str]] = [{}]
    for field, ends in (("glucose", ("90", "126")), ("parent_diabetes", ("no", "yes"))):
        if field in open_:
            tried = [one | {field: end} for one in tried for end in ends]
    results = [estimated(of(model, WOMAN_WEIGHED, **one)) for one in tried]
    low, high = (pick(results, key=lambda e: e.probability) for pick in (min, max))
    for stop in assessment.stops:
        assert stop.code is FindingCode.NOT_MEASURED
        assert "there is no single number" in stop.message
        assert words in stop.message
        between = " and ".join(percent(end.probability, end.complement) for end in (low, high))
        assert stop.message.endswith(f"it would lie between {between}.")


def test_an_open_value_that_the_equation_does_not_ask_for_changes_nothing() -> None:
    """With body mass index typed, weight plays no part."""
    model = with_people(DIABETES, "weight")
    typed = {**WOMAN_WEIGHED, "bmi": "28"}
    open_ = estimated(of(model, typed, weight="unknown"))
    assert open_.probability == estimated(of(model, typed)).probability
    assert open_.not_measured is None


def test_two_open_values_are_said_once_where_one_sentence_holds_for_both() -> None:
    assessment = run(LIPIDS, WOMAN_61, total_cholesterol="unknown", hdl_cholesterol="unknown")
    total, hdl = (open_finding(assessment, id).message for id in ("total_cholesterol", "hdl_cholesterol"))
    assert "If both were measured, the number would lie between " in total
    assert "Source: " in total
    assert hdl == "HDL cholesterol: not measured. The number is an average over what is known of such people."


@settings(max_examples=60, deadline=None)
@given(
    age=st.integers(30, 74),
    hdl=st.floats(30, 90),
    systolic=st.integers(95, 190),
    sex=st.sampled_from(["female", "male"]),
    answers=st.tuples(*[st.sampled_from(["no", "yes"])] * 2),
)
def test_the_average_lies_between_its_extremes(
    age: int, hdl: float, systolic: int, sex: str, answers: tuple[str, str]
) -> None:
    entry = WOMAN_61 | {
        "age": str(age),
        "sex": sex,
        "hdl_cholesterol": f"{hdl:.1f}",
        "systolic_bp": str(systolic),
        "bp_treated": answers[0],
        "diabetes": answers[1],
    }
    open_ = estimated(run(LIPIDS, entry, smoker="unknown"))
    no, yes = (probability(run(LIPIDS, entry, smoker=answer)) for answer in ("no", "yes"))
    assert no < open_.probability < yes
    wide = estimated(run(LIPIDS, entry, smoker="unknown", total_cholesterol="unknown"))
    assert wide.not_measured is not None
    assert open_.not_measured is not None
    assert wide.not_measured.link_sd > open_.not_measured.link_sd > 0
    assert wide.band is not None
    assert wide.band.lower < wide.probability < wide.band.upper
