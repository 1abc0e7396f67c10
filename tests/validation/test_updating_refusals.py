"""What an update is refused for, each by a sentence and a code; what is left out is counted."""

from collections.abc import Callable
from dataclasses import replace

import msgspec
import numpy as np
import pytest

from clinicalc.assessment.model import Model
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome, Outcome, SurvivalOutcome
from clinicalc.errors import FitRefused
from clinicalc.validation.updated import UpdateMethod, UpdateWish
from clinicalc.validation.updating import update_model
from clinicalc.validation.updating_faults import UpdateFault
from tests.coefficients.tiny_model import tiny_cloglog_model
from tests.validation.updated_people import (
    FIVE_YEARS,
    Array,
    gbsg_people,
    pima_model,
    pima_people,
    proved,
    rotterdam_model,
)

AT_FIVE = (FIVE_YEARS,)


def refusal(model: Model, people: dict[str, Array], outcome: Outcome, wish: UpdateWish) -> tuple[str, str]:
    """The code and the sentence."""
    with pytest.raises(FitRefused) as caught:
        update_model(model, people, outcome, wish)
    said = str(caught.value)
    assert said.endswith(".")
    assert not said.startswith("all:")
    assert ".." not in said
    return caught.value.code, said


def refuse_pima(outcome: BinaryOutcome, method: str = "intercept") -> tuple[str, str]:
    return refusal(pima_model(), pima_people()[0], outcome, UpdateWish(UpdateMethod(method)))


def test_nobody_or_everybody_with_the_event() -> None:
    y = pima_people()[1].y
    for method in ("closed_test", "intercept", "intercept_slope", "refit"):
        assert refuse_pima(BinaryOutcome(np.zeros(len(y))), method)[0] == UpdateFault.NO_EVENTS
        assert refuse_pima(BinaryOutcome(np.ones(len(y))), method)[0] == UpdateFault.NO_OTHERS
    code, said = refuse_pima(BinaryOutcome(np.full(len(y), np.nan)))
    assert code == UpdateFault.NOBODY
    people, outcome = gbsg_people()
    none = replace(outcome, status=np.zeros(len(outcome.status)))
    for method in UpdateMethod:
        if method is not UpdateMethod.KEEP:
            code, said = refusal(rotterdam_model(), people, none, UpdateWish(method, spans=AT_FIVE))
            assert code == UpdateFault.NO_EVENTS
            assert "none of the 686 people" in said


def test_everybody_had_the_event_is_an_update_of_a_hazard_like_any_other() -> None:
    people, outcome = gbsg_people()
    everybody = replace(outcome, status=np.ones(len(outcome.status)))
    found = update_model(rotterdam_model(), people, everybody, UpdateWish(UpdateMethod.INTERCEPT, spans=AT_FIVE))
    assert found.equations[0].lines[0].intercept > 0


def test_too_few_events_for_a_refit_offer_less_and_are_left_out_of_the_tests() -> None:
    people, outcome = pima_people()
    few = np.where(np.cumsum(outcome.y) <= 30, outcome.y, np.nan)
    code, said = refuse_pima(BinaryOutcome(few), "refit")
    assert code == UpdateFault.TOO_FEW_FOR_REFIT
    assert "takes 50 events" in said
    assert "there are 30" in said
    assert '"intercept_slope"' in said
    tested = update_model(pima_model(), people, BinaryOutcome(few), UpdateWish(UpdateMethod.CLOSED_TEST))
    testing = tested.equations[0].testing
    assert testing is not None
    assert {test.fuller for test in testing.tests} == {UpdateMethod.INTERCEPT_SLOPE}
    assert [test.df for test in testing.tests] == [2, 1]
    assert "takes 50 events" in testing.without_refit
    assert any("few for an update" in remark for remark in tested.remarks)
    people, followed = gbsg_people()
    short = replace(followed, status=np.where(np.arange(686) < 90, followed.status, 0.0))
    code, said = refusal(rotterdam_model(), people, short, UpdateWish(UpdateMethod.REFIT, spans=AT_FIVE))
    assert code == UpdateFault.TOO_FEW_FOR_REFIT


@pytest.mark.parametrize("method", ["intercept_slope", "closed_test", "two_scale"])
def test_predictions_all_equal_have_no_slope(method: str) -> None:
    people, outcome = gbsg_people()
    same = {name: np.full(len(column), column[0]) for name, column in people.items()}
    wish = UpdateWish(UpdateMethod(method), spans=AT_FIVE)
    code, said = refusal(rotterdam_model(), same, outcome, wish)
    assert code == UpdateFault.ALL_EQUAL
    assert 'ask for "intercept"' in said
    found = update_model(rotterdam_model(), same, outcome, UpdateWish(UpdateMethod.INTERCEPT, spans=AT_FIVE))
    assert found.equations[0].lines[0].people == 686


