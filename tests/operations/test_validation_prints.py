"""The report of a validation as it is read back: nothing clipped, furniture on every page, whole or not at all."""

from dataclasses import replace
from datetime import UTC, datetime
from pathlib import Path

import pytest
from msgspec import UnsetType
from pypdf import PdfReader

from clinicalc.errors import FileNotWritten, Stopped
from clinicalc.operations.course import Course
from clinicalc.operations.validating import (
    check_people,
    choose_wish,
    name_version,
    open_validation,
    package_new_version,
    update,
    validate,
)
from clinicalc.operations.validation_prints import lay_out_validation_report, write_validation_report
from clinicalc.operations.validation_report import NOT_FOR_PATIENTS, ReportedUpdate, ReportedValidation
from clinicalc.operations.validation_report_methods import NO_APPROVAL
from clinicalc.operations.vetting_prints import PrintChoices
from clinicalc.report.paper import Paper as Sheet
from clinicalc.report.pdf import write_document
from clinicalc.report.shapes import Rect, Text, Tone
from clinicalc.report.strips import WIDTH
from clinicalc.report.typefaces import Weight
from clinicalc.settings import Paper
from tests.operations.reported_validations import COHORT, EXAMPLES, KINDS, reported
from tests.report.printing import pages_of, text_of

CHOICES = PrintChoices(Paper.A4, datetime(2026, 12, 1, 14, 20, tzinfo=UTC))


@pytest.mark.parametrize("kind", KINDS)
def test_the_whole_of_it_can_be_read_back(kind: str) -> None:
    told = reported(kind)
    pages = pages_of(write_document(lay_out_validation_report(told, Course(), CHOICES), "A subject"))
    assert told.validation.verdict[0] in pages[0]
    assert COHORT in pages[0]
    whole = "".join("".join(pages).split())
    for sentence in (*told.validation.verdict, *told.validation.remarks, NO_APPROVAL):
        assert "".join(sentence.split()) in whole
    for number, page in enumerate(pages, 1):
        assert f"Report of a validation, page {number} of {len(pages)}" in page
        assert NOT_FOR_PATIENTS in page
    assert f"Fingerprint {told.validation.fingerprint[:4]}" in pages[0]


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("paper", list(Paper))
def test_nothing_is_clipped(kind: str, paper: Paper) -> None:
    document = lay_out_validation_report(reported(kind), Course(), replace(CHOICES, paper=paper))
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


def test_the_pages_of_the_preview_are_those_of_the_file(tmp_path: Path) -> None:
    path, told = tmp_path / "report.pdf", reported("intercept_slope")
    write_validation_report(path, told, Course(), CHOICES)
    document = lay_out_validation_report(told, Course(), CHOICES)
    assert path.read_bytes() == write_document(document, "Report of a validation of a clinical risk model")
    about = PdfReader(path).metadata
    assert about is not None
    assert about.title == "Report of a validation: Tarnwick cardiovascular disease, invented Cox example 1.0.0"
    assert list(tmp_path.iterdir()) == [path]


def test_a_file_that_is_there_stays_unless_it_is_to_be_replaced(tmp_path: Path) -> None:
    path, told = tmp_path / "report.pdf", reported("scarce")
    path.write_bytes(b"%PDF-1.4 an older one")
    with pytest.raises(FileNotWritten, match="there is a file with this name already"):
        write_validation_report(path, told, Course(), CHOICES)
    assert path.read_bytes() == b"%PDF-1.4 an older one"
    write_validation_report(path, told, Course(), CHOICES, replace=True)
    assert len(PdfReader(path).pages) > 3


def test_the_practices_point_is_painted_on_wash_in_each_of_the_tables() -> None:
    for points, expected in (((0.1,), 4), ((), 0)):
        told = replace(reported("timed"), practice_points=points)
        document = lay_out_validation_report(told, Course(), CHOICES)
        shapes = [shape for page in document.pages for shape in page.shapes]
        wash = {(s.y, s.height) for s in shapes if isinstance(s, Rect) and s.fill is Tone.WASH and s.width == WIDTH}
        marked = [s for s in shapes if isinstance(s, Text) and s.text == "10.0\u202f%" and s.weight is Weight.SEMIBOLD]
        assert len(marked) == expected  # at two horizons, in two tables
        for text in marked:
            assert any(y <= text.y <= y + height for y, height in wash)


@pytest.fixture(scope="module")
def northgate() -> ReportedValidation:
    """The validation of the shipped example as the command makes it, with the update that its file asks for."""
    course = Course()
    people = check_people(open_validation(EXAMPLES / "tarnwick-northgate-validation.toml"), course)
    found = validate(people, course)
    made = update(people, choose_wish(people.settled), course)
    package = package_new_version(people, made, name_version(people.settled), course, found)
    updated = ReportedUpdate(made, package, "new.json")
    return ReportedValidation(found, people.model, people.file, (0.1,), updated)


def test_the_shipped_example(northgate: ReportedValidation) -> None:
    validation, updated = northgate.validation, northgate.updated
    assert updated is not None
    assert updated.package is not None
    whole = text_of(write_document(lay_out_validation_report(northgate, Course(), CHOICES), "A subject"))
    squeezed = "".join(whole.split())
    for sentence in (*validation.verdict, *validation.remarks, *updated.update.remarks):
        assert "".join(sentence.split()) in squeezed
    (horizon,) = validation.horizons
    for measure in (horizon.observed_to_expected, horizon.slope, horizon.c):
        assert f"{measure.value:.3f} {measure.lower:.3f} to {measure.upper:.3f}" in whole
    for group in validation.groups:
        ratio = group.observed_to_expected
        assert f"{ratio.value:.2f} ({ratio.lower:.2f} to {ratio.upper:.2f})" in whole
        assert f"{group.by}: {group.level}" in whole
    assert "10.0\u202f%" in whole
    assert f"{validation.count.in_file:,} people in the file" in whole


def test_the_new_version_is_named_with_what_it_came_from(northgate: ReportedValidation) -> None:
    updated = northgate.updated
    assert updated is not None
    assert updated.package is not None
    whole = "".join(
        text_of(write_document(lay_out_validation_report(northgate, Course(), CHOICES), "A subject")).split()
    )
    content = updated.package.content.model
    ancestry = content.ancestry
    assert not isinstance(ancestry, UnsetType)
    assert ancestry.fingerprint == northgate.model.fingerprint
    for said in (
        updated.package.model.fingerprint,
        ancestry.fingerprint,
        f"{content.title} {content.version}",
        f"{ancestry.title} {ancestry.version}, id {ancestry.id}",
        ancestry.cohort.words,
        *ancestry.figures,
        "new.json",
    ):
        assert "".join(said.split()) in whole


def test_stopped_before_it_is_written(tmp_path: Path) -> None:
    course = Course()
    course.stop()
    with pytest.raises(Stopped):
        write_validation_report(tmp_path / "report.pdf", reported("scarce"), course, CHOICES)
    assert list(tmp_path.iterdir()) == []
