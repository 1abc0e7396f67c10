"""In times of whole years a right model is not accused, and one that is far off still is: invented cohorts, many seeds.

The bounds by hand: of ten people two have the event and two are lost in year 1, of the other six one has it in year 2.
By 2 years at least 2/10 (the event of year 2 came after it, the lost after the events of year 1), at most
1 - (6/8)(5/6) = 3/8 (it came before, the lost went first).
"""

from collections.abc import Callable
from dataclasses import replace
from math import log

import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.validation.coarse_faults import search_within_bounds
from clinicalc.validation.coarse_times import bound_coarse_times, share_by
from clinicalc.validation.faults import find_faults
from clinicalc.validation.foretelling import outcome_at, predict_people
from clinicalc.validation.people import find_people
from clinicalc.validation.predicted import Outcome
from clinicalc.validation.search import Search
from clinicalc.validation.validated import FaultKind, Validation
from clinicalc.validation.validating import validate_model
from tests.validation.invented_cohort import Invented, Wrong, invent, invented_model

Array = NDArray[np.float64]
TIMES = np.array([1.0, 1.0, 1.0, 1.0, 2.0, 3.0, 3.0, 3.0, 3.0, 3.0])
STATUS = np.array([1.0, 1.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 0.0, 0.0])
SEEDS = range(20)
ROUNDED = pytest.mark.parametrize("rounded", [np.ceil, np.floor, np.round])
Rounded = Callable[[Array], Array]


def _in_years(rounded: Rounded, seed: int, wrong: Wrong = "", shift: float = 0.0) -> Invented:
    invented = invent("cox", seed, wrong, shift=shift)
    outcome = invented.cohort.outcome
    assert isinstance(outcome, SurvivalOutcome)
    whole = SurvivalOutcome(rounded(outcome.times / 365.25), outcome.status, None, "a")
    return replace(invented, cohort=replace(invented.cohort, outcome=whole))


def _search(invented: Invented) -> tuple[Search, Search]:
    """As recorded, and within bounds."""
    model = invented_model("cox")
    people = find_people(model, invented.cohort, invented.plan)
    (span,) = model.spans
    predicted, outcome = predict_people(model, people, span), outcome_at(model, people, span)

    def look(seen: Outcome) -> Search:
        return find_faults(model, people, predicted, seen, span, groups=invented.plan.groups)

    return look(outcome), search_within_bounds(look, outcome, span)


def _validate(invented: Invented) -> Validation:
    return validate_model(invented_model("cox"), invented.cohort, invented.plan)


def test_both_bounds_are_those_worked_out_by_hand() -> None:
    bounds = bound_coarse_times(Watched(TIMES, STATUS), Span(2))
    assert bounds is not None
    assert share_by(bounds.fewest, Span(2)) == pytest.approx(2 / 10, abs=1e-15)
    assert share_by(bounds.most, Span(2)) == pytest.approx(3 / 8, abs=1e-15)


def test_an_event_recorded_within_a_step_of_a_horizon_between_steps_may_lie_on_either_side() -> None:
    bounds = bound_coarse_times(Watched(TIMES, STATUS), Span(1.5))
    assert bounds is not None
    assert share_by(bounds.fewest, Span(1.5)) == 0.0  # the events of year 1 came after 1.5 years
    assert share_by(bounds.most, Span(1.5)) == pytest.approx(3 / 8, abs=1e-15)  # that of year 2 came by then


def test_times_in_days_have_no_bounds() -> None:
    for seed in range(3):
        invented = invent("cox", seed)
        as_recorded, within = _search(invented)
        assert within.coarse is None
        assert (within.shift, within.slope, within.groups) == (as_recorded.shift, as_recorded.slope, as_recorded.groups)


@ROUNDED
def test_at_most_one_of_twenty_faultless_cohorts_in_whole_years_is_accused(rounded: Rounded) -> None:
    accused = [seed for seed in SEEDS if _search(_in_years(rounded, seed))[1].findings]
    assert len(accused) <= 1


def test_faultless_cohorts_were_accused_of_what_does_not_hold_at_both_ends() -> None:
    cohorts = [_search(_in_years(np.ceil, seed)) for seed in SEEDS]
    freed = [within for as_recorded, within in cohorts if as_recorded.findings and not within.findings]
    assert len(freed) >= 4
    assert all(within.coarse is not None and within.coarse.unsure for within in freed)


@ROUNDED
@pytest.mark.parametrize("factor", [0.5, 0.6])
def test_far_fewer_events_than_predicted_are_named_in_whole_years(rounded: Rounded, factor: float) -> None:
    named = 0
    for seed in SEEDS:
        within = _search(_in_years(rounded, seed, shift=log(factor)))[1]
        named += [one.kind for one in within.findings] == [FaultKind.TOO_HIGH]
    assert named >= 18


@ROUNDED
def test_a_slope_far_off_and_a_group_far_off_are_named_in_whole_years(rounded: Rounded) -> None:
    slopes = groups = 0
    for seed in SEEDS:
        slope = _search(_in_years(rounded, seed, "slope"))[1]
        wanted = FaultKind.TOO_EXTREME if seed % 4 < 2 else FaultKind.TOO_MODERATE
        slopes += bool(slope.findings) and slope.findings[0].kind is wanted
        invented = _in_years(rounded, seed, "group")
        groups += [one.at for one in _search(invented)[1].findings] == [invented.at]
    assert slopes >= 18
    assert groups >= 16


def test_the_verdict_says_that_whole_years_cannot_tell_with_both_bounds() -> None:
    found = _validate(_in_years(np.ceil, 0))
    assert not found.faults
    said = found.verdict[0]
    assert said.startswith("Times in whole years cannot tell whether the predictions are right: ")
    invented = _in_years(np.ceil, 0)
    people = find_people(invented_model("cox"), invented.cohort, invented.plan)
    seen = outcome_at(invented_model("cox"), people, Span(10))
    assert isinstance(seen, Watched)
    bounds = bound_coarse_times(seen, Span(10))
    assert bounds is not None
    low, high = (100 * share_by(each, Span(10)) for each in (bounds.fewest, bounds.most))
    assert f"from {low:.1f}\u202f% to {high:.1f}\u202f%" in said
    assert not any(sentence.startswith("Nothing that was looked for") for sentence in found.verdict)


def test_the_verdict_of_a_fault_at_both_ends_names_it_first_and_says_both() -> None:
    verdict = _validate(_in_years(np.round, 1, shift=log(0.5))).verdict
    assert verdict[0].startswith("The predictions are too high throughout: ")
    assert verdict[1].startswith("Times in whole years leave more open: ")
    assert verdict[1].endswith("What is named here is found at both ends.")


def test_a_group_is_held_against_the_others_and_these_are_not_called_as_predicted() -> None:
    verdict = " ".join(_validate(_in_years(np.ceil, 0, "group")).verdict)
    assert "One group is off against the others, Smokes now: Yes" in verdict
    assert "in the others as predicted" not in verdict


def test_less_is_promised_to_be_seen_than_in_days() -> None:
    as_recorded, within = _search(_in_years(np.floor, 0))
    assert within.coarse is not None
    assert within.shift > as_recorded.shift + 0.1
    assert all(
        one.factor >= each.factor
        for one in within.groups
        for each in as_recorded.groups
        if (one.label, one.level) == (each.label, each.level)
    )