def test_a_slope_that_is_not_positive_is_explained() -> None:
    people, outcome = gbsg_people()
    turned = {name: -column for name, column in people.items()}
    for method in (UpdateMethod.INTERCEPT_SLOPE, UpdateMethod.TWO_SCALE):
        code, said = refusal(rotterdam_model(), turned, outcome, UpdateWish(method, spans=AT_FIVE, groups=4))
        assert code == UpdateFault.SLOPE_NOT_POSITIVE
        assert "wrong unit or an outcome coded the other way round" in said
    y = pima_people()[1].y
    code, said = refuse_pima(BinaryOutcome(1 - y), "intercept_slope")
    assert code == UpdateFault.SLOPE_NOT_POSITIVE
    assert "the slope is −0.955" in said


def test_horizons() -> None:
    people, outcome = gbsg_people()
    code, said = refusal(rotterdam_model(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT))
    assert code == UpdateFault.BEYOND_FOLLOW_UP
    assert "3650 days lies beyond the follow-up: the longest is 2659 days" in said
    code, said = refusal(rotterdam_model(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT, spans=(Span(7.0),)))
    assert code == UpdateFault.NOT_A_HORIZON
    assert "it has 365 days, 1825 days and 3650 days" in said
    late = replace(outcome, status=np.where(outcome.times > 400, outcome.status, 0.0))
    wish = UpdateWish(UpdateMethod.INTERCEPT, spans=rotterdam_model().spans[:2])
    assert refusal(rotterdam_model(), people, late, wish)[0] == UpdateFault.NO_EVENTS_BY_HORIZON
    wish = UpdateWish(UpdateMethod.INTERCEPT)
    code, said = refusal(rotterdam_model(), people, BinaryOutcome(outcome.status), wish)
    assert code == UpdateFault.ONE_HORIZON


def test_a_logistic_model_with_times_goes_by_groups_only() -> None:
    people, outcome = pima_people()
    times = SurvivalOutcome(np.full(332, 1.0), outcome.y, None, "a")
    code, _ = refusal(pima_model(), people, times, UpdateWish(UpdateMethod.INTERCEPT))
    assert code == UpdateFault.LOGIT_AND_TIMES
    by_times = update_model(pima_model(), people, times, UpdateWish(UpdateMethod.TWO_SCALE, groups=5)).equations[0]
    by_answers = update_model(pima_model(), people, outcome, UpdateWish(UpdateMethod.TWO_SCALE, groups=5)).equations[0]
    assert by_times.lines == by_answers.lines
    # five groups of one straight line: near the line of the people themselves
    whole = update_model(pima_model(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT_SLOPE)).equations[0]
    assert by_times.slope == pytest.approx(whole.slope, abs=2 * (whole.slope_se or 0))


def test_groups_that_cannot_be() -> None:
    people, outcome = gbsg_people()
    for groups in (2, 400):
        wish = UpdateWish(UpdateMethod.TWO_SCALE, spans=AT_FIVE, groups=groups)
        code, said = refusal(rotterdam_model(), people, outcome, wish)
        assert code == UpdateFault.GROUPS, said


def test_whoever_cannot_be_used_is_counted() -> None:
    people, outcome = pima_people()
    people["glu"][:3] = np.nan
    y = outcome.y.copy()
    y[2:7] = np.nan
    found = update_model(pima_model(), people, BinaryOutcome(y), UpdateWish(UpdateMethod.INTERCEPT))
    assert found.people == 332 - 7
    assert found.remarks[:2] == (
        "Left out of the update: 5 people whose outcome is not known.",
        "Left out of the update: 2 people who lack a value that their equation uses.",
    )


def people_of_two(seed: int = 1) -> tuple[dict[str, Array], SurvivalOutcome]:
    """Invented women and men of the tiny model, whose hazards are twice those that it says."""
    generator, n = np.random.default_rng(seed), 4000
    columns = {
        "age": generator.uniform(40, 80, n),
        "sex": generator.integers(0, 2, n).astype(float),
        "bp_treated": generator.integers(0, 2, n).astype(float),
        "total_cholesterol": generator.normal(5, 1, n),
    }
    lp = np.log(columns["age"]) * np.where(columns["sex"] == 0, 0.9, 1.0) + 0.4 * columns["bp_treated"]
    lp += 0.1 * (columns["total_cholesterol"] - 5) - np.where(columns["sex"] == 0, 3.5, 3.9)
    ten = 2 * np.where(columns["sex"] == 0, -np.log(0.95), -np.log(0.9)) * np.exp(lp)
    times = generator.exponential(10 / ten)
    ends = generator.uniform(8, 15, n)
    return columns, SurvivalOutcome(np.minimum(times, ends), (times <= ends).astype(float), None, "a")


def tiny() -> Model:
    """Women and men, horizons of 5 and 10 years, no band."""
    return proved(tiny_cloglog_model())


