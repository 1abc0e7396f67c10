"""The report of a fit, as pages for a preview (`lay_out_study_report`) and as a PDF of the same pages.

The PDF is put in place whole or not at all, and takes the place of an older one only where that is asked for.
"""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.operations.vetting_prints import USUAL_CHOICES, PrintChoices
from clinicalc.report.paper import Paper as Sheet
from clinicalc.settings import read_settings

if TYPE_CHECKING:
    from clinicalc.development.estimating import FittedStudy
    from clinicalc.development.package import Package
    from clinicalc.operations.course import Course
    from clinicalc.report.document import Document

# the layout of pages is loaded by the first print, not by every start of the window

_SUBJECT = "Report of a fit of a clinical risk model"


def lay_out_study_report(
    fitted: FittedStudy, package: Package | None, course: Course, choices: PrintChoices = USUAL_CHOICES
) -> Document:
    """The report of every fit of a study; `package` is the coefficient file made from it, None where none was made.

    Raises PrintRefused for a text that could only be printed wrongly, and Stopped.
    """
    from clinicalc.development.study_calibration import calibrate_fit
    from clinicalc.operations.study_report import compose_study_report
    from clinicalc.report.vetting_document import make_vetting_document

    course.say("Comparing predictions with what happened", 0, 2)
    calibrations = calibrate_fit(fitted)
    course.say("Laying out the report", 1, 2)
    settings = read_settings().settings
    document = make_vetting_document(
        compose_study_report(fitted, package, calibrations),
        printed_at=choices.printed_at,
        paper=Sheet((choices.paper or settings.paper).value),
        letterhead=settings.letterhead,
    )
    course.say("Laying out the report", 2, 2)
    return document


def write_study_report(
    path: Path,
    fitted: FittedStudy,
    package: Package | None,
    course: Course,
    choices: PrintChoices = USUAL_CHOICES,
    *,
    replace: bool = False,
) -> None:
    """The same as a file.

    Raises PrintRefused, FileNotWritten where the place cannot be written or is taken, and Stopped.
    """
    from clinicalc.report.pdf import save_document

    save_document(path, lay_out_study_report(fitted, package, course, choices), _SUBJECT, replace=replace)


def require_report_place(path: Path, *, replace: bool = False) -> None:
    """Nothing, where a report may be put at `path`: asked before long work is done for it. Raises FileNotWritten."""
    from clinicalc.report.pdf import check_print_place

    check_print_place(path, replace=replace)
