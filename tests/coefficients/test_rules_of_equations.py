"""Terms, horizons and bands of a model, broken on purpose: the place and the words of the refusal."""

import pytest

from tests.coefficients.spoiling import BAND, CLOGLOG, E0, E1, LOGIT, STEP, Change, only_said, said
from tests.coefficients.tiny_model import DROP, Tree, changed, refusals


@pytest.mark.parametrize(
    ("steps", "path", "words"),
    [
        ([{}], f"{STEP}/0", "exactly one thing; nothing stands here"),
        ([{"subtract": 1, "from": 2}], f"{STEP}/0", '"subtract" and "from" stand here'),
        ([{"divide": 0}], f"{STEP}/0/divide", "dividing by 0"),
        ([{"multiply": 0}], f"{STEP}/0/multiply", "multiplying by 0"),
        ([{"power": 0}], f"{STEP}/0/power", "the power 0"),
        ([{"clip_low": 5}, {"clip_high": 3}], f"{STEP}/1", "look which is which"),
        ([{"spline": {"knots": [1, 2, 2], "basis": 1}}], f"{STEP}/0/spline/knots", "must rise strictly"),
        (
            [{"spline": {"knots": [1, 2, 3], "basis": 2}}],
            f"{STEP}/0/spline/basis",
            "3 knots have the basis functions 1 to 1",
        ),
        ([{"is": ["yes"]}], f"{STEP}/0/is", '"age" is a number and has no answers'),
    ],
)
def test_steps_do_one_sane_thing(steps: list[Tree], path: str, words: str) -> None:
    only_said(LOGIT, path, words, (STEP, steps))


def test_answers_are_compared_first_and_exist() -> None:
    steps = f"{E0}/terms/1/product/0/steps"
    only_said(LOGIT, f"{steps}/1/is", "must be the first step", (steps, [{"subtract": 1}, {"is": ["no"]}]))
    only_said(LOGIT, f"{steps}/0/is/0", '"never" is no answer to "smoker"', (steps, [{"is": ["never"]}]))
    only_said(LOGIT, f"{steps}/0/is", "true of every answer", (steps, [{"is": ["no", "yes"]}]))
    assert refusals(changed(LOGIT, (steps, [{"is": ["no"]}, {"multiply": 2}]))) == {}
    factor = f"{E0}/terms/0/product/0"
    only_said(CLOGLOG, factor, "is a choice and has no number of its own", (factor, {"of": "sex"}))


def test_a_printed_interval_is_in_order_and_on_its_scale() -> None:
    path = f"{E0}/terms/0/interval"
    interval = {"scale": "ratio", "level": 0.95, "lower": -0.5, "upper": 2}
    only_said(LOGIT, f"{path}/lower", "a ratio is more than 0", (path, interval))
    only_said(LOGIT, path, "must be less than upper", (path, {**interval, "lower": 3}))
    only_said(LOGIT, path, "lies outside its own interval", (path, {**interval, "lower": 1.1}))  # exp(0.06) is 1.06
    assert refusals(changed(LOGIT, (path, {**interval, "lower": 1.01}))) == {}
    assert refusals(changed(LOGIT, (path, {**interval, "scale": "link"}))) == {}


def test_there_are_at_most_five_hundred_terms() -> None:
    terms = [{"id": f"t{number}", "coefficient": 1, "product": [{"of": "age"}], "fixed": True} for number in range(501)]
    said(LOGIT, "/model/equations", "501 terms together; at most 500", (f"{E0}/terms", terms))


