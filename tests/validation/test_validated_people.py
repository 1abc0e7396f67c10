"""Who is used, and where everybody else went; horizons, recalibrations and competing events of those used."""

from collections.abc import Mapping
from dataclasses import replace

import msgspec
import numpy as np
import pytest

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.model import prepare_model
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, SurvivalOutcome
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.errors import UsageError, ValidationRefused
from clinicalc.estimation.calibration_groups import Watched
from clinicalc.validation.foretelling import choose_spans, outcome_at, predict_people
from clinicalc.validation.people import find_people
from clinicalc.validation.plan import ExcludedPeople, ValidationPlan
from clinicalc.validation.predicted import YesNo
from clinicalc.validation.validating import validate_model
from tests.coefficients.tiny_model import read_of
from tests.validation.invented_cohort import invent, invented_model

NAN = float("nan")


def _eight() -> CheckedCohort:
    """Eight people, of whom the last three can be used."""
    columns = {
        "age": [50, 50, 50, 50, 50, 50, 90, 90],
        "weight": [80, 80, NAN, 80, 30, 80, 80, 80],
        "systolic_bp": [130.0] * 8,
        "urea": [5, 5, NAN, NAN, 5, 5, 5, 5],
        "sex": [0.0] * 8,
        "smoker": [0.0] * 8,
        "diabetes": [0.0] * 8,
    }
    y = [1, NAN, 1, 0, 1, 1, 0, 0]
    return _cohort({id: np.array(values, dtype=np.float64) for id, values in columns.items()}, y)


def _cohort(columns: Mapping[str, np.ndarray], y: list[float]) -> CheckedCohort:
    return CheckedCohort(len(y), columns, BinaryOutcome(np.array(y, dtype=np.float64)), None, np.arange(len(y)), ())


def test_everybody_is_counted_once() -> None:
    first = np.arange(8) == 0
    plan = ValidationPlan(exclusions=(ExcludedPeople("prior", "Before?", first),))
    people = find_people(invented_model("logistic", stops=True), _eight(), plan)
    count = people.count
    assert (count.in_file, count.excluded, count.not_covered, count.no_outcome) == (8, {"prior": 1}, 0, 1)
    assert (count.missing, count.missing_by) == (2, {"weight": 1, "urea": 2})
    assert (count.refused, count.refused_by) == (1, {"weight": 1})
    assert (count.used, count.beyond) == (3, {"age": 2})
    np.testing.assert_array_equal(people.rows, [5, 6, 7])
    assert sum(count.excluded.values()) + 1 + count.missing + count.refused + count.used == count.in_file
    assert isinstance(people.outcome, BinaryOutcome)
    np.testing.assert_array_equal(people.outcome.y, [1, 0, 0])


def test_predicted_is_what_the_formula_gives() -> None:
    model = invented_model("logistic")
    people = find_people(model, _eight(), ValidationPlan())
    predicted = predict_people(model, people, Span(10))
    eta = -2.4 + 0.06 * (50 - 55) + 0.12 * (5 - 5.5)  # weight 80 and pressure 130 are the centres
    assert predicted.probability[0] == pytest.approx(1 / (1 + np.exp(-eta)), rel=1e-12)


def test_whom_no_equation_covers_is_not_the_same_as_whose_answer_is_missing() -> None:
    content = invented_model("logistic").content
    women = msgspec.structs.replace(content.equations[0], applies_when={"sex": ("female",)})
    model = prepare_model(read_of(msgspec.structs.replace(content, equations=(women,))))
    cohort = _eight()
    sex = np.array([0, 0, 0, 0, 0, 0, 1, NAN])
    count = find_people(model, replace(cohort, columns={**cohort.columns, "sex": sex}), ValidationPlan()).count
    assert (count.not_covered, count.no_outcome, count.missing, count.used) == (1, 1, 3, 3)
    assert count.missing_by["sex"] == 1


def test_nobody_left_says_where_they_went() -> None:
    cohort = _eight()
    weights = np.linspace(140, 230, 8)
    heavy = replace(cohort, columns={**cohort.columns, "weight": weights})
    with pytest.raises(ValidationRefused) as refused:
        find_people(invented_model("logistic", stops=True), heavy, ValidationPlan())
    said = str(refused.value)
    assert "of 8 people in the file 1 without an outcome, 2 without Urea and 5 outside the limits of Weight" in said
    assert "The column of Weight seems to be in lb and was taken for kg." in said


