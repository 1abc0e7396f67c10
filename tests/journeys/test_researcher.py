"""A researcher's whole path: a file of people, a study file, its slips mended, the fit, and a colleague's window."""

import json
import math
import shutil
from pathlib import Path
from typing import Any

import pytest
from PySide6.QtWidgets import QWidget
from pytestqt.qtbot import QtBot

from clinicalc.gui.main_window import MainWindow
from clinicalc.resources import find_shipped
from tests.cli.calling import Ended, call
from tests.gui.bedside_hands import answer, type_number

pytestmark = pytest.mark.gui

COHORT, STUDY, SHIPPED = "tarnwick-cohort.csv", "tarnwick-cvd-10y-cox.toml", "tarnwick-cvd-10y-cox.json"
PATIENT = {
    "prior_cvd": "no",
    "age": "58",
    "sex": "male",
    "systolic_bp": "147",
    "bp_treated": "yes",
    "total_cholesterol": "6.0",
    "hdl_cholesterol": "1.1",
    "egfr": "74",
    "smoker": "yes",
    "diabetes": "no",
}
WORDS = [f"{name}={typed}" for name, typed in PATIENT.items()]


@pytest.fixture
def desk(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The researcher's folder, with the cohort and the study file in it."""
    for name in (COHORT, STUDY):
        shutil.copy(find_shipped(f"example_models/{name}"), tmp_path / name)
    monkeypatch.chdir(tmp_path)
    return tmp_path


def spoil(folder: Path, **cells: tuple[int, str]) -> None:
    """Cells typed over in lines of the cohort file, by column."""
    path = folder / COHORT
    lines = path.read_text(encoding="utf-8").splitlines()
    names = lines[0].split(",")
    for column, (line, cell) in cells.items():
        row = lines[line - 1].split(",")
        row[names.index(column)] = cell
        lines[line - 1] = ",".join(row)
    path.write_text("\n".join(lines) + "\n", encoding="utf-8")


def change_study(folder: Path, old: str, new: str) -> None:
    """One text of the study file in the place of another."""
    path = folder / STUDY
    text = path.read_text(encoding="utf-8")
    assert text.count(old) == 1
    path.write_text(text.replace(old, new), encoding="utf-8")


def said(ended: Ended) -> str:
    """All that was printed, on one line."""
    return " ".join((ended.out + ended.err).split())


def worked_by_hand(file: Path) -> float:
    """The number of PATIENT from the figures in the file alone."""
    (equation,) = json.loads(file.read_text(encoding="utf-8"))["model"]["equations"]
    b = {term["id"]: term["coefficient"] for term in equation["terms"]}
    knots = equation["terms"][1]["product"][0]["steps"][0]["spline"]["knots"]
    age = float(PATIENT["age"])
    line = equation["horizons"][0]["log_cumulative_hazard"] + b["age"] * age
    line += b["age_spline_1"] * spline(age, knots, 0) + b["age_spline_2"] * spline(age, knots, 1)
    line += b["male"] + b["bp_treated"] + b["smoker"] + b["age_smoker"] * (age - 55.0) / 10.0
    line += b["systolic_bp"] * (147.0 - 120.0) / 10.0 + b["egfr"] * (74.0 - 85.0) / 10.0
    line += b["total_cholesterol"] * (6.0 - 5.0) + b["hdl_cholesterol"] * (1.1 - 1.4)
    return -math.expm1(-math.exp(line))


def spline(x: float, knots: list[float], j: int) -> float:
    """Basis j (from 0) of a restricted cubic spline: Harrell, Regression Modeling Strategies, 2015, eq. 2.25."""
    cubes = [max(x - knot, 0.0) ** 3 for knot in knots]
    last, before = knots[-1], knots[-2]
    lower = cubes[-2] * (last - knots[j]) / (last - before)
    upper = cubes[-1] * (before - knots[j]) / (last - before)
    return (cubes[j] - lower + upper) / (last - knots[0]) ** 2


def test_slips_are_told_with_their_lines_and_nothing_is_written(desk: Path) -> None:
    change_study(desk, 'sbp"}', 'spb"}')
    change_study(desk, 'ties = "efron"', 'ties = "efrom"')
    ended = call("fit", STUDY, "--check")
    assert ended.status == 4
    assert 'estimate.all.ties: "efrom" is not one of "breslow" or "efron". Did you mean "efron"?' in said(ended)

    change_study(desk, 'ties = "efrom"', 'ties = "efron"')
    spoil(
        desk, chol=(6, "<2.6"), smoker=(13, "ex"), exit_date=(21, "2002-05-01"), status=(41, "9"), person=(26, "T0024")
    )
    ended = call("fit", STUDY, "--check")
    assert ended.status == 4
    for sentence in (
        '"spb", named for the values of Systolic blood pressure, is not in tarnwick-cohort.csv. Did you mean "sbp"?',
        'Column "chol" (Total cholesterol) should hold numbers and holds "<2.6" in line 6.',
        'Column "smoker" (Smokes now): "ex" in 1 line, first in line 13, is none of its answers.',
        'Column "exit_date" lies before "entry_date" in line 21.',
        'Column "status" holds "9" in 1 line, first in line 41, and nobody said what that means.',
        '1 person stands in more than one line, such as "T0024" in lines 25 and 26.',
    ):
        assert sentence in said(ended), sentence
    # what stops the check stops the fit, and leaves no file
    again = call("fit", STUDY, "-o", "model.json")
    assert again.status == 4
    assert {entry.name for entry in desk.iterdir()} == {COHORT, STUDY}


def test_a_status_coded_one_and_two_is_noticed(desk: Path) -> None:
    # 1 without the event and 2 with it, where the study says 1 for the event and 2 for a competing one
    path = desk / COHORT
    lines = path.read_text(encoding="utf-8").splitlines()
    place = lines[0].split(",").index("status")
    rows = [line.split(",") for line in lines[1:]]
    for row in rows:
        row[place] = "2" if row[place] == "1" else "1"
    path.write_text("\n".join([lines[0], *map(",".join, rows)]) + "\n", encoding="utf-8")
    ended = call("fit", STUDY, "--check")
    assert 'Caution: Column "status": nobody left without an event ("0" stands in no line)' in said(ended)
    change_study(desk, 'competing = ["2"]\n', "")
    ended = call("fit", STUDY, "--check")
    assert ended.status == 4
    assert 'where 0 and 1 were expected. Which is the event? Say so: event = "2"' in said(ended)


def test_a_refused_fit_leaves_the_earlier_file(desk: Path) -> None:
    assert call("fit", STUDY, "-o", "model.json").status == 0
    before = (desk / "model.json").read_bytes()
    refused = call("fit", STUDY, "-o", "model.json")
    assert refused.status == 2
    assert "model.json is there already and was left as it is." in said(refused)
    change_study(desk, "{years = 10}", "{years = 30}")
    refused = call("fit", STUDY, "-o", "model.json", "--replace")
    assert refused.status == 4
    assert "30 years lies beyond the follow-up" in said(refused)
    assert (desk / "model.json").read_bytes() == before


def test_from_the_file_of_people_to_the_bedside_window(
    desk: Path, qtbot: QtBot, monkeypatch: pytest.MonkeyPatch
) -> None:
    checked = call("fit", STUDY, "--check")
    assert (checked.status, checked.err) == (0, "")
    assert "5,000 people" in said(checked)
    assert said(checked).endswith("A model may be fitted to these people.")
    assert {entry.name for entry in desk.iterdir()} == {COHORT, STUDY}

    made = call("fit", STUDY, "-o", "model.json")
    assert (made.status, made.err) == (0, "")
    file = desk / "model.json"
    content = json.loads(file.read_text(encoding="utf-8"))["model"]
    people, events = content["source"]["derivation"]["people"], content["source"]["derivation"]["events"]
    assert f"{people:,} people with {events:,} events" in said(made)

    # what was printed at the fit, what stands in the file and what inspect prints of it are the same figures
    inspected = said(call("inspect", "model.json"))
    assert f"Made from {people} people, {events} events" in inspected
    (equation,) = content["equations"]
    for term in equation["terms"]:
        assert f"{term['coefficient']:.6g}" in said(made), term["id"]
        assert f"{term['coefficient']!r} x" in inspected, term["id"]
    fingerprint = said(made).partition("Fingerprint ")[2][:79]
    assert f"canonical bytes) {fingerprint}" in inspected

    record = call("assess", "model.json", *WORDS, "--json").record
    assert record["probability"] == pytest.approx(worked_by_hand(file), rel=0, abs=1e-12)
    assert record["model"]["fingerprint"] == fingerprint.replace(" ", "")
    assert_window_shows(record, file, qtbot)


def assert_window_shows(record: dict[str, Any], file: Path, qtbot: QtBot) -> None:
    """A colleague's window, the file opened in it and the patient typed, has the number and band of the record."""

    def choose_open(parent: QWidget) -> Path | None:
        return file

    window = MainWindow(choose_open=choose_open)
    qtbot.addWidget(window)
    window.resize(1280, 800)
    with qtbot.waitExposed(window):
        window.show()
    window.activateWindow()
    window.model_bar.chooser.open_action.trigger()
    for id, typed in PATIENT.items():
        if typed in ("yes", "no", "male"):
            answer(window, id, typed)
        else:
            type_number(window, id, typed)
    assert window.sheet.number.figure == f"{100 * record['probability']:.1f}"
    band = record["band"]
    assert window.sheet.band_figure.text() == f"{100 * band['lower']:.1f}–{100 * band['upper']:.1f}\u202f%"
    assert window.sheet.strip.isVisible()


def test_the_shipped_file_is_what_a_researcher_makes_of_the_shipped_study(desk: Path) -> None:
    assert call("fit", STUDY, "-o", SHIPPED).status == 0
    here = json.loads((desk / SHIPPED).read_text(encoding="utf-8"))["model"]
    there = json.loads(find_shipped(f"example_models/{SHIPPED}").read_text(encoding="utf-8"))["model"]
    # another installation has other versions of libraries, and says so
    answers = [[item for item in model["documentation"] if item["item"] != "software"] for model in (here, there)]
    assert answers[0] == answers[1]
    for made, shipped in zip(here["worked_examples"], there["worked_examples"], strict=True):
        assert made["probability"] == pytest.approx(shipped["probability"], rel=1e-9)