@pytest.mark.parametrize("method", ["intercept", "intercept_slope", "two_scale"])
def test_women_and_men_apart_and_together(method: str) -> None:
    people, outcome = people_of_two()
    apart = update_model(tiny(), people, outcome, UpdateWish(UpdateMethod(method)))
    together = update_model(tiny(), people, outcome, UpdateWish(UpdateMethod(method), together=True))
    women, men = together.equations
    assert (women.id, men.id) == ("women", "men")
    assert [(line.intercept, line.slope, line.covariance) for line in women.lines] == [
        (line.intercept, line.slope, line.covariance) for line in men.lines
    ]
    for both, one, other in zip(women.lines, *(found.lines for found in apart.equations), strict=True):
        if method == "intercept":
            assert min(one.intercept, other.intercept) <= both.intercept <= max(one.intercept, other.intercept)
            assert both.covariance[0] == pytest.approx(1 / (1 / one.covariance[0] + 1 / other.covariance[0]), rel=1e-12)
    ten = women.lines[1]
    if method == "intercept":
        assert abs(ten.intercept - np.log(2)) < 3 * np.sqrt(ten.covariance[0])
    assert abs(ten.slope - 1) < 3 * (women.slope_se or 1e-12)


def test_equations_choose_apart() -> None:
    people, outcome = people_of_two()
    # men of whom the model is right: their time runs half as fast
    men = people["sex"] == 1
    slower = replace(outcome, times=np.where(men, np.minimum(outcome.times * 2, 16.0), outcome.times))
    slower = replace(slower, status=np.where(men & (outcome.times * 2 > 16.0), 0.0, outcome.status))
    found = update_model(tiny(), people, slower, UpdateWish(UpdateMethod.CLOSED_TEST))
    assert [one.method for one in found.equations] == [UpdateMethod.INTERCEPT, UpdateMethod.KEEP]
    assert not found.keeps


def subdistribution() -> Model:
    """The tiny model as one of subdistribution hazards."""
    content = tiny_cloglog_model()
    competing = msgspec.structs.replace(content.equations[0].competing_events, handled="subdistribution")
    equations = tuple(msgspec.structs.replace(one, competing_events=competing) for one in content.equations)
    return proved(msgspec.structs.replace(content, equations=equations))


@pytest.mark.parametrize("make", [tiny, subdistribution])
def test_without_competing_events_fine_and_gray_is_cox(make: Callable[[], Model]) -> None:
    # all times differ, so that the rule for ties does not matter
    people, outcome = people_of_two()
    found = update_model(make(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT_SLOPE)).equations[0]
    cox = update_model(tiny(), people, outcome, UpdateWish(UpdateMethod.INTERCEPT_SLOPE)).equations[0]
    assert found.slope == pytest.approx(cox.slope, rel=1e-9)
    assert found.lines[1].intercept == pytest.approx(cox.lines[1].intercept, abs=1e-9)


def test_fine_and_gray_counts_competing_events_in_every_method() -> None:
    people, outcome = people_of_two()
    generator = np.random.default_rng(3)
    gone = generator.exponential(25.0, len(outcome.times))
    status = np.where(gone < outcome.times, 2.0, outcome.status)
    competing = SurvivalOutcome(np.minimum(gone, outcome.times), status, None, "a")
    cox = update_model(tiny(), people, competing, UpdateWish(UpdateMethod.INTERCEPT)).equations[0]
    found = {
        method: update_model(subdistribution(), people, competing, UpdateWish(method)).equations[0]
        for method in (UpdateMethod.INTERCEPT, UpdateMethod.INTERCEPT_SLOPE, UpdateMethod.REFIT, UpdateMethod.TWO_SCALE)
    }
    # people whom another event took are still counted among those who could have it
    assert found[UpdateMethod.INTERCEPT].lines[1].intercept < cox.lines[1].intercept
    assert found[UpdateMethod.INTERCEPT].competing > 100
    refit = found[UpdateMethod.REFIT].refit
    assert refit is not None
    assert refit.robust
    tested = update_model(subdistribution(), people, competing, UpdateWish(UpdateMethod.CLOSED_TEST)).equations[0]
    assert tested.testing is not None
    assert all(loglik is None for _, loglik in tested.testing.logliks)
    late = replace(competing, entry=competing.times / 2)
    wish = UpdateWish(UpdateMethod.INTERCEPT)
    assert refusal(subdistribution(), people, late, wish)[0] == UpdateFault.ENTERED_LATE
    none = replace(competing, status=np.where(status == 2, 0.0, status))
    wish = UpdateWish(UpdateMethod.REFIT)
    assert refusal(subdistribution(), people, none, wish)[0] == UpdateFault.NO_COMPETING


def test_refits_are_made_apart_and_keeping_is_not_asked_for() -> None:
    people, outcome = people_of_two()
    wish = UpdateWish(UpdateMethod.REFIT, together=True)
    assert refusal(tiny(), people, outcome, wish)[0] == UpdateFault.TOGETHER
    assert refusal(tiny(), people, outcome, UpdateWish(UpdateMethod.KEEP))[0] == UpdateFault.NOT_ASKED_FOR
