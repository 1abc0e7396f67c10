"""What is proposed for a table's columns, with its reason; and that it holds when it is checked."""

from pathlib import Path

import pytest

from clinicalc.coefficients.schema import Predictor, YesNoPredictor
from clinicalc.cohort.checking import check_cohort
from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, OutcomeKind, Role
from clinicalc.cohort.name_likeness import LIKE, likeness
from clinicalc.cohort.proposing import propose_dictionary
from tests.cohort.invented import AGE, CHOLESTEROL, DIABETES, HDL, SEX, SMOKING, SYSTOLIC, table_of

TABLETS = YesNoPredictor(id="bp_treatment", label="Takes blood pressure tablets", group="Person")
PREDICTORS = (AGE, CHOLESTEROL, HDL, SYSTOLIC, SEX, SMOKING, DIABETES)


def entry_of(dictionary: DataDictionary, column: str) -> ColumnEntry:
    """The entry of a column."""
    (entry,) = [entry for entry in dictionary.columns if entry.column == column]
    return entry


@pytest.mark.parametrize(
    ("column", "predictor", "like"),
    [
        ("Age_baseline", AGE, True),
        ("chol (mmol/L)", CHOLESTEROL, True),
        ("TotalCholesterol", CHOLESTEROL, True),
        ("hdl_mmol/L", HDL, True),
        ("SBP", SYSTOLIC, True),
        ("systolic", SYSTOLIC, True),
        ("smokng", SMOKING, True),
        ("dm", DIABETES, True),
        ("bp_tablets", TABLETS, True),
        ("water_tablets", TABLETS, False),
        ("ldl_cholesterol", CHOLESTEROL, False),
        ("days", AGE, False),
        ("hdl", CHOLESTEROL, False),
        ("status", SEX, False),
    ],
)
def test_names_are_like_what_they_stand_for(column: str, predictor: Predictor, like: bool) -> None:
    assert (likeness(column, predictor) >= LIKE) is like


def test_a_table_with_times_is_explained_column_by_column_and_then_has_no_stops(tmp_path: Path) -> None:
    n = 40
    table = table_of(
        tmp_path,
        person=[f"T{place}" for place in range(n)],
        practice=["Quay", "Mill"] * 20,
        age=[40 + place for place in range(n)],
        chol=["-9" if place % 8 == 0 else f"{4 + place / 20:.2f}" for place in range(n)],
        HDL_mg=[45 + place % 20 for place in range(n)],
        sbp=[120 + place for place in range(n)],
        gender=["F", "M"] * 20,
        tobacco=["never", "former", "current", "unknown"] * 10,
        dm=[0, 0, 1, 0] * 10,
        followup_years=[1 + place / 7 for place in range(n)],
        status=[0, 1, 0, 2] * 10,
        remark=["", "late", "", ""] * 10,
    )
    dictionary = propose_dictionary(table, PREDICTORS)
    assert [(entry.role, entry.predictor) for entry in dictionary.columns] == [
        (Role.PERSON, ""),
        (Role.CLUSTER, ""),
        (Role.VALUE, "age"),
        (Role.VALUE, "total_cholesterol"),
        (Role.VALUE, "hdl"),
        (Role.VALUE, "systolic_bp"),
        (Role.VALUE, "sex"),
        (Role.VALUE, "smoking"),
        (Role.VALUE, "diabetes"),
        (Role.TIME, ""),
        (Role.STATUS, ""),
        (Role.IGNORED, ""),
    ]
    chol = entry_of(dictionary, "chol")
    assert (chol.unit, chol.missing) == ("mmol/L", ("-9",))
    assert chol.reason == (
        'Its name is like "Total cholesterol". 100\u202f% of its values are usual for Total cholesterol '
        '(2.59–10.3 mmol/L). Taken for not measured, since it can be no value: "-9".'
    )
    assert entry_of(dictionary, "gender").levels == (("female", "F"), ("male", "M"))
    assert entry_of(dictionary, "tobacco").missing == ("unknown",)
    assert entry_of(dictionary, "dm").levels == (("no", "0"), ("yes", "1"))
    assert all(entry.reason for entry in dictionary.columns)
    assert dictionary.person == "person"
    plan = dictionary.outcome
    assert (plan.kind, plan.time, plan.unit, plan.status) == (
        OutcomeKind.TIME_TO_EVENT,
        "followup_years",
        "a",
        "status",
    )
    assert (plan.event, plan.censored, plan.competing) == (("1",), ("0",), ("2",))
    assert check_cohort(table, dictionary, PREDICTORS).stops == ()


def test_dates_and_delayed_entry_are_seen(tmp_path: Path) -> None:
    table = table_of(
        tmp_path,
        date_of_birth=["1960-01-01", "1955-06-30"] * 10,
        entry_date=["2020-01-01", "2020-06-30"] * 10,
        exit_date=["2021-01-01", "2022-06-30"] * 10,
        died=["alive", "dead"] * 10,
    )
    plan = propose_dictionary(table, ()).outcome
    assert (plan.born, plan.start, plan.end) == ("date_of_birth", "entry_date", "exit_date")
    assert (plan.status, plan.event, plan.censored) == ("died", ("dead",), ("alive",))
    table = table_of(tmp_path, tstart=range(20), tstop_time=range(30, 50), event=[0, 1] * 10)
    plan = propose_dictionary(table, ()).outcome
    assert (plan.entry, plan.time, plan.status) == ("tstart", "tstop_time", "event")


def test_an_outcome_without_times_is_binary_and_one_two_is_read_as_such(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=range(40, 60), dead=[1, 2] * 10)
    dictionary = propose_dictionary(table, (AGE,))
    assert (dictionary.outcome.kind, dictionary.outcome.column) == (OutcomeKind.BINARY, "dead")
    assert (dictionary.outcome.event, dictionary.outcome.no_event) == (("2",), ("1",))
    assert 'Taken for the event: "2".' in entry_of(dictionary, "dead").reason


def test_a_column_that_does_not_fit_its_name_is_not_proposed(tmp_path: Path) -> None:
    table = table_of(tmp_path, age=["old", "young"] * 10, dead=[0, 1] * 10)
    assert entry_of(propose_dictionary(table, (AGE,)), "age").role is Role.IGNORED
