"""Whatever stands in the cells: nothing raises, nobody is lost, and what is not said to be wrong is a usable number."""

import csv
from dataclasses import replace
from pathlib import Path

import numpy as np
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from clinicalc.cohort.checked import SurvivalOutcome
from clinicalc.cohort.dictionary import ColumnEntry, OutcomePlan
from clinicalc.cohort.proposing import propose_dictionary
from clinicalc.cohort.table import read_table
from clinicalc.errors import TableRefused
from tests.cohort.invented import (
    AGE,
    BINARY,
    CHOLESTEROL,
    COMPETING,
    DIABETES,
    HDL,
    SCORE,
    SEX,
    SMOKING,
    SYSTOLIC,
    checked,
)
from tests.cohort.test_outcome import DATED

PREDICTORS = (AGE, CHOLESTEROL, HDL, SYSTOLIC, SCORE, SEX, SMOKING, DIABETES)
NAMES = ["age", "chol", "hdl", "systolic_bp", "frailty", "sex", "smoking", "diabetes", "days", "status", "dead", "came"]
NAMES += ["entered", "left", "born", "who", "practice"]
ENTRIES = (
    ColumnEntry("chol", predictor="total_cholesterol", unit="mmol/L", missing=("-9", "NK")),
    ColumnEntry("sex", predictor="sex", levels=(("female", "F"), ("male", "2"))),
)
PLANS = (BINARY, COMPETING, replace(COMPETING, entry="came"), DATED, replace(DATED, born="born"))

cells = st.one_of(
    st.sampled_from(["", "NA", ".", "-9", "0", "1", "2", "F", "m", "never", "yes", "dead", "007", "5,2", "<3", "−4"]),
    st.sampled_from(
        ["2020-02-29", "31.12.2021", "13/13/2020", "20200101", "1e308", "-1e308", "1e-308", "1e999", "inf"]
    ),
    st.integers(-10, 300).map(str),
    st.floats(0, 20).map(lambda one: f"{one:.2f}"),
    st.text(st.characters(exclude_categories=["Cs"], exclude_characters="\0"), max_size=6),
)


@given(
    rows=st.lists(st.lists(cells, min_size=len(NAMES), max_size=len(NAMES)), min_size=1, max_size=12),
    plan=st.sampled_from(PLANS),
)
@settings(suppress_health_check=[HealthCheck.function_scoped_fixture], max_examples=100, deadline=None)
def test_nothing_in_a_cell_raises(tmp_path: Path, rows: list[list[str]], plan: OutcomePlan) -> None:
    path = tmp_path / "any.csv"
    with path.open("w", encoding="utf-8", newline="") as file:
        csv.writer(file).writerows([NAMES, *rows])
    try:
        table = read_table(path)
    except TableRefused:
        # lines without anything in them are no people
        assert not any(cell.strip() for row in rows for cell in row)
        return
    cohort = checked(table, PREDICTORS, *ENTRIES, outcome=plan, person="who", cluster="practice")
    assert cohort.rows == table.rows == len(cohort.row_numbers)
    for column in cohort.columns.values():
        assert column.shape == (cohort.rows,)
        assert column.dtype == np.float64
        assert not np.isinf(column).any()
    if not cohort.stops and isinstance(cohort.outcome, SurvivalOutcome):
        times = cohort.outcome.times[np.isfinite(cohort.outcome.times)]
        assert (times > (0 if cohort.outcome.entry is None else -np.inf)).all()
    for problem in cohort.problems:
        assert problem.sentence.endswith((".", "?", '."'))
        assert len(problem.rows) == min(problem.count, 5) or problem.rows == ()
    proposed = propose_dictionary(table, PREDICTORS)
    assert [entry.column for entry in proposed.columns] == list(table.names)
