"""`library diff`, `compare-entries`, `export`, `import`, `history` and `as-of` from the command line."""

import csv
import io
import json
import shutil
from datetime import UTC, datetime
from pathlib import Path

import pytest

from tests.cli.calling import Ended, call, example
from tests.library.machines import Shelf, make_shelf
from tests.library.versions import Tree, proved, tree_of

TARNWICK = "tarnwick-cvd-10y"


@pytest.fixture
def shelf(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Shelf:
    """A sound library that this machine has joined."""
    shelf = make_shelf(tmp_path / "library")
    settings = tmp_path / "settings"
    settings.mkdir()
    monkeypatch.setenv("CLINICALC_SETTINGS", str(settings))
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    assert call("library", "join", str(shelf.place), "--practice-key-id", shelf.practice.key.id).status == 0
    return shelf


@pytest.fixture
def newer(tmp_path: Path) -> str:
    """A further version of the model as a file: another intercept and decision point."""

    def change(model: Tree) -> None:
        model["version"] = "1.1.0"
        model["equations"][0]["horizons"][0]["intercept"] += 0.1
        model["decision_points"][0]["probability"] = 0.075

    path = tmp_path / "newer.json"
    path.write_bytes(proved(TARNWICK, change))
    return str(path)


def _said(ended: Ended) -> str:
    return " ".join(ended.out.split())


def test_diff_says_what_changed_and_what_it_does(newer: str) -> None:
    ended = call("library", "diff", example(TARNWICK), newer)
    assert ended.status == 0, ended.err
    said = _said(ended)
    assert "equation all: 10 years: intercept -3.2473031537233066 -3.1473031537233065" in said
    assert "Same: title and outcome (2)" in said
    assert "coefficients (12)" in said
    assert "Effect on 1296 standard patients (10 years)" in said
    assert "Both versions give a number for 1152 of them, only the old one for 0, only the new one" in said
    assert "Largest fall: nobody." in said
    assert ", systolic_bp " in said
    assert " mmHg, bp_treated " in said
    assert max(map(len, ended.out.splitlines())) <= 100


def test_diff_as_json_has_paths_and_unrounded_figures(newer: str) -> None:
    record = call("library", "diff", example(TARNWICK), newer, "--json").record
    changed = {change["new_path"]: (change["old"], change["new"]) for change in record["changes"]}
    assert changed["/model/decision_points/0/probability"] == ("0.1", "0.075")
    (grid,) = record["effect"]["grids"]
    assert [point["probability"] for point in grid["decision_points"]] == [0.075, 0.1]
    rise = grid["largest_rise"]
    words = [f"{id}={text}" for id, text in rise["values"].items()]
    assert call("assess", newer, *words, "--json").record["probability"] == rise["new"]
    assert call("assess", example(TARNWICK), *words, "--json").record["probability"] == rise["old"]


def test_diff_takes_a_model_of_the_library(shelf: Shelf, newer: str) -> None:
    for words in ("tarnwick-cvd-10y", shelf.fingerprint[:12]):
        record = call("library", "diff", words, newer, "--json").record
        assert record["old"]["fingerprint"] == shelf.fingerprint
    assert "The two are the same file." in call("library", "diff", "tarnwick-cvd-10y", example(TARNWICK)).out


def test_diff_of_what_is_not_there(shelf: Shelf, newer: str) -> None:
    ended = call("library", "diff", "tarnwick-cvd-10x", newer)
    assert (ended.status, ended.out) == (6, "")
    assert "Did you mean tarnwick-cvd-10y?" in ended.err
    assert call("library", "diff", "nothing.json", newer).status == 4


def test_entries_that_differ_end_with_3(newer: str, tmp_path: Path) -> None:
    same = call("library", "compare-entries", example(TARNWICK), example(TARNWICK))
    assert same.status == 0
    assert "agree in every figure and every text" in _said(same)
    ended = call("library", "compare-entries", example(TARNWICK), newer, "--json")
    assert ended.status == 3
    assert "/model/equations/0/horizons/0/intercept" in {change["new_path"] for change in ended.record["figures"]}

    tree = tree_of(TARNWICK)
    tree["model"]["use"]["setting"] = "somewhere else"
    words = tmp_path / "words.json"
    words.write_text(json.dumps(tree), encoding="utf-8")
    assert call("library", "compare-entries", example(TARNWICK), str(words)).status == 3
    assert call("library", "compare-entries", example(TARNWICK), str(words), "--figures-only").status == 0


def test_out_and_in_again(shelf: Shelf, tmp_path: Path) -> None:
    out = str(tmp_path / "bundle.json")
    exported = call("library", "export", "--out", out, "--json").record
    assert (exported["models"], exported["records"]) == (1, 4)
    assert call("library", "export", "--out", out).status == 5
    other = str(tmp_path / "other")
    assert "A new library was made" in call("library", "import", out, "--library", other).out
    again = call("library", "import", out, "--library", other, "--json").record
    assert (again["created"], again["new_records"], again["records"]) == (False, 0, 4)
    assert call("library", "list", "--library", other, "--json").record["models"][0]["standing"] == "in_use"


def test_an_older_bundle_is_refused_on_a_machine_that_saw_more(shelf: Shelf, tmp_path: Path) -> None:
    out = str(tmp_path / "bundle.json")
    assert call("library", "export", "--out", out).status == 0
    shelf.practice.withdraw()
    shelf.put()
    assert call("library", "list").status == 0
    shutil.rmtree(shelf.place)
    ended = call("library", "import", out)
    assert (ended.status, ended.out) == (6, "")
    assert "It lacks the record" in ended.err
    assert not shelf.place.exists()


def test_without_a_named_folder_no_new_library_is_made(shelf: Shelf, tmp_path: Path) -> None:
    out = str(tmp_path / "bundle.json")
    assert call("library", "export", "--out", out).status == 0
    shutil.rmtree(shelf.place)
    ended = call("library", "import", out)
    assert ended.status == 6
    assert "name its folder with --library" in ended.err
    assert call("library", "import", out, "--library", str(shelf.place)).status == 0
    assert call("library", "list").status == 0


def test_a_library_that_lacks_what_was_seen_is_not_exported(shelf: Shelf, tmp_path: Path) -> None:
    assert call("library", "list").status == 0
    shelf.file_of(shelf.practice.about_model[-1]).unlink()
    ended = call("library", "export", "--out", str(tmp_path / "bundle.json"))
    assert ended.status == 6
    assert "The library lacks the approval" in ended.err
    assert not (tmp_path / "bundle.json").exists()


def test_history_of_everything_and_of_one_model(shelf: Shelf, tmp_path: Path) -> None:
    ended = call("library", "history")
    assert ended.status == 0
    assert "4. 2026-12-01T10:00:00Z tarnwick-cvd-10y 1.0.0: approved until 30 June 2027" in _said(ended)
    file = tmp_path / "history.csv"
    assert call("library", "history", "tarnwick-cvd-10y", "--csv", str(file)).status == 0
    rows = list(csv.DictReader(io.StringIO(file.read_bytes().decode("utf-8-sig"), newline="")))
    assert [row["kind"] for row in rows] == ["installed", "approved"]
    assert call("library", "history", "--csv", str(file)).status == 5
    assert call("library", "history", "--csv", str(file), "--replace").status == 0


def test_history_names_what_is_wrong_and_ends_with_6(shelf: Shelf) -> None:
    shelf.file_of(shelf.practice.about_model[0]).unlink()
    ended = call("library", "history")
    assert ended.status == 6
    assert "FAULT: Record missing" in _said(ended)
    assert call("library", "history", "--json").record["faults"]


def test_as_of_a_day(shelf: Shelf) -> None:
    record = call("library", "as-of", "2026-12-01", "--json").record
    assert [(one["id"], one["answered"], one["approval"]["by"]) for one in record["models"]] == [
        ("tarnwick-cvd-10y", True, "Dr Ada Tarn")
    ]
    said = _said(call("library", "as-of", "2026-12-01"))
    assert "tarnwick-cvd-10y 1.0.0: answered; approved by Dr Ada Tarn (general practitioner) until 30 June 2027" in said
    assert "The dates are those that the writers of the records stated" in said
    assert "There was no library yet." in call("library", "as-of", "2026-11-29").out


@pytest.mark.parametrize("day", ["yesterday", "2026-13-01", "01.12.2026", "2026-12-1", ""])
def test_as_of_what_is_no_day(shelf: Shelf, day: str) -> None:
    ended = call("library", "as-of", day)
    assert ended.status == 2
    assert "such as 2026-10-02" in ended.err


def test_as_of_a_day_to_come(shelf: Shelf) -> None:
    ended = call("library", "as-of", f"{datetime.now(UTC).year + 2}-01-01")
    assert ended.status == 2
    assert "still to come" in ended.err
