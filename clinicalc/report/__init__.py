"""The print: one assessment as an A4 document for the clinician, with its record attached.

Everything the assessment says goes onto the pages, and nothing else: this room works out no number, asks nobody and
keeps nothing. It refuses a text that it could only print wrongly (a character the print's typefaces lack, a hidden
control character) instead of printing a box, and it leaves no half-written file behind.
"""

from clinicalc.report.attachment import read_attached_record
from clinicalc.report.pdf import make_report, save_report, time_of_printing

__all__ = ["make_report", "read_attached_record", "save_report", "time_of_printing"]
