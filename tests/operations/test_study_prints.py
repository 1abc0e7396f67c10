"""The report of a fit as it is read back: all of it there, the pages of the preview, whole or not at all."""

from collections.abc import Callable
from dataclasses import replace
from datetime import UTC, datetime
from pathlib import Path

import pytest
from pypdf import PdfReader

from clinicalc.coefficients.pointers import quoted
from clinicalc.development.study_calibration import calibrate_fit
from clinicalc.development.study_documentation import document_study
from clinicalc.errors import FileNotWritten
from clinicalc.estimation.screened import Screen
from clinicalc.estimation.screening_words import word_screened
from clinicalc.operations.course import Course
from clinicalc.operations.study_prints import lay_out_study_report, require_report_place, write_study_report
from clinicalc.operations.study_report import NO_APPROVAL, NOT_FOR_PATIENTS
from clinicalc.operations.vetting_prints import PrintChoices
from clinicalc.report.document import Document
from clinicalc.report.paper import Paper as Sheet
from clinicalc.report.pdf import write_document
from clinicalc.report.shapes import Rect, Text
from clinicalc.settings import Paper
from tests.operations.reported_studies import LONG, binary_study, fit_from, shipped, two_equations
from tests.report.printing import pages_of, text_of

_MISSING = (Screen.MISSING, Screen.MISSING_TOGETHER)  # said by label: test_study_report_findings
CHOICES = PrintChoices(Paper.A4, datetime(2026, 12, 1, 14, 20, tzinfo=UTC))


def _read(document: Document) -> str:
    return text_of(write_document(document, "A subject"))


def _squeezed(text: str) -> str:
    return "".join(text.split())


@pytest.fixture(scope="module")
def laid_out() -> Document:
    """The report of the shipped study."""
    return lay_out_study_report(*shipped(), Course(), CHOICES)


def test_the_whole_of_it_can_be_read_back(laid_out: Document) -> None:
    fitted, package = shipped()
    said = _squeezed(_read(laid_out))
    fingerprint = package.model.fingerprint
    expected = [
        "Cox fit to 4,329 people with 522 events",
        "Study file tarnwick-cvd-10y-cox.toml, people from tarnwick-cohort.csv",
        *(word_screened(one) for one in fitted.figures[0].screened if one.code not in _MISSING),
        "HDL cholesterol is missing for 271 of 5,000 people (5.4\u202f%). People without it are left out of the fit;",
        *(f"{quoted(problem.column)} in {problem.count}" for problem in fitted.cohort.problems),
        *(f"{', '.join(f'{row:,}' for row in problem.rows)}, …" for problem in fitted.cohort.problems),
        "Cox fit to 4,329 people with 522 events, ties by Efron.",
        *(one.text for one in document_study(fitted).items if one.item != "not stated"),
        *document_study(fitted).unanswered,
        *fitted.model.content.use.cautions,
        NO_APPROVAL,
        f"Fingerprint {fingerprint[:16]}",
    ]
    for text in expected:
        assert _squeezed(text) in said, text


def test_the_figures_of_calibration_stand_under_it(laid_out: Document) -> None:
    (one,) = calibrate_fit(shipped()[0])
    said = _read(laid_out)
    assert "Predicted and observed, 10 years" in said
    assert f"With the event seen by 10 years, {one.calibration.overall.events} people" in said
    assert "Other events are taken as censored, as the fit takes them" in said


def test_furniture_stands_on_every_page(laid_out: Document) -> None:
    pages = pages_of(write_document(laid_out, "A subject"))
    for number, page in enumerate(pages, 1):
        assert f"Report of a fit, page {number} of {len(pages)}" in page
        assert NOT_FOR_PATIENTS in page
        assert "Tarnwick cardiovascular disease, invented Cox example 1.0.0" in page
    assert sum("hazard ratio (95" in page for page in pages) >= 1


