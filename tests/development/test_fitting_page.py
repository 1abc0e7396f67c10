"""The guide's page on fitting: its commands run in order as they stand, and every figure it prints is the program's."""

import json
import re
import shlex
import shutil
import tomllib
from pathlib import Path

import pytest

from clinicalc.operations.guide import read_page_source
from clinicalc.resources import find_shipped
from example_models.make_tarnwick_cohort import TRUTH
from tests.cli.calling import call

PAGE = read_page_source("fitting")
STUDY = "tarnwick-cvd-10y-cox.toml"
LEFT_OUT = "[...]"
"""Stands on the page where lines of an output are left out."""
PROBLEMS = "Stop: "
"""What the output begins with that shows a file gone wrong."""


def blocks() -> list[tuple[str, str]]:
    """Every block of code with its language, in the order of the page."""
    return re.findall(r"^```([a-z]+)\n(.*?)^```", PAGE, re.MULTILINE | re.DOTALL)


def words_of(text: str) -> list[str]:
    return text.split()


def holds(output: str, printed: str) -> bool:
    """Whether the output has what is printed, in its order; broken into lines otherwise, and with parts left out."""
    said, at = " ".join(words_of(output)), 0
    for part in printed.split(LEFT_OUT):
        wanted = " ".join(words_of(part))
        at = said.find(wanted, at)
        if at < 0:
            return False
        at += len(wanted)
    return True


def test_the_commands_run_as_they_stand_and_print_what_the_page_prints(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    shutil.copytree(find_shipped("example_models"), tmp_path / "example_models")
    monkeypatch.chdir(tmp_path)
    output, ran, compared = "", 0, 0
    for language, code in blocks():
        if language == "sh":
            for line in code.replace("\\\n", " ").splitlines():
                words = shlex.split(line)
                assert words[0] == "clinicalc"
                ended = call(*words[1:])
                assert (ended.status, ended.err) == (0, ""), line
                output, ran = ended.out, ran + 1
        elif language == "text" and output and not code.startswith(("clinicalc ", PROBLEMS)):
            assert holds(output, code), code
            compared += 1
    assert ran >= 4
    assert compared >= 3


def test_the_fragments_are_those_of_the_shipped_study() -> None:
    study = tomllib.loads(find_shipped(f"example_models/{STUDY}").read_text(encoding="utf-8"))
    for language, code in blocks():
        if language != "toml":
            continue
        fragment = tomllib.loads(code)
        for name, table in fragment.items():
            if name == "terms":
                terms = study["equations"][0]["terms"]
                assert all(term in terms for term in table)
                assert [terms.index(term) for term in table] == sorted(terms.index(term) for term in table)
            else:
                assert study[name] == table, name


def test_the_first_people_are_those_of_the_shipped_file() -> None:
    lines = find_shipped("example_models/tarnwick-cohort.csv").read_text(encoding="utf-8").splitlines()
    (shown,) = (code for _, code in blocks() if code.startswith("person: "))
    columns = zip(*(line.split(",") for line in lines[:3]), strict=True)
    assert shown.splitlines() == [f"{name}: {first}, {second}" for name, first, second in columns]
    assert f"{len(lines) - 1:,} invented people" in " ".join(words_of(PAGE))


def test_the_problems_are_those_of_the_slips_that_the_page_makes_up(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    assert (
        "`<2.6` for a cholesterol in line 6, a pressure as `132/80` in line 10, and `ex` for a smoker in line 13"
        in " ".join(words_of(PAGE))
    )
    lines = find_shipped("example_models/tarnwick-cohort.csv").read_text(encoding="utf-8").splitlines()
    names = lines[0].split(",")
    for line, column, cell in ((6, "chol", "<2.6"), (10, "sbp", "132/80"), (13, "smoker", "ex")):
        cells = lines[line - 1].split(",")
        cells[names.index(column)] = cell
        lines[line - 1] = ",".join(cells)
    (tmp_path / "tarnwick-cohort.csv").write_text("\n".join(lines) + "\n", encoding="utf-8")
    shutil.copy(find_shipped(f"example_models/{STUDY}"), tmp_path)
    monkeypatch.chdir(tmp_path)
    ended = call("fit", STUDY, "--check")
    assert ended.status == 4
    (shown,) = (code for _, code in blocks() if code.startswith(PROBLEMS))
    assert holds(ended.out, shown)
    assert {entry.name for entry in tmp_path.iterdir()} == {"tarnwick-cohort.csv", STUDY}


def test_the_truth_beside_the_fit_is_the_scripts_and_the_files() -> None:
    (equation,) = json.loads(find_shipped("example_models/tarnwick-cvd-10y-cox.json").read_text())["model"]["equations"]
    place = [term["id"] for term in equation["terms"]].index("male")
    fitted, variance = equation["terms"][place]["coefficient"], equation["uncertainty"]["covariance"][place][place]
    sentence = (
        f"came out as {fitted:.3f} with a standard error of {variance**0.5:.3f}, where {TRUTH['male']:g} was put in"
    )
    assert sentence in " ".join(words_of(PAGE))
    assert "with 522 events" in " ".join(words_of(PAGE))


def test_six_practices_are_too_few_as_the_page_says(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    study = find_shipped(f"example_models/{STUDY}").read_text(encoding="utf-8")
    clustered = study.replace('covariance = "model"', 'covariance = "cluster"\ncluster = "practice"')
    assert clustered != study
    (tmp_path / STUDY).write_text(clustered, encoding="utf-8")
    shutil.copy(find_shipped("example_models/tarnwick-cohort.csv"), tmp_path)
    monkeypatch.chdir(tmp_path)
    ended = call("fit", STUDY, "--out", "clustered.json")
    assert ended.status == 4
    assert 'column "practice" has 6 clusters among the people used, and the covariance of 12 coefficients' in ended.err
    assert not (tmp_path / "clustered.json").exists()
