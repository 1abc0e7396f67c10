"""Times in whole years are said to move the observed risk, times in days are not.

Worked out by hand: of ten people two have the event and two are lost in the first year, of the other six one has it in
the second. Events first: 1 - (8/10)(5/6) = 1/3; the lost first: 1 - (6/8)(5/6) = 3/8.
"""

from dataclasses import replace

import numpy as np
import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.validation.coarse_times import suspect_coarse_times
from clinicalc.validation.validating import validate_model
from tests.validation.invented_cohort import invent, invented_model

TIMES = np.array([1.0, 1.0, 1.0, 1.0, 2.0, 3.0, 3.0, 3.0, 3.0, 3.0])
STATUS = np.array([1.0, 1.0, 0.0, 0.0, 1.0, 0.0, 0.0, 0.0, 0.0, 0.0])


def test_both_risks_are_those_worked_out_by_hand() -> None:
    (said,) = suspect_coarse_times(Watched(TIMES, STATUS), Span(2))
    assert "33.3\u202f% had the event by 2 years; counted as gone before it, 37.5\u202f%." in said


def test_who_was_watched_to_the_horizon_is_not_counted_as_gone_before_it() -> None:
    at_end = Watched(np.array([1.0, 1.5, 2.0, 2.0, 2.0]), np.array([1.0, 0.0, 1.0, 0.0, 0.0]))
    assert not list(suspect_coarse_times(at_end, Span(2)))


@pytest.mark.parametrize("late", [True, False])
def test_nothing_is_said_where_it_does_not_matter(late: bool) -> None:
    apart = Watched(TIMES + 0.01 * np.arange(10), STATUS)
    coarse = Watched(TIMES, STATUS, np.zeros(10))
    assert not list(suspect_coarse_times(coarse if late else apart, Span(2)))


def test_a_right_model_accused_by_whole_years_is_remarked_on() -> None:
    invented = invent("cox", 3)
    outcome = invented.cohort.outcome
    assert isinstance(outcome, SurvivalOutcome)
    whole = SurvivalOutcome(np.ceil(outcome.times / 365.25), outcome.status, None, "a")
    model = invented_model("cox")
    rounded = validate_model(model, replace(invented.cohort, outcome=whole), invented.plan)
    exact = validate_model(model, invented.cohort, invented.plan)
    assert any("as where times are whole years" in remark for remark in rounded.remarks)
    assert not any("as where times are whole years" in remark for remark in exact.remarks)
