"""A practice founds a library, approves a model, uses it at the bedside and withdraws it: every text as it is read."""

import os
import re
from datetime import date, timedelta
from pathlib import Path

import pytest
from pypdf import PdfReader

from clinicalc.report.phrases import NOT_VETTED
from clinicalc.units.days import day_words
from tests.cli.calling import call, example
from tests.cli.practices import FINGERPRINT, TARNWICK, WOMAN, Desk, found_practice

UNTIL = date.today() + timedelta(days=365)


def read_print(path: Path) -> str:
    """The text of a print's pages, its lines joined."""
    return " ".join(" ".join(page.extract_text().split()) for page in PdfReader(path).pages)


def joined(text: str) -> str:
    """Folded lines as the sentences they were."""
    return re.sub(r"\n {2,}", " ", text)


def test_from_founding_to_withdrawal(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    desk = found_practice(tmp_path, monkeypatch)
    listed = joined(desk.library("list").out)
    assert listed.startswith(f"Library of Tarnwick Northgate in {desk.place}\n")
    assert "Approvers: Dr Ada Tarn (GP partner), Cleo Fell (Practice manager)." in listed

    # the manager brings the file; it gives no number yet
    assert "Installed by Cleo Fell (Practice manager). Waiting for approval." in desk.install().out
    waiting = call("assess", "--approved", TARNWICK, *WOMAN)
    assert waiting.status == 3
    assert "No number. Waiting for approval. An approver of the practice approves it first." in joined(waiting.out)
    assert "%" not in waiting.out

    # the partner approves it, and it is used under that approval
    points = ("--decision-point", "0.15;Talk about tablets;Meeting of May")
    approved = desk.approve("--fingerprint", FINGERPRINT, *points, until=UNTIL.isoformat())
    says = f"Approved by Dr Ada Tarn (GP partner) until {day_words(UNTIL)}."
    assert approved.out.endswith(f"Signed by Dr Ada Tarn (GP partner).\n{says}\n")
    assessed = call("assess", "--approved", TARNWICK, *WOMAN)
    assert assessed.status == 0
    assert says in assessed.out
    assert NOT_VETTED not in assessed.out
    assert "\n12.3\u202f% within 10 years\n" in assessed.out
    assert "below this practice’s decision point 15.0\u202f% (Talk about tablets; Meeting of May)" in assessed.out

    # the print says it on every page, and is found in the library again
    out = tmp_path / "print.pdf"
    assert call("report", "--approved", TARNWICK, *WOMAN, "--out", os.fspath(out), "--label", "A. Patient").status == 0
    pages = read_print(out)
    assert NOT_VETTED not in pages
    assert pages.count(says[:-1]) == 2
    checked = call("report", "--check", os.fspath(out))
    assert (checked.status, checked.err) == (0, "")
    assert f"The library holds the approval by Dr Ada Tarn until {day_words(UNTIL)}" in joined(checked.out)
    by_name = call("report", "--check", os.fspath(out), "--model", example(TARNWICK))
    assert by_name.status == 0
    assert "That was not compared with the library" in joined(by_name.out)

    # withdrawn, it gives no number, no print, and the old print says so
    reason = ("--reason", "A newer version is in use.")
    assert desk.library("withdraw", TARNWICK, "--key", desk.key("cleo"), *reason).status == 0
    refused = call("assess", "--approved", TARNWICK, *WOMAN)
    assert refused.status == 3
    assert "No number. Withdrawn by Cleo Fell on" in joined(refused.out)
    assert "A newer version is in use." in joined(refused.out)
    assert "%" not in refused.out
    second = tmp_path / "second.pdf"
    assert call("report", "--approved", TARNWICK, *WOMAN, "--out", os.fspath(second)).status == 3
    assert not second.exists()
    old = call("report", "--check", os.fspath(out))
    assert old.status == 0
    assert "Today in the library: Withdrawn by Cleo Fell on" in joined(old.out)

    history = joined(desk.library("show", TARNWICK).out).partition("History\n")[2]
    assert [line.partition(": ")[2] for line in history.splitlines() if not line.startswith(" ")] == [
        "installed (unsigned), from tarnwick-cvd-10y.json",
        f"approved until {day_words(UNTIL)}: Agreed Decision point 15.0\u202f%: Talk about tablets (Meeting of May)"
        " The file was known by its whole fingerprint, which was typed",
        "withdrawn: A newer version is in use.",
    ]
    assert desk.library("verify").status == 0


def test_a_print_whose_approval_was_made_up_does_not_agree(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """The same print made in another library, whose practice calls itself the same."""
    (tmp_path / "one").mkdir()
    _use(found_practice(tmp_path / "one", monkeypatch))
    out = tmp_path / "print.pdf"
    call("report", "--approved", TARNWICK, *WOMAN, "--out", os.fspath(out))
    (tmp_path / "two").mkdir()
    other = found_practice(tmp_path / "two", monkeypatch)
    other.install()
    checked = call("report", "--check", os.fspath(out))
    assert checked.status == 3
    assert "Differs: Library of the approval:" in joined(checked.out)
    assert "Differs: Approval: by Dr Ada Tarn (GP partner) on" in joined(checked.out)


def test_a_second_machine_sees_what_the_first_one_did(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    desk = found_practice(tmp_path, monkeypatch)
    _use(desk)
    id = desk.library("list", "--json").record["practice_key"]
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "second"))
    assert desk.library("join", desk.place, "--practice-key-id", id).status == 0
    assert call("assess", "--approved", TARNWICK, *WOMAN).status == 0

    # out of reach: the copy serves with a caution, and nothing is written
    Path(desk.place).rename(tmp_path / "away")
    served = call("assess", "--approved", TARNWICK, *WOMAN, "--json")
    assert served.status == 0
    (caution,) = (f for f in served.record["findings"] if f["code"] == "library_copy")
    assert caution["grade"] == "caution"
    assert "A withdrawal since then is not known here." in caution["message"]
    out = tmp_path / "print.pdf"
    assert call("report", "--approved", TARNWICK, *WOMAN, "--out", os.fspath(out)).status == 0
    assert "A withdrawal since then is not known here." in read_print(out)
    unwritten = desk.library("withdraw", TARNWICK, "--key", desk.key("cleo"), "--reason", "A misprint")
    assert unwritten.status == 6
    assert "nothing can be written, because the library cannot be reached" in unwritten.err
    (tmp_path / "away").rename(desk.place)
    assert call("report", "--check", os.fspath(out)).status == 0


def _use(desk: Desk) -> None:
    desk.install()
    assert desk.approve("--fingerprint", FINGERPRINT).status == 0
