"""The guide's page on methods: its commands run in order as they stand, and every figure it prints is the program's."""

import re
import shlex
import shutil
import tomllib
from pathlib import Path

import numpy as np
import pytest

from clinicalc.coefficients.equations import CompetingEvents
from clinicalc.coefficients.reader import read_file
from clinicalc.operations.guide import read_page_source
from clinicalc.resources import find_shipped
from tests.cli.calling import call
from tests.development.method_studies import binary_study, random_people
from tests.development.studying import write_people, write_study
from tests.development.test_fitting_page import holds, words_of

PAGE = read_page_source("methods")
STUDY = "tarnwick-cvd-10y-finegray.toml"
PENALTY = {"estimate": {"all": {"kind": "logistic", "penalty": "firth"}}}
"""The one fragment that is not of the shipped study."""


REFUSED = "estimate.all: "
"""What the refusal begins with, which another study gets."""


def blocks() -> list[tuple[str, str]]:
    """Every block of code with its language, in the order of the page."""
    return re.findall(r"^```([a-z]+)\n(.*?)^```", PAGE, re.MULTILINE | re.DOTALL)


def commands(code: str) -> list[list[str]]:
    """The words of each command of a block, lines that go on joined."""
    return [shlex.split(line) for line in code.replace("\\\n", " ").splitlines()]


def test_the_commands_run_as_they_stand_and_print_what_the_page_prints(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    shutil.copytree(find_shipped("example_models"), tmp_path / "example_models")
    monkeypatch.chdir(tmp_path)
    outputs: list[str] = []
    compared = 0
    for language, code in blocks():
        if language == "sh":
            for words in commands(code):
                assert words[0] == "clinicalc"
                ended = call(*words[1:])
                assert (ended.status, ended.err) == (0, ""), words
                outputs.append(ended.out)
        elif language == "text" and not code.startswith(REFUSED):
            # the page comes back to the first output further down
            assert any(holds(output, code) for output in (outputs[-1], outputs[0])), code
            compared += 1
    assert (tmp_path / "report.pdf").read_bytes().startswith(b"%PDF")
    assert len(outputs) == 4
    assert compared == 6


def test_the_fragments_are_those_of_the_shipped_study() -> None:
    study = tomllib.loads(find_shipped(f"example_models/{STUDY}").read_text(encoding="utf-8"))
    fragments = [tomllib.loads(code) for language, code in blocks() if language == "toml"]
    assert PENALTY in fragments
    for fragment in fragments:
        if fragment == PENALTY:
            continue
        for name, table in fragment.items():
            if name == "equations":
                (equation,), (shipped,) = table, study["equations"]
                assert all(shipped[part] == said for part, said in equation.items())
            else:
                assert study[name] == table, name


def test_what_the_page_says_of_both_files_is_theirs() -> None:
    page = " ".join(words_of(PAGE))
    (command,) = [words for _, code in blocks() for words in commands(code) if words[1:2] == ["assess"]]
    cox, finegray = (str(find_shipped(f"example_models/tarnwick-cvd-10y-{name}.json")) for name in ("cox", "finegray"))
    (stated,) = re.findall(r"With the Cox file it is ([0-9.]+) %\.", page)
    assert holds(call("assess", cox, *command[3:]).out, f"{stated} % within 10 years")
    study = tomllib.loads(find_shipped(f"example_models/{STUDY}").read_text(encoding="utf-8"))
    (old,) = (patient["values"] for patient in study["patients"] if patient["values"]["age"] == 79)
    texts = [f"{name}={value}" for name, value in old.items()]
    ((ours, theirs),) = re.findall(r"it is ([0-9.]+) % by this one and ([0-9.]+) % by the Cox file", page)
    assert holds(call("assess", finegray, *texts).out, f"{ours} % within 10 years")
    assert holds(call("assess", cox, *texts).out, f"{theirs} % within 10 years")


def test_a_fit_without_an_end_is_refused_with_the_line_that_asks_for_a_penalty(tmp_path: Path) -> None:
    people = random_people()
    rare = np.where((people["y"] == 0) & (np.arange(len(people["y"])) < 60), 1, 0)
    write_people(tmp_path / "people.csv", people | {"z": rare, "x": np.nan_to_num(people["x"], nan=50.0)})
    ended = call("fit", str(write_study(tmp_path, binary_study())))
    assert ended.status == 4
    (shown,) = (code for _, code in blocks() if code.startswith(REFUSED))
    assert holds(ended.err, shown)
    assert call("fit", str(write_study(tmp_path, binary_study(penalty="firth")))).status == 0


def test_the_shipped_file_says_how_it_was_made() -> None:
    content = read_file(find_shipped("example_models/tarnwick-cvd-10y-finegray.json")).content.model
    (equation,) = content.equations
    assert equation.competing_events == CompetingEvents("subdistribution", "death from other causes")
    assert any("filled in by multiple imputation" in caution for caution in content.use.cautions)
    assert any("share of people who will have the event" in caution for caution in content.use.cautions)
