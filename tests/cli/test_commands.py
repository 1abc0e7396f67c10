"""The commands as their users call them."""

import subprocess
import sys
from pathlib import Path

import pytest
from pypdf import PdfReader

from clinicalc.operations.demonstration import DemoCase
from tests.cli.calling import LIPIDS, WOMAN_61, call, example


def test_assess_prints_the_result_in_reading_order() -> None:
    out = " ".join(call("assess", LIPIDS, *WOMAN_61).out.split())
    parts = [
        "lipid form",
        "Not vetted",
        "10.5",
        "Of 100 people",
        "band 8.3–13.2",
        "Approximate, rebuilt",
        "Caution:",
        "Total cholesterol",
    ]
    places = [out.index(part) for part in parts]
    assert places == sorted(places)


def test_report_writes_the_print_and_says_where(tmp_path: Path) -> None:
    pdf = tmp_path / "print.pdf"
    ended = call("report", LIPIDS, *WOMAN_61, "--out", str(pdf), "--label", "Ottilie Fenn")
    assert ended.status == 0
    assert pdf.read_bytes().startswith(b"%PDF-")
    assert str(pdf) in ended.out


@pytest.mark.parametrize(
    ("words", "size", "pages"),
    [
        ((), (595.28, 841.89), 3),  # ISO 216 in points
        (("--paper", "letter"), (612.0, 792.0), 3),
        (("--paper", "A4", "--no-patient-page"), (595.28, 841.89), 2),
    ],
)
def test_report_takes_the_paper_and_leaves_the_patients_page_out(
    tmp_path: Path, words: tuple[str, ...], size: tuple[float, float], pages: int
) -> None:
    pdf = tmp_path / "print.pdf"
    assert call("report", LIPIDS, *WOMAN_61, "--out", str(pdf), *words).status == 0
    read = PdfReader(pdf).pages
    assert len(read) == pages
    assert all((float(page.mediabox.width), float(page.mediabox.height)) == pytest.approx(size) for page in read)
    assert ("For the patient" in read[-1].extract_text()) == (pages == 3)


def test_report_on_paper_that_it_does_not_know_is_answered_in_words(tmp_path: Path) -> None:
    ended = call("report", LIPIDS, *WOMAN_61, "--out", str(tmp_path / "print.pdf"), "--paper", "a5")
    assert ended.status == 2
    assert "a5" in ended.err
    assert "letter" in ended.err
    assert ended.out == ""


def test_report_without_a_number_writes_nothing(tmp_path: Path) -> None:
    pdf = tmp_path / "print.pdf"
    ended = call("report", LIPIDS, *WOMAN_61[1:], "--out", str(pdf))
    assert ended.status == 3
    assert not pdf.exists()
    assert "was not written" in ended.out


def test_report_to_a_place_that_is_not_there_ends_with_5(tmp_path: Path) -> None:
    ended = call("report", LIPIDS, *WOMAN_61, "--out", str(tmp_path / "nowhere" / "print.pdf"))
    assert (ended.status, ended.out) == (5, "")
    assert "nowhere" in ended.err


def test_inspect_says_everything_once() -> None:
    ended = call("inspect", example("tarnwick-cvd-10y"))
    assert ended.status == 0
    for heading in ("Fingerprint", "Source", "Not for", "Predictors", "Equation", "Worked examples", "Documentation"):
        assert f"\n{heading}" in ended.out
    assert "covariance of" in ended.out
    assert max(len(line) for line in ended.out.splitlines() if "covariance" not in line) <= 120


def test_inspect_names_the_unconfirmed_figures() -> None:
    assert "/equations/0/horizons/0/mean_linear_predictor" in call("inspect", LIPIDS).out


def test_demo_asks_for_a_window_unless_told_not_to(tmp_path: Path) -> None:
    windows: list[DemoCase] = []
    pdf = str(tmp_path / "demo.pdf")
    assert call("demo", "--out", pdf, "--no-window", windows=windows).status == 0
    assert windows == []
    ended = call("demo", "--out", pdf, windows=windows)
    assert ended.status == 0
    assert len(windows) == 1
    assert "band" in ended.out


@pytest.mark.parametrize("command", ["assess", "report", "inspect", "demo"])
def test_every_command_has_help(command: str) -> None:
    ended = call(command, "--help")
    assert ended.status == 0
    assert "Usage:" in ended.out


def test_the_entry_point_leaves_with_the_status_and_clean_streams(tmp_path: Path) -> None:
    run = subprocess.run(
        [sys.executable, "-m", "clinicalc", "assess", LIPIDS, *WOMAN_61[1:], "--json"],
        capture_output=True,
        text=True,
        cwd=tmp_path,
        env={"PATH": "", "LANG": "C", "LC_ALL": "C"},
        check=False,
    )
    assert run.returncode == 3
    assert run.stderr == ""
    assert '"probability": null' in run.stdout


def test_prints_come_out_the_same_again_under_a_stated_time(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "1790000000")
    prints = [tmp_path / "first.pdf", tmp_path / "second.pdf"]
    for pdf in prints:
        assert call("report", LIPIDS, *WOMAN_61, "--out", str(pdf)).status == 0
    assert prints[0].read_bytes() == prints[1].read_bytes()


def test_a_stated_time_that_is_none_is_refused(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "yesterday")
    ended = call("report", LIPIDS, *WOMAN_61, "--out", str(tmp_path / "print.pdf"))
    assert (ended.status, ended.out) == (2, "")
    assert "SOURCE_DATE_EPOCH" in ended.err
