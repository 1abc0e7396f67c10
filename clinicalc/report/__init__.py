"""The print: one assessment as pages for the clinician and one for the patient, with its record attached.

Everything the assessment says goes onto the pages, and nothing else: this room works out no number, asks nobody and
keeps nothing. It refuses a text that it could only print wrongly (a character the print's typefaces lack, a hidden
control character) instead of printing a box, and it leaves no half-written file behind.
"""

from clinicalc.report.attachment import read_attached_record
from clinicalc.report.document import Document, make_document, time_of_printing
from clinicalc.report.paper import Paper
from clinicalc.report.pdf import make_report, save_report

__all__ = [
    "Document",
    "Paper",
    "make_document",
    "make_report",
    "read_attached_record",
    "save_report",
    "time_of_printing",
]