def test_stops_of_the_data_stop_but_not_those_of_a_fit() -> None:
    cohort = invent("logistic", 1, "", 50).cohort
    model = invented_model("logistic")
    constant = DataProblem(Grade.STOP, "sex", ProblemCode.CONSTANT, 50, (), "It is the same for everybody.")
    assert find_people(model, replace(cohort, problems=(constant,)), ValidationPlan()).count.used == 50
    missing = DataProblem(Grade.STOP, "y", ProblemCode.OUTCOME_MISSING, 0, (), "It says of nobody what happened.")
    with pytest.raises(ValidationRefused, match="column y: It says of nobody what happened"):
        find_people(model, replace(cohort, problems=(constant, missing)), ValidationPlan())


def _watched(longest: float) -> CheckedCohort:
    cohort = invent("cox", 1, "", 200).cohort
    assert isinstance(cohort.outcome, SurvivalOutcome)
    times = np.minimum(cohort.outcome.times, longest)
    status = np.where(cohort.outcome.times > longest, 0.0, cohort.outcome.status)
    return replace(cohort, outcome=SurvivalOutcome(times, status, None, "d"))


def test_a_horizon_beyond_the_follow_up_is_refused_and_the_longest_named() -> None:
    model = invented_model("cox")
    people = find_people(model, _watched(3000.0), ValidationPlan())
    with pytest.raises(UsageError, match=r"the longest that anybody was watched is 8\.21 years"):
        choose_spans(model, people, ValidationPlan())


def test_watched_to_the_day_is_watched() -> None:
    model = invented_model("cox")
    cohort = _watched(3652.5)
    people = find_people(model, cohort, ValidationPlan())
    assert choose_spans(model, people, ValidationPlan()) == ((Span(10),), ())


def test_a_horizon_or_recalibration_that_the_model_has_not_is_refused() -> None:
    model = invented_model("cox")
    cohort = invent("cox", 1, "", 200).cohort
    with pytest.raises(UsageError, match=r"gives no risk by 5 years\. Ask for 10 years"):
        validate_model(model, cohort, ValidationPlan(spans=(Span(5),)))
    with pytest.raises(UsageError, match=r'has no recalibration "low" for 10 years\. It has none'):
        validate_model(model, cohort, ValidationPlan(recalibration="low"))


def test_competing_events_end_the_watching_of_a_model_that_takes_them_so_and_it_is_said() -> None:
    model, invented = invented_model("cox"), invent("cox", 2)
    people = find_people(model, invented.cohort, invented.plan)
    seen = outcome_at(model, people, Span(10))
    assert isinstance(seen, Watched)
    assert not seen.competing
    found = validate_model(model, invented.cohort, invented.plan)
    (remark,) = (one for one in found.remarks if "Aalen–Johansen" in one)
    # of 100 people 1 - S falls short by the deaths that came first; what is predicted is the higher of the two
    observed = found.horizons[0].observed.value
    assert observed is not None
    assert f"beside {100 * observed:.1f}" in remark


def test_competing_events_stay_for_a_model_of_the_subdistribution() -> None:
    content = invented_model("cox").content
    handled = msgspec.structs.replace(content.equations[0].competing_events, handled="subdistribution")
    equation = msgspec.structs.replace(content.equations[0], competing_events=handled)
    model, invented = prepare_model(read_of(msgspec.structs.replace(content, equations=(equation,)))), invent("cox", 2)
    people = find_people(model, invented.cohort, invented.plan)
    seen = outcome_at(model, people, Span(10))
    assert isinstance(seen, Watched)
    assert seen.competing
    assert not any("Aalen–Johansen" in one for one in validate_model(model, invented.cohort, invented.plan).remarks)


def test_a_yes_or_no_stays_one() -> None:
    model = invented_model("logistic")
    people = find_people(model, _eight(), ValidationPlan())
    assert isinstance(outcome_at(model, people, Span(10)), YesNo)


def test_groups_of_the_plan_have_figures_and_no_others() -> None:
    invented = invent("logistic", 1)
    found = validate_model(invented_model("logistic"), invented.cohort, invented.plan)
    assert [(group.by, group.level) for group in found.groups] == [("practice", level) for level in "ABCDEF"]
    assert sum(group.people for group in found.groups) == found.count.used
    assert found.cohort == "Invented people"
    assert [point.point for point in found.horizons[0].decisions] == [0.1]
