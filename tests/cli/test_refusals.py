"""Bad words, bad values and bad files: an exit status and a sentence each, and nothing else."""

import json
import os
from pathlib import Path

import pytest

from tests.cli.calling import LIPIDS, WOMAN_61, call, example


def changed(field: str, text: str) -> tuple[str, ...]:
    """The full entry with one field retyped."""
    return (*(word for word in WOMAN_61 if not word.startswith(f"{field}=")), f"{field}={text}")


@pytest.mark.parametrize(
    ("words", "sentence"),
    [
        ((*WOMAN_61, "agee=61"), "Did you mean age?"),
        ((*WOMAN_61, "sixty-one"), "is not a value"),
        ((*WOMAN_61, "age=62"), "age is given twice"),
        ((*WOMAN_61, "--years", "5"), "no horizon of 5 years"),
        ((*WOMAN_61, "--time", "90 d"), "no horizon of 90 days"),
        ((*WOMAN_61, "--time", "soon"), "is not a time span"),
        ((*WOMAN_61, "--recalibration", "low"), "offers no recalibrations"),
        ((*WOMAN_61, "--level", "95"), "Did you mean 0.95?"),
        ((*WOMAN_61, "--level", "nan"), "nan"),
        ((*WOMAN_61, "--level", "wide"), "wide"),
        ((*WOMAN_61, "--bogus"), "--bogus"),
    ],
)
def test_words_that_name_nothing_end_with_2(words: tuple[str, ...], sentence: str) -> None:
    ended = call("assess", LIPIDS, *words, "--json")
    assert (ended.status, ended.out) == (2, "")
    assert sentence in ended.err
    assert "Traceback" not in ended.err


def test_an_unknown_recalibration_names_the_close_one() -> None:
    ended = call("assess", example("cvd-2021-regional"), "--recalibration", "veryhigh")
    assert (ended.status, ended.out) == (2, "")
    assert "Did you mean very-high?" in ended.err


@pytest.mark.parametrize(
    ("field", "text"),
    [
        ("age", "abc"),
        ("age", ""),
        ("age", "-3"),
        ("age", "200"),
        ("age", "9" * 5000),
        ("age", "٦١"),
        ("total_cholesterol", "5.2"),
        ("total_cholesterol", "1,234"),
        ("total_cholesterol", "nan"),
        ("total_cholesterol", "<0.1"),
        ("total_cholesterol", "180 mmHg"),
        ("prior_cvd", ""),
        ("prior_cvd", "yes"),
        ("prior_cvd", "maybe"),
    ],
)
def test_a_value_that_cannot_be_used_ends_with_3_and_null_numbers(field: str, text: str) -> None:
    ended = call("assess", LIPIDS, *changed(field, text), "--json")
    assert (ended.status, ended.err) == (3, "")
    assert ended.record["probability"] is None
    (stop,) = [finding for finding in ended.record["findings"] if finding["grade"] == "stop"]
    assert stop["field"] == field
    assert len(stop["message"]) > 20


def test_a_missing_required_recalibration_ends_with_3() -> None:
    ended = call("assess", example("cvd-2021-regional"), "age=50", "--json")
    assert ended.status == 3
    assert "recalibration" in [finding["code"] for finding in ended.record["findings"]]


def test_a_stop_is_written_in_words_too() -> None:
    ended = call("assess", LIPIDS, *changed("total_cholesterol", "5.2"))
    assert ended.status == 3
    assert "5.2 mmol/L would be" in " ".join(ended.out.split())
    assert "%" not in ended.out.split("Stop:")[0]


def test_files_that_are_none_end_with_4(tmp_path: Path) -> None:
    fifo = tmp_path / "fifo.json"
    os.mkfifo(fifo)
    files = {
        "missing.json": None,
        "empty.json": b"",
        "truncated.json": Path(LIPIDS).read_bytes()[:5000],
        "latin.json": '{"format": "é"}'.encode("latin-1"),
        "large.json": b" " * (5 * 1024 * 1024),
        "deep.json": b"[" * 10_000,
        "nan.json": b'{"format": NaN}',
        "huge.json": b'{"format": 1e999}',
        "twice.json": b'{"format": 1, "format": 2}',
    }
    for name, data in files.items():
        if data is not None:
            (tmp_path / name).write_bytes(data)
    for path in (*(tmp_path / name for name in files), tmp_path, fifo, Path("/dev/zero")):
        ended = call("assess", str(path), *WOMAN_61, "--json")
        assert (ended.status, ended.out) == (4, ""), path
        assert path.name in ended.err
        assert "Traceback" not in ended.err


def test_a_refused_file_says_every_problem_on_a_line_of_its_own(tmp_path: Path) -> None:
    tree = json.loads(Path(LIPIDS).read_text())
    tree["model"]["titel"] = tree["model"].pop("title")
    tree["model"]["worked_examples"][0]["probability"] = "high"
    path = tmp_path / "two.json"
    path.write_text(json.dumps(tree))
    ended = call("inspect", str(path))
    assert ended.status == 4
    lines = ended.err.splitlines()
    assert any("titel" in line and "title" in line for line in lines)
    assert any(line.startswith("/model/worked_examples/0/probability") for line in lines)


def test_markup_in_a_label_is_shown_letter_for_letter(tmp_path: Path) -> None:
    tree = json.loads(Path(LIPIDS).read_text())
    tree["model"]["title"] = "<b>General</b> & <script>"
    path = tmp_path / "markup.json"
    path.write_text(json.dumps(tree))
    assert "<b>General</b> & <script>" in call("inspect", str(path)).out
