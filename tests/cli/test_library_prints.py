"""`--pdf` of the library's commands: what is printed, for which paper, and what stays where a file is there already."""

import os
from pathlib import Path

import pytest
from pypdf import PdfReader

from tests.cli.calling import call, example
from tests.cli.practices import FINGERPRINT, TARNWICK, Desk
from tests.library.versions import Tree, proved
from tests.report.printing import text_of


def _read(path: Path) -> str:
    return text_of(path.read_bytes())


def test_show_prints_the_approval_record(approved: Desk) -> None:
    path = approved.folder / "approval.pdf"
    ended = approved.library("show", TARNWICK, "--pdf", os.fspath(path))
    assert (ended.status, ended.err) == (0, "")
    assert f"Its approval record was printed to {path}." in " ".join(ended.out.split())
    said = _read(path)
    assert "Tarnwick Northgate Approval record, page 1 of 2" in said
    assert "Approved by Dr Ada Tarn, GP partner" in said
    assert "Reason Agreed" in said
    assert "File known by its whole fingerprint, which was typed" in said
    about = PdfReader(path).metadata
    assert about is not None
    assert about.title == "Approval record of Tarnwick cardiovascular disease, invented example 1.0.0"
    assert (about.author, about.subject) == ("Tarnwick Northgate", "Approval of one model")


def test_what_the_signatures_of_a_file_are_worth_here_is_printed(desk: Desk) -> None:
    signed = os.fspath(desk.folder / "signed.json")
    assert call("sign", example(TARNWICK), "--key", desk.key("press"), "--out", signed).status == 0
    assert desk.install(signed).status == 0
    path = desk.folder / "approval.pdf"
    assert desk.library("show", TARNWICK, "--pdf", os.fspath(path)).status == 0
    assert "Not in use: this model gives no number" in _read(path)
    assert "which this machine does not know, so that nothing could be checked" in _read(path)
    id = str(desk.library("show", TARNWICK, "--json").record["signatures"][0]["key"])
    grouped = " ".join(id[at : at + 4] for at in range(0, 64, 4))
    assert call("trust", "add", desk.card("press"), "--id", grouped).status == 0
    assert desk.library("show", TARNWICK, "--pdf", os.fspath(path), "--replace").status == 0
    said = _read(path)
    assert f"Signed by Tarnwick Press (key {grouped[:14]}), trusted on this machine." in said
    assert f"The id of its key: {grouped}." in said


def test_diff_of_two_files_needs_no_library_and_names_no_practice(tmp_path: Path) -> None:
    newer = _newer(tmp_path)
    path = tmp_path / "difference.pdf"
    ended = call("library", "diff", example(TARNWICK), newer, "--pdf", os.fspath(path))
    assert (ended.status, ended.err) == (0, "")
    said = _read(path)
    assert said.startswith("tarnwick-cvd-10y 1.0.0 and 1.1.0 Difference of two versions, page 1 of")
    assert "equation all: 10 years: intercept" in said
    assert "Tarnwick Northgate" not in said


def test_diff_says_where_a_version_of_the_library_stands(approved: Desk) -> None:
    path = approved.folder / "difference.pdf"
    ended = approved.library("diff", TARNWICK, _newer(approved.folder), "--pdf", os.fspath(path), "--json")
    assert ended.record["old"]["fingerprint"] == FINGERPRINT
    said = _read(path)
    assert said.startswith("Tarnwick Northgate Difference of two versions")
    assert "tarnwick-cvd-10y 1.0.0 Approved by Dr Ada Tarn (GP partner) until" in said


def test_history_and_as_of_are_printed(approved: Desk) -> None:
    everything, one, day = (approved.folder / f"{name}.pdf" for name in ("everything", "one", "day"))
    assert approved.library("history", "--pdf", os.fspath(everything)).status == 0
    assert approved.library("history", TARNWICK, "--pdf", os.fspath(one)).status == 0
    today = approved.library("history", "--json").record["records"][0]["written"][:10]
    assert approved.library("as-of", today, "--pdf", os.fspath(day)).status == 0
    assert "History of the library of Tarnwick Northgate" in _read(everything)
    assert "4 records, nothing found wrong." in _read(everything)
    assert "History of Tarnwick cardiovascular disease, invented example 1.0.0" in _read(one)
    assert "2 records, nothing found wrong." in _read(one)
    assert "1 of 1 model gave a number." in _read(day)


def test_a_file_that_is_there_stays_unless_it_is_to_be_replaced(approved: Desk) -> None:
    path = approved.folder / "a.pdf"
    path.write_bytes(b"%PDF-1.4 older")
    for words in (("show", TARNWICK), ("history",), ("as-of", "2026-01-01"), ("diff", TARNWICK, _newer(path.parent))):
        ended = approved.library(*words, "--pdf", os.fspath(path))
        assert ended.status == 5, words
        assert ended.out == ""
        assert "there is a file with this name already; it was left as it is" in ended.err
        assert path.read_bytes() == b"%PDF-1.4 older"
    assert approved.library("show", TARNWICK, "--pdf", os.fspath(path), "--replace").status == 0
    assert path.read_bytes().startswith(b"%PDF-1.7")


def test_letter_paper_and_the_same_bytes_for_a_stated_time(approved: Desk, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1796135000")
    first, second = approved.folder / "first.pdf", approved.folder / "second.pdf"
    newer = _newer(approved.folder)
    for path in (first, second):
        words = ("diff", example(TARNWICK), newer, "--pdf", os.fspath(path), "--paper", "Letter")
        assert approved.library(*words).status == 0
    assert first.read_bytes() == second.read_bytes()
    assert {float(page.mediabox.height) for page in PdfReader(first).pages} == {792.0}


def test_what_cannot_be_printed_is_refused_by_name(approved: Desk) -> None:
    assert approved.library("comment", TARNWICK, "Read 中.", "--key", approved.key("cleo")).status == 0
    path = approved.folder / "a.pdf"
    ended = approved.library("history", "--pdf", os.fspath(path))
    assert ended.status == 5
    assert "U+4E2D" in ended.err
    assert not path.exists()


def _newer(folder: Path) -> str:
    """A further version of the invented model as a file."""

    def change(model: Tree) -> None:
        model["version"] = "1.1.0"
        model["equations"][0]["horizons"][0]["intercept"] += 0.1

    path = folder / "newer.json"
    path.write_bytes(proved(TARNWICK, change))
    return os.fspath(path)
