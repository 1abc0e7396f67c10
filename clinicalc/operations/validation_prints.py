"""The report of a validation, as pages for a preview and as a PDF of the same pages.

The PDF is put in place whole or not at all, and takes the place of an older one only where that is asked for.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.operations.vetting_prints import USUAL_CHOICES, PrintChoices
from clinicalc.report.paper import Paper as Sheet
from clinicalc.settings import read_settings

if TYPE_CHECKING:
    from clinicalc.operations.course import Course
    from clinicalc.operations.validation_report import ReportedValidation
    from clinicalc.report.document import Document

# the layout of pages is loaded by the first print, not by every start of the window

_SUBJECT = "Report of a validation of a clinical risk model"


def lay_out_validation_report(
    reported: ReportedValidation, course: Course, choices: PrintChoices = USUAL_CHOICES
) -> Document:
    """The report of a validation, and of the update made of it where there is one.

    Raises PrintRefused for a text that could only be printed wrongly, and Stopped.
    """
    from clinicalc.operations.validation_report import compose_validation_report
    from clinicalc.report.vetting_document import make_vetting_document

    course.say("Laying out the report", 0, 1)
    settings = read_settings().settings
    document = make_vetting_document(
        compose_validation_report(reported),
        printed_at=choices.printed_at,
        paper=Sheet((choices.paper or settings.paper).value),
        letterhead=settings.letterhead,
    )
    course.say("Laying out the report", 1, 1)
    return document


def write_validation_report(
    path: Path,
    reported: ReportedValidation,
    course: Course,
    choices: PrintChoices = USUAL_CHOICES,
    *,
    replace: bool = False,
) -> None:
    """The same as a file.

    Raises PrintRefused, FileNotWritten where the place cannot be written or is taken, and Stopped. Ask before long
    work with `study_prints.require_report_place`.
    """
    from clinicalc.report.pdf import save_document

    save_document(path, lay_out_validation_report(reported, course, choices), _SUBJECT, replace=replace)
