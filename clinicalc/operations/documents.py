"""Saving the print."""

from pathlib import Path

from clinicalc.assessment.result import Assessment
from clinicalc.report import save_report, time_of_printing

__all__ = ["save_pdf", "suggest_pdf_name", "time_of_printing"]


def save_pdf(path: Path, assessment: Assessment, *, practice: str = "") -> None:
    """Write the print of an assessment. Raises PrintRefused or FileNotWritten; nothing half-written is left."""
    save_report(path, assessment, practice=practice)


def suggest_pdf_name(assessment: Assessment) -> str:
    """A file name that says nothing about the patient: model and time of the assessment."""
    return f"{assessment.model.content.id} {assessment.at:%Y-%m-%d %H%M}.pdf"