@pytest.mark.parametrize("make", [binary_study, two_equations])
@pytest.mark.parametrize("paper", list(Paper))
def test_nothing_is_clipped(make: Callable[[Path], Path], paper: Paper, tmp_path: Path) -> None:
    document = lay_out_study_report(*fit_from(make(tmp_path)), Course(), replace(CHOICES, paper=paper))
    size = Sheet(paper.value)
    for page in document.pages:
        for shape in page.shapes:
            if isinstance(shape, Text):
                left = shape.left(wide := document.lettering.width(shape.text, shape.size, shape.weight))
                assert left >= 0, shape
                assert left + wide <= size.width, shape
                assert 0 < shape.y < size.height, shape
            elif isinstance(shape, Rect):
                assert shape.x >= 0, shape
                assert shape.x + shape.width <= size.width, shape


def test_a_long_label_wraps(tmp_path: Path) -> None:
    assert _squeezed(LONG) in _squeezed(
        _read(lay_out_study_report(*fit_from(binary_study(tmp_path)), Course(), CHOICES))
    )


def test_two_equations_have_sections_of_their_own(tmp_path: Path) -> None:
    said = _read(lay_out_study_report(*fit_from(two_equations(tmp_path)), Course(), CHOICES))
    assert "2 fits to 500 people in the file" in said
    for id in ("female", "male"):
        for heading in ("People", "What they were like", "The model", "Baseline", "Optimism", "What was found"):
            assert f"{heading}: {id}" in said
        assert f"Predicted and observed: {id}, 1 year" in said


def test_without_a_file_made(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path))
    said = _read(lay_out_study_report(fitted, None, Course(), CHOICES))
    assert "no coefficient file was made" in said
    assert "Fingerprint" not in said


def test_a_table_longer_than_a_page_repeats_its_headings(tmp_path: Path) -> None:
    said = pages_of(write_document(lay_out_study_report(*shipped(), Course(), CHOICES), "A subject"))
    with_sex = [page for page in said if "Female" in page]
    assert all("with the event" in page for page in with_sex)


def test_the_pages_of_the_preview_are_those_of_the_file(laid_out: Document, tmp_path: Path) -> None:
    path = tmp_path / "report.pdf"
    write_study_report(path, *shipped(), Course(), CHOICES)
    assert path.read_bytes() == write_document(laid_out, "Report of a fit of a clinical risk model")
    about = PdfReader(path).metadata
    assert about is not None
    assert about.title == "Report of a fit: Tarnwick cardiovascular disease, invented Cox example 1.0.0"
    assert list(tmp_path.iterdir()) == [path]


def test_a_file_that_is_there_stays_unless_it_is_to_be_replaced(tmp_path: Path) -> None:
    path = tmp_path / "report.pdf"
    path.write_bytes(b"%PDF-1.4 an older one")
    with pytest.raises(FileNotWritten, match="there is a file with this name already"):
        require_report_place(path)
    with pytest.raises(FileNotWritten, match="there is a file with this name already"):
        write_study_report(path, *shipped(), Course(), CHOICES)
    assert path.read_bytes() == b"%PDF-1.4 an older one"
    require_report_place(path, replace=True)
    write_study_report(path, *shipped(), Course(), CHOICES, replace=True)
    assert len(PdfReader(path).pages) > 3


@pytest.mark.parametrize(
    ("name", "said"),
    [("nowhere/report.pdf", "There is no folder"), ("report.json", "ends in .pdf"), ("folder.pdf", "This is a folder"),
     ("notes.pdf", "it is not a PDF")],
)  # fmt: skip
def test_places_that_are_refused_before_the_work(name: str, said: str, tmp_path: Path) -> None:
    (tmp_path / "folder.pdf").mkdir()
    (tmp_path / "notes.pdf").write_text("my notes", encoding="utf-8")
    with pytest.raises(FileNotWritten, match=said):
        require_report_place(tmp_path / name, replace=True)
    assert (tmp_path / "notes.pdf").read_text(encoding="utf-8") == "my notes"
