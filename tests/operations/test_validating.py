"""The verbs of a validation that window and command share."""

from pathlib import Path

import pytest

from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError, ValidationRefused
from clinicalc.operations.course import Course
from clinicalc.operations.validating import (
    check_people,
    choose_wish,
    name_version,
    open_validation,
    package_new_version,
    update,
    validate,
    validate_new_version,
)
from clinicalc.validation.updated import UpdateMethod
from tests.cli.northgate import MODEL, change_people, change_plan, lay_out


@pytest.fixture
def plan(tmp_path: Path) -> Path:
    """The shipped validation file, laid out in a folder of its own."""
    return lay_out(tmp_path)


def test_what_the_plan_asks_for_and_what_a_call_says_instead(plan: Path) -> None:
    settled = open_validation(plan)
    assert choose_wish(settled).method is UpdateMethod.CLOSED_TEST
    wish = choose_wish(settled, UpdateMethod.INTERCEPT)
    assert (wish.method, wish.spans) == (UpdateMethod.INTERCEPT, (Span(10.0),))
    assert name_version(settled).version == "1.1.0"
    new = name_version(settled, "2.0.0")
    assert (new.version, new.begins, new.ends) == ("2.0.0", "2012-01-01", "2022-12-31")
    assert new.cohort == "Tarnwick Northgate, everybody registered on 2012-01-01, invented"
    assert new.population.startswith("Nobody: it was fitted and updated")


def test_a_plan_without_an_update(plan: Path, tmp_path: Path) -> None:
    plan.write_text(plan.read_text(encoding="utf-8").partition("[update]")[0], encoding="utf-8")
    settled = open_validation(plan)
    for ask in (lambda: choose_wish(settled), lambda: name_version(settled)):
        with pytest.raises(UsageError):
            ask()
    assert choose_wish(settled, UpdateMethod.REFIT).method is UpdateMethod.REFIT
    assert name_version(settled, "1.0.1").population == ""


def test_a_plan_that_names_no_model(plan: Path, tmp_path: Path) -> None:
    change_plan(tmp_path, f'model = "{MODEL}"\n', "")
    with pytest.raises(UsageError, match="--model"):
        open_validation(plan)
    assert open_validation(plan, tmp_path / MODEL).model.content.id == "tarnwick-cvd-10y-cox"
    # its own faults come before the lack of a model
    change_plan(tmp_path, "horizons =", "horizon =")
    with pytest.raises(ValidationRefused, match="horizons"):
        open_validation(plan)


def test_a_column_that_is_the_same_for_everybody_forbids_no_validation(plan: Path, tmp_path: Path) -> None:
    change_people(tmp_path, lambda _, row: row | {"sex": "F"})
    people = check_people(open_validation(plan), Course())
    assert people.cohort.stops == ()
    (women,) = [group for group in validate(people, Course()).groups if group.by == "Sex"]
    assert women.level == "Female"


def test_the_new_version_in_its_own_people(plan: Path) -> None:
    people = check_people(open_validation(plan), Course())
    settled = people.settled
    updated = update(people, choose_wish(settled), Course())
    before = validate(people, Course())
    package = package_new_version(people, updated, name_version(settled), Course(), before)
    after = validate_new_version(people, package, Course())
    assert after.fingerprint == package.model.fingerprint != before.fingerprint
    # the order of people stays, and so does C
    assert after.horizons[0].c.value == pytest.approx(before.horizons[0].c.value, abs=1e-12)
    assert after.horizons[0].intercept.value == pytest.approx(0.0, abs=1e-9)
    assert updated.people == before.count.used == after.count.used
