"""The people in a report: table one recomputed from the file with pandas, the way into the fit from its figures."""

from collections.abc import Iterator
from pathlib import Path

import pandas as pd
import pytest

from clinicalc.operations.study_report_people import draw_up_flow, tell_people
from clinicalc.report.contents import NotedCell, Row, Table, TypedCell
from tests.operations.reported_studies import EXAMPLES, binary_study, fit_from, shipped, two_equations

SHIPPED = {"Age, years": "age", "Systolic blood pressure, mmHg": "sbp", "Total cholesterol, mmol/L": "chol",
           "HDL cholesterol, mmol/L": "hdl", "eGFR, mL/min/1.73\u00a0m²": "egfr"}  # fmt: skip


@pytest.fixture(scope="module")
def people() -> pd.DataFrame:
    """The people of the shipped study as the file has them."""
    frame = pd.read_csv(EXAMPLES / "tarnwick-cohort.csv", dtype={"smoker": str})
    frame["smoker"] = frame["smoker"].map({"yes": 1.0, "no": 0.0})
    return frame


def _groups(frame: pd.DataFrame) -> Iterator[pd.DataFrame]:
    """All, used, with the event, without it, another event."""
    needed = ["age", "sex", "sbp", "bp_tablets", "chol", "hdl", "egfr", "smoker", "diabetes"]
    yield frame
    yield frame.dropna(subset=needed)
    for status in (1, 0, 2):
        yield frame[frame["status"] == status]


def _table(sections: object) -> Table:
    tables = [block for section in sections for block in section.blocks if isinstance(block, Table)]  # type: ignore[attr-defined]
    return tables[0]


def _name(row: Row) -> str:
    first = row.cells[0]
    return first.text if isinstance(first, NotedCell) else first.value if isinstance(first, TypedCell) else str(first)


def _shipped_rows() -> dict[str, Row]:
    fitted, _ = shipped()
    table = _table(tell_people(fitted, fitted.study.fits[0], fitted.figures[0], ""))
    assert [column.heading for column in table.columns] == [
        "", "all", "used", "with the event", "without it", "another event"
    ]  # fmt: skip
    return {_name(row).strip().replace("\u202f", " "): row for row in table.rows}


def test_numbers(people: pd.DataFrame) -> None:
    rows = _shipped_rows()
    for label, column in SHIPPED.items():
        (row,) = [row for name, row in rows.items() if name.split(",")[0] == label.split(",")[0]]
        missing = int(people[column].isna().sum())
        (said,) = row.cells[0].notes  # type: ignore[union-attr]
        assert said == (f"{missing} missing ({100 * missing / 5000:.1f}\u202f%)" if missing else "none missing")
        for cell, group in zip(row.cells[1:], _groups(people), strict=True):
            assert isinstance(cell, NotedCell)
            mean, sd = cell.text.rstrip(")").split(" (")
            spread = group[column].std()
            places = 1 if people[column].std() >= 1 else 2  # the same for all groups
            assert (mean, sd) == (f"{group[column].mean():.{places}f}", f"{spread:.{places}f}")
            (quartiles,) = cell.notes
            written = [float(part) for part in quartiles.replace("[", "").replace("]", "").split() if part != "to"]
            expected = group[column].quantile([0.5, 0.25, 0.75]).tolist()
            assert written == pytest.approx(expected, rel=0.005)


def test_answers(people: pd.DataFrame) -> None:
    rows = _shipped_rows()
    asked = {"Takes tablets for blood pressure": ("bp_tablets", 1), "Smokes now": ("smoker", 1),
             "Has diabetes": ("diabetes", 1), "Female": ("sex", "F"), "Male": ("sex", "M")}  # fmt: skip
    for label, (column, answer) in asked.items():
        cells = rows[label].cells[1:]
        for cell, group in zip(cells, _groups(people), strict=True):
            count, known = int((group[column] == answer).sum()), int(group[column].notna().sum())
            assert cell == f"{count:,} ({100 * count / known:.1f}\u202f%)"
    assert list(rows["People"].cells[1:]) == [f"{len(group):,}" for group in _groups(people)]


def test_the_way_into_the_fit(people: pd.DataFrame) -> None:
    fitted, _ = shipped()
    everybody, used = draw_up_flow(fitted, fitted.figures[0]).stages
    assert (everybody.count, used.count) == (len(people), len(list(_groups(people))[1]))
    lacking = {"Systolic blood pressure": "sbp", "Total cholesterol": "chol", "HDL cholesterol": "hdl",
               "eGFR": "egfr", "Smokes now": "smoker"}  # fmt: skip
    assert {one.reason: one.count for one in everybody.leaving} == {
        f"{label} missing": int(people[column].isna().sum()) for label, column in lacking.items()
    }
    assert everybody.notes == (
        f"{everybody.count - used.count} people were left out in all. Somebody who lacks several values is counted"
        " under each of them.",
    )
    assert used.words == "used, nothing missing; 522 with the event"


def test_people_of_another_equation_leave_first(tmp_path: Path) -> None:
    fitted, _ = fit_from(two_equations(tmp_path))
    frame = pd.read_csv(tmp_path / "people.csv")
    for figures, sex in zip(fitted.figures, ("female", "male"), strict=True):
        everybody, applies, used = draw_up_flow(fitted, figures).stages
        count = int((frame["sex"] == sex).sum())
        assert (everybody.count, everybody.leaving[0].count) == (500, 500 - count)
        assert (applies.count, used.count) == (count, count)
        assert f"{int(frame.loc[frame['sex'] == sex, 'status'].sum())} with the event" in used.words


def test_filled_in_is_said_and_stays_out_of_the_table(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path, imputation={"sets": 2, "rounds": 2}))
    figures = fitted.figures[0]
    assert figures.imputed is not None
    everybody, used = draw_up_flow(fitted, figures).stages
    assert (everybody.count, everybody.leaving, used.count) == (600, (), 600)
    assert "missing values filled in" in used.words
    known = pd.read_csv(tmp_path / "people.csv")["age"].dropna()
    rows = _table(tell_people(fitted, fitted.study.fits[0], figures, "")).rows
    (age,) = [row for row in rows if _name(row).startswith("age")]
    assert age.cells[1].text == f"{known.mean():.1f} ({known.std():.1f})"  # type: ignore[union-attr]
    assert age.cells[0].notes == ("30 missing (5.0\u202f%)",)  # type: ignore[union-attr]
