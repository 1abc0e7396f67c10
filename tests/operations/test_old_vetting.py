"""Prints of an approved model worked out again: the approval is on the pages, in the record, and cannot be changed."""

from dataclasses import replace
from datetime import date
from pathlib import Path
from typing import Any

import pytest

from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.vetting import Vetting
from clinicalc.errors import ClinicalcError
from clinicalc.operations.bedside import assess_patient
from clinicalc.operations.copying import copy_text
from clinicalc.operations.demonstration import demo_case
from clinicalc.operations.old_print import read_old_print
from clinicalc.operations.recheck import Recheck, recheck, report_recheck
from clinicalc.operations.summary import summarise
from clinicalc.report.phrases import NOT_VETTED
from tests.operations.forging import Change, with_changed_record
from tests.report.printing import PRINTED, pages_of, printed

CASE = demo_case()
VETTING = Vetting(
    practice="Tarnwick Northgate",
    approved_by="Dr Ada Tarn",
    role="GP partner",
    approved_on=date(2026, 11, 1),
    review_until=date(2027, 11, 30),
    by_author=False,
    fingerprint=CASE.model.fingerprint,
    library="b" * 64,
    compared=(("/equations/0", "Cleo Fell"),),
)
SAYS = "Approved by Dr Ada Tarn (GP partner) until 30 November 2027"


def pdf_of(vetting: Vetting = VETTING, label: str = "A. Patient", practice: str = "Tarnwick Northgate") -> bytes:
    """The print of the demonstration's patient under an approval."""
    entry = PatientEntry(CASE.entry.typed, label)
    return printed(assess_patient(CASE.model, entry, at=PRINTED, vetting=vetting), practice)


def checked(pdf: bytes, folder: Path) -> Recheck:
    """The print worked out again with the same file."""
    path = folder / "old.pdf"
    path.write_bytes(pdf)
    return recheck(read_old_print(path), CASE.model)


def test_the_approval_takes_the_place_of_the_strip_on_every_page() -> None:
    pages = pages_of(pdf_of())
    assert len(pages) == 2
    assert all(SAYS in page and NOT_VETTED not in page for page in pages)


def test_the_texts_say_it_too() -> None:
    assessment = assess_patient(CASE.model, CASE.entry, at=PRINTED, vetting=VETTING)
    for text in (summarise(assessment), copy_text(assessment)):
        assert f"\n{SAYS}.\n" in text
        assert NOT_VETTED not in text


@pytest.mark.parametrize(
    ("vetting", "label", "practice"),
    [
        (VETTING, "A. Patient", "Tarnwick Northgate"),
        (VETTING, "", ""),
        (VETTING, "A very long label of a patient " * 3, "A very long name of a practice " * 2),
        (replace(VETTING, by_author=True), "A. Patient", "Tarnwick Northgate"),
        (replace(VETTING, caution="The library cannot be reached."), "A. Patient", "Tarnwick Northgate"),
        (replace(VETTING, approved_by="Dr " + "Ada " * 20, role="partner " * 12), "A. Patient", "Tarnwick Northgate"),
    ],
    ids=["usual", "no label", "long label", "by its author", "from the copy", "long name"],
)
def test_such_a_print_agrees(vetting: Vetting, label: str, practice: str, tmp_path: Path) -> None:
    found = checked(pdf_of(vetting, label, practice), tmp_path)
    assert found.differences == ()
    said = " ".join(report_recheck(found))
    assert "approved the file until 30 November 2027. That was not compared with the library" in said


def _nobody(record: Any) -> None:
    record["vetting"] = None


def _another(record: Any) -> None:
    record["vetting"]["by"] = "Cleo Fell"


def _longer(record: Any) -> None:
    record["vetting"]["review_until"] = "2029-11-30"


def _author(record: Any) -> None:
    record["vetting"]["by_author"] = True


@pytest.mark.parametrize("change", [_nobody, _another, _longer, _author])
def test_a_changed_approval_is_seen_on_the_pages(change: Change, tmp_path: Path) -> None:
    assert not checked(with_changed_record(pdf_of(), change), tmp_path).agrees


def test_an_approval_that_was_put_in_afterwards_is_seen(tmp_path: Path) -> None:
    unvetted = printed(assess_patient(CASE.model, CASE.entry, at=PRINTED))

    def put_in(record: Any) -> None:
        record["vetting"] = {
            "practice": "Tarnwick Northgate",
            "by": "Dr Ada Tarn",
            "role": "GP partner",
            "approved_on": "2026-11-01",
            "review_until": "2027-11-30",
            "by_author": False,
            "library": "b" * 64,
        }

    assert checked(unvetted, tmp_path).agrees
    assert not checked(with_changed_record(unvetted, put_in), tmp_path).agrees


def test_a_day_that_is_none_is_refused(tmp_path: Path) -> None:
    def change(record: Any) -> None:
        record["vetting"]["approved_on"] = "2026-02-30"

    with pytest.raises(ClinicalcError, match="approved on 2026-02-30"):
        checked(with_changed_record(pdf_of(), change), tmp_path)
