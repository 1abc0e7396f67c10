"""The print: saving it, and laying out its pages for a printer or a preview."""

from __future__ import annotations

import os
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.assessment.result import Assessment
from clinicalc.report.paper import Paper as Sheet
from clinicalc.report.parts import USUAL_PARTS, PrintParts
from clinicalc.settings import Paper

if TYPE_CHECKING:
    from clinicalc.report.document import Document

# the layout of pages is loaded by the first print, not by every start of the window


def save_pdf(
    path: Path,
    assessment: Assessment,
    *,
    practice: str = "",
    parts: PrintParts = USUAL_PARTS,
    paper: Paper = Paper.A4,
    letterhead: tuple[str, ...] = (),
) -> None:
    """Write the print of an assessment. Raises PrintRefused or FileNotWritten; nothing half-written is left."""
    from clinicalc.report.pdf import save_report

    save_report(path, assessment, practice=practice, parts=parts, paper=Sheet(paper.value), letterhead=letterhead)


def lay_out_print(
    assessment: Assessment,
    *,
    practice: str = "",
    parts: PrintParts = USUAL_PARTS,
    paper: Paper = Paper.A4,
    printed_at: datetime | None = None,
    letterhead: tuple[str, ...] = (),
) -> Document:
    """The same print as pages to be painted; `printed_at` is now where it is left out. Raises PrintRefused."""
    from clinicalc.report.document import make_document

    return make_document(
        assessment,
        practice=practice,
        printed_at=printed_at,
        parts=parts,
        paper=Sheet(paper.value),
        letterhead=letterhead,
    )


def stated_time() -> datetime | None:
    """The time in SOURCE_DATE_EPOCH, for prints that must come out the same again; None where none is stated.

    Raises UsageError when that is not a time. Only the command line asks: at the bedside today is today.
    """
    from clinicalc.report.document import time_of_printing

    return time_of_printing() if os.environ.get("SOURCE_DATE_EPOCH", "").strip() else None


def suggest_pdf_name(assessment: Assessment) -> str:
    """A file name that says nothing about the patient: model and time of the assessment."""
    return f"{assessment.model.content.id} {assessment.at:%Y-%m-%d %H%M}.pdf"