@pytest.mark.parametrize(
    ("path", "words", "horizons"),
    [
        (f"{E0}/horizons/0", "exactly one way", [{"intercept": -5}]),
        (f"{E0}/horizons/0", "exactly one way", [{"years": 10, "time": 10, "unit": "a", "intercept": -5}]),
        (f"{E0}/horizons/0", "exactly one way", [{"time": 10, "intercept": -5}]),
        (f"{E0}/horizons/0/unit", '"y" is no unit of time', [{"time": 10, "unit": "y", "intercept": -5}]),
        (f"{E0}/horizons/0", 'with the link "logit"', [{"years": 10}]),
        (f"{E0}/horizons/0", 'with the link "logit"', [{"years": 10, "intercept": -5, "log_cumulative_hazard": 1}]),
        (f"{E0}/horizons/1", "10 years stands twice", [{"years": 10, "intercept": -5}, {"years": 10, "intercept": -5}]),
        (
            f"{E0}/horizons/0",
            "must not fall with time",
            [{"years": 10, "intercept": -5}, {"years": 5, "intercept": -4}],
        ),
        (
            f"{E0}/horizons/0/events",
            "5 is more than the 4 people",
            [{"years": 10, "intercept": -5, "events": 5, "people": 4}],
        ),
        (
            f"{E0}/horizons/0/survival_interval",
            "must be less than upper",
            [{"years": 10, "intercept": -5, "survival_interval": {"level": 0.95, "lower": 0.9, "upper": 0.9}}],
        ),
    ],
)
def test_horizons_of_a_logit(path: str, words: str, horizons: list[Tree]) -> None:
    said(LOGIT, path, words, (f"{E0}/horizons", horizons))


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        (f"{E0}/horizons/0", 'or "log_cumulative_hazard"', (f"{E0}/horizons/0/mean_linear_predictor", DROP)),
        (f"{E0}/horizons/0", "and no other baseline", (f"{E0}/horizons/0/intercept", 1)),
        (
            f"{E0}/horizons/0/baseline_survival",
            "Is it a percentage? Then write 0.98",
            (f"{E0}/horizons/0/baseline_survival", 98),
        ),
        (f"{E0}/horizons/0/baseline_survival", "between 0 and 1", (f"{E0}/horizons/0/baseline_survival", 1)),
        (f"{E0}/horizons/1", "it is not above that at 5 years", (f"{E0}/horizons/1/baseline_survival", 0.98)),
        (f"{E1}/horizons", '"men" has 5 years, "women" has 5 years and 10 years', (f"{E1}/horizons/1", DROP)),
    ],
)
def test_horizons_of_a_cloglog(path: str, words: str, change: Change) -> None:
    said(CLOGLOG, path, words, change)


@pytest.mark.parametrize(
    ("path", "words", "change"),
    [
        (f"{BAND}/covariance", "the matrix has 1 rows, and there are 2", (f"{BAND}/covariance/1", DROP)),
        (f"{BAND}/covariance", "row 2 of the matrix has 1 entries", (f"{BAND}/covariance/1/1", DROP)),
        (f"{BAND}/covariance", "the matrix has 2 rows, and there are 1", (f"{E0}/terms/0/fixed", True)),
        (f"{BAND}/covariance", "is not symmetric: row 1, column 2", (f"{BAND}/covariance/1/0", 0.0010001)),
        (f"{BAND}/covariance", "entry 1 of its diagonal", (f"{BAND}/covariance/0/0", -0.0004)),
        (f"{BAND}/covariance", "is not positive definite", (f"{BAND}/covariance", [[0.0004, 0.0041], [0.0041, 0.04]])),
        (f"{BAND}/covariance", "is not positive definite", (f"{BAND}/covariance", [[0.0004, 0.004], [0.004, 0.04]])),
        (f"{BAND}/covariance", "far too large beside", (f"{BAND}/covariance", [[1e-300, 1e10], [1e10, 1e-300]])),
        (f"{BAND}/at_centre/0/centre", "the centre has 1 entries", (f"{BAND}/at_centre/0/centre/0", DROP)),
        (f"{BAND}/at_centre", "one entry for the horizon of 10 years; there are 0", (f"{BAND}/at_centre", [])),
        (f"{BAND}/at_centre/0", "has no horizon of 9 years", (f"{BAND}/at_centre/0/years", 9)),
    ],
)
def test_a_covariance_fits_its_terms_and_is_positive_definite(path: str, words: str, change: Change) -> None:
    said(LOGIT, path, words, change)


def test_a_covariance_on_wildly_different_scales_is_still_positive_definite() -> None:
    covariance = [[1e-12, 0.5e-3], [0.5e-3, 1e6]]  # correlation 0.5
    assert refusals(changed(LOGIT, (f"{BAND}/covariance", covariance))) == {}


def test_when_every_term_is_fixed_there_is_no_covariance() -> None:
    words = "there is nothing to have a covariance"
    only_said(LOGIT, BAND, words, (f"{E0}/terms/0/fixed", True), (f"{E0}/terms/1/fixed", True))


def test_draws_are_enough_and_of_the_right_width() -> None:
    draws: Tree = {"basis": "draws", "coefficients": [[0.06, 0.5]] * 200, "baselines": [[-5]] * 200}
    assert refusals(changed(LOGIT, (BAND, draws))) == {}
    few = {**draws, "coefficients": [[0.06, 0.5]] * 199}
    said(LOGIT, f"{BAND}/coefficients", "there are 199 draws", (BAND, few))
    said(LOGIT, f"{BAND}/baselines", "200 rows of baselines and 199 of coefficients", (BAND, few))
    many = {**draws, "coefficients": [[0.06, 0.5]] * 5001, "baselines": [[-5]] * 5001}
    only_said(LOGIT, f"{BAND}/coefficients", "there are 5001 draws", (BAND, many))
    only_said(LOGIT, f"{BAND}/coefficients/0", "2 estimated terms", (BAND, {**draws, "coefficients": [[1]] * 200}))
    only_said(LOGIT, f"{BAND}/baselines/0", "1 horizons", (BAND, {**draws, "baselines": [[1, 2]] * 200}))
