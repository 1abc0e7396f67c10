"""`report --check` as its users call it."""

import json
from pathlib import Path
from typing import Any

import pytest

from tests.cli.calling import LIPIDS, WOMAN_61, call, example
from tests.operations.forging import record_in, with_changed_record, with_page, without_page


@pytest.fixture
def pdf(tmp_path: Path) -> Path:
    """A print of the lipid form."""
    path = tmp_path / "print.pdf"
    assert call("report", LIPIDS, *WOMAN_61, "--out", str(path), "--label", "Ottilie Fenn").status == 0
    return path


def test_a_print_agrees_with_its_file(pdf: Path) -> None:
    ended = call("report", "--check", str(pdf), "--model", LIPIDS)
    assert (ended.status, ended.err) == (0, "")
    assert ended.out.startswith("Agrees: ")
    assert "10.5\u202f% within 10 years" in ended.out
    assert "Fenn" not in ended.out


def test_a_changed_print_does_not_agree(pdf: Path) -> None:
    def change(record: Any) -> None:
        record["probability"] = 0.02

    pdf.write_bytes(with_changed_record(pdf.read_bytes(), change))
    assert json.loads(record_in(pdf.read_bytes()))["probability"] == 0.02
    ended = call("report", "--check", str(pdf), "--model", LIPIDS)
    assert (ended.status, ended.err) == (3, "")
    assert ended.out.startswith("Does not agree: 1 thing differs")
    assert "Differs: Probability: 2.0\u202f% (0.02) → 10.5\u202f%" in ended.out


def test_a_print_with_another_patients_page_does_not_agree(pdf: Path, tmp_path: Path) -> None:
    other = tmp_path / "other.pdf"
    words = (word for word in WOMAN_61 if not word.startswith("age="))
    made = call("report", LIPIDS, "age=45", *words, "--out", str(other), "--label", "Ottilie Fenn")
    assert made.status == 0
    pdf.write_bytes(with_page(without_page(pdf.read_bytes(), 2), other.read_bytes(), 2, at=2))
    ended = call("report", "--check", str(pdf), "--model", LIPIDS)
    assert (ended.status, ended.err) == (3, "")
    assert "Differs: Page 3: " in ended.out


def test_another_file_does_not_agree(pdf: Path) -> None:
    ended = call("report", "--check", str(pdf), "--model", example("tarnwick-cvd-10y"))
    assert ended.status == 3
    assert "Model: another file." in ended.out


def test_a_refused_file_ends_with_4_and_what_is_no_print_with_5(pdf: Path, tmp_path: Path) -> None:
    broken = tmp_path / "broken.json"
    broken.write_text("{}", encoding="utf-8")
    refused = call("report", "--check", str(pdf), "--model", str(broken))
    assert (refused.status, refused.out) == (4, "")
    unreadable = call("report", "--check", str(broken), "--model", LIPIDS)
    assert (unreadable.status, unreadable.out) == (5, "")
    assert "no record" in unreadable.err


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (("--check", "x.pdf"), "--model FILE.json is missing"),
        (("--model", LIPIDS), "--check FILE.pdf is missing"),
        (("--check", "x.pdf", "--model", LIPIDS, "--out", "y.pdf"), "so --out cannot be given"),
        (("--check", "x.pdf", "--model", LIPIDS, "--level", "0.95"), "so --level cannot be given"),
        ((LIPIDS, "age=61", "--check", "x.pdf", "--model", LIPIDS), "so FILE, [FIELD=VALUE]... cannot be given"),
        ((LIPIDS, "age=61"), "--out is missing"),
        (("--out", "x.pdf"), "no coefficient file"),
    ],
)
def test_words_that_do_not_go_together_end_with_2(words: tuple[str, ...], said: str) -> None:
    ended = call("report", *words)
    assert (ended.status, ended.out) == (2, "")
    assert said in ended.err
