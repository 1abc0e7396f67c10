"""`clinicalc fit --report`: a PDF with or without a coefficient file; its place is judged before the fit."""

from pathlib import Path

import pytest
from pypdf import PdfReader

from tests.cli.calling import call
from tests.operations.reported_studies import binary_study


@pytest.fixture
def study(tmp_path: Path) -> Path:
    """A small logistic study."""
    return binary_study(tmp_path)


@pytest.mark.parametrize("with_file", [False, True])
def test_a_report_with_and_without_the_file(study: Path, tmp_path: Path, with_file: bool) -> None:
    report, out = tmp_path / "report.pdf", tmp_path / "model.json"
    ended = call("fit", str(study), "--report", str(report), *(("-o", str(out)) if with_file else ()))
    assert ended.status == 0, ended.err
    assert f"Report of the fit: written to {report}" in ended.out
    assert ("No coefficient file was written." in ended.out) is not with_file
    assert out.exists() is with_file
    assert "Report of a fit, page 1 of" in PdfReader(report).pages[0].extract_text()


def test_the_json_object_names_it(study: Path, tmp_path: Path) -> None:
    report = tmp_path / "report.pdf"
    assert call("fit", str(study), "--report", str(report), "--json").record["report"] == str(report)
    assert "report" not in call("fit", str(study), "--json").record


def test_a_place_that_is_taken_is_said_before_the_fit(study: Path, tmp_path: Path) -> None:
    report, out = tmp_path / "report.pdf", tmp_path / "model.json"
    report.write_bytes(b"%PDF-1.4 an older one")
    (tmp_path / "people.csv").unlink()  # so that a fit that was begun would say something else
    ended = call("fit", str(study), "--report", str(report), "-o", str(out))
    assert ended.status != 0
    assert "there is a file with this name already" in ended.err
    assert report.read_bytes() == b"%PDF-1.4 an older one"
    assert not out.exists()


def test_replaced_where_that_is_said(study: Path, tmp_path: Path) -> None:
    report = tmp_path / "report.pdf"
    report.write_bytes(b"%PDF-1.4 an older one")
    assert call("fit", str(study), "--report", str(report), "--replace").status == 0
    assert len(PdfReader(report).pages) > 2


@pytest.mark.parametrize(
    "words",
    [
        ("--check", "--report", "a.pdf"),
        ("-o", "a.json", "--report", "a.json"),
        ("--report", "a.pdf", "--sign-key", "k"),
    ],
)
def test_words_that_contradict(words: tuple[str, ...], study: Path) -> None:
    assert call("fit", str(study), *words).status == 2
