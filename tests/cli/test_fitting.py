"""`clinicalc fit`: a study becomes a coefficient file, whole or not at all, and nothing else changes."""

import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pytest

from clinicalc.coefficients.reader import read_file
from clinicalc.library.key_files import make_key
from tests.cli.calling import call
from tests.development.studying import write_people, write_study
from tests.development.test_study_refusals import cox, people

PASSPHRASE = "a dozen invented words"


@pytest.fixture
def study(tmp_path: Path) -> Path:
    """A study of 300 random people, of whom 30 lack a value."""
    columns = people()
    columns["x"] = np.where(np.arange(300) < 30, np.nan, columns["x"])
    write_people(tmp_path / "people.csv", columns)
    return write_study(tmp_path, cox())


def test_a_study_becomes_a_file_that_answers(study: Path, tmp_path: Path) -> None:
    out = tmp_path / "model.json"
    ended = call("fit", str(study), "-o", str(out))
    assert ended.status == 0, ended.err
    assert "all: Cox fit to 270 people" in ended.out
    assert "Left out with a value missing: 30 of 300" in ended.out
    assert "3 computed" in ended.out
    assert call("assess", str(out), "x=50", "z=1").status == 0


def test_one_json_object(study: Path, tmp_path: Path) -> None:
    out = tmp_path / "model.json"
    record = call("fit", str(study), "-o", str(out), "--json").record
    (fit,) = record["fits"]
    assert (fit["people"], fit["left_out"], fit["missing"]) == (270, 30, {"x": 30})
    assert fit["terms"] == ["x", "z"]
    assert np.array(fit["covariance"]).shape == (2, 2)
    assert {problem["code"] for problem in record["data"]["problems"]} == {"missing"}
    assert record["fingerprint"] == read_file(out).fingerprint


def test_check_reads_and_writes_nothing(study: Path, tmp_path: Path) -> None:
    before = sorted(tmp_path.iterdir())
    ended = call("fit", str(study), "--check")
    assert ended.status == 0
    assert "A model may be fitted to these people." in ended.out
    assert sorted(tmp_path.iterdir()) == before


def test_check_says_what_stops(study: Path, tmp_path: Path) -> None:
    write_people(tmp_path / "people.csv", people() | {"status": people()["status"] + 1})
    ended = call("fit", str(study), "--check", "--json")
    assert ended.status == 4
    assert [problem["code"] for problem in ended.record["data"]["problems"]] == ["coded_one_two"]


@pytest.mark.parametrize("words", [("--check", "-o", "x.json"), ("--replace",), ("--sign-key", "key.json")])
def test_words_that_contradict(words: tuple[str, ...], study: Path) -> None:
    assert call("fit", str(study), *words).status == 2


def test_a_folder_that_is_not_there_is_said_before_the_fit(study: Path, tmp_path: Path) -> None:
    ended = call("fit", str(study), "-o", str(tmp_path / "no" / "model.json"))
    assert ended.status == 2
    assert "there is no folder" in ended.err


def test_a_study_is_not_packaged(study: Path, tmp_path: Path) -> None:
    ended = call("package", str(study), "--out", str(tmp_path / "model.json"))
    assert ended.status == 4
    assert "belongs to a study, from which a model is fitted: clinicalc fit study.toml" in ended.err


@pytest.mark.parametrize("name", ["nobody.toml", "."])
def test_a_study_that_cannot_be_read(name: str, tmp_path: Path) -> None:
    ended = call("fit", str(tmp_path / name))
    assert ended.status == 4
    assert "Something went wrong" not in ended.err


def test_a_file_that_is_there_stays(study: Path, tmp_path: Path) -> None:
    out = tmp_path / "model.json"
    assert call("fit", str(study), "-o", str(out)).status == 0
    first = out.read_bytes()
    again = call("fit", str(study), "-o", str(out))
    assert again.status == 2
    assert "is there already and was left as it is" in again.err
    write_people(tmp_path / "people.csv", people() | {"z": people()["x"]})
    refused = call("fit", str(study), "-o", str(out), "--replace")
    assert refused.status == 4
    assert out.read_bytes() == first
    write_people(tmp_path / "people.csv", people())
    assert call("fit", str(study), "-o", str(out), "--replace").status == 0
    assert out.read_bytes() != first


def test_the_same_people_give_the_same_file(study: Path, tmp_path: Path) -> None:
    for name in ("one.json", "two.json"):
        assert call("fit", str(study), "-o", str(tmp_path / name)).status == 0
    assert (tmp_path / "one.json").read_bytes() == (tmp_path / "two.json").read_bytes()


def test_signed_where_a_key_is_named(study: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    make_key(tmp_path / "key.json", "Invented Publisher", PASSPHRASE)
    monkeypatch.setenv("CLINICALC_PASSPHRASE", PASSPHRASE)
    out = tmp_path / "model.json"
    ended = call("fit", str(study), "-o", str(out), "--sign-key", str(tmp_path / "key.json"), "--json")
    assert ended.status == 0, ended.err
    assert ended.record["signatures"] == len(read_file(out).content.signatures) == 1


def test_a_wrong_passphrase_is_said_before_the_fit(
    study: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    make_key(tmp_path / "key.json", "Invented Publisher", PASSPHRASE)
    monkeypatch.setenv("CLINICALC_PASSPHRASE", "another dozen of words")
    ended = call("fit", str(study), "-o", str(tmp_path / "model.json"), "--sign-key", str(tmp_path / "key.json"))
    assert ended.status == 6
    assert not ended.out
    assert not (tmp_path / "model.json").exists()


def test_a_killed_run_leaves_what_was_there(tmp_path: Path) -> None:
    """Killed at many moments of reading, fitting and writing: the file is the old one or the new one, whole."""
    draw = np.random.default_rng(3)
    count = 100_000
    columns = {
        "x": draw.normal(50, 10, count).round(1),
        "z": draw.integers(0, 2, count),
        "time": draw.exponential(900, count).round(2) + 0.01,
        "status": draw.integers(0, 2, count),
    }
    write_people(tmp_path / "people.csv", columns)
    study, out = write_study(tmp_path, cox()), tmp_path / "model.json"
    out.write_text('{"format": "clinicalc.coefficients/1", "was": "here"}', encoding="utf-8")
    before = out.read_bytes()
    words = [sys.executable, "-m", "clinicalc", "fit", str(study), "-o", str(out), "--replace"]
    there = {"study.toml", "people.csv", "model.json"}
    kept = 0
    for wait in (0.3, 0.6, 0.9, 1.2):
        run = subprocess.Popen(words, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
        time.sleep(wait)
        os.kill(run.pid, signal.SIGKILL)
        run.wait()
        if out.read_bytes() != before:
            read_file(out)  # refused unless it is whole
            break
        kept += 1
    assert kept
    left = {path.name for path in tmp_path.iterdir()} - there
    assert not {name for name in left if name.endswith(".json")}
    ended = call("fit", str(study), "-o", str(out), "--replace")
    assert ended.status == 0, ended.err
    read_file(out)
