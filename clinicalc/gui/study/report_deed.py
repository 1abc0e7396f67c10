"""A fit is saved as a report: a PDF of everything that is known about it, put in place whole or not at all."""

from dataclasses import dataclass
from pathlib import Path

from PySide6.QtWidgets import QWidget

from clinicalc.development.package import Package
from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseSave, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field
from clinicalc.gui.study.study_state import MadeFit
from clinicalc.operations.course import Course


@dataclass(frozen=True, slots=True)
class SavedReport:
    """What the form brings: where the report was put, and what was put there, as the head of a sentence."""

    path: Path
    what: str = "The report was"


class ReportDeed(FormDeed):
    """`done` has the SavedReport. A file that is there is replaced only where the dialog asked about it."""

    def __init__(
        self, fit: MadeFit, package: Package | None, folder: Path, errands: Errands, choose: ChooseSave
    ) -> None:
        form = Form(
            "Save a report of the fit",
            "A PDF with the people, the coefficients, what was looked for and what was not answered. It approves"
            " nothing.",
            "&Save",
        )
        self._fit, self._package, self._choose = fit, package, choose
        self._confirmed: Path | None = None
        self._name = f"{fit.fitted.model.content.id}-report.pdf"
        self.place = form.add_place("&File to write", self._ask_where)
        self.place.edit.setText(str(folder / self._name))
        super().__init__(form, errands)

    def begin(self) -> None:
        """Write the file."""
        path = read_field(self.place.path, self.place.edit)
        fit, package, replace = self._fit, self._package, path == self._confirmed

        def work(course: Course) -> SavedReport:
            from clinicalc.operations.study_prints import require_report_place, write_study_report

            require_report_place(path, replace=replace)
            write_study_report(path, fit.fitted, package, course, replace=replace)
            return SavedReport(path)

        def place(_: ClinicalcError) -> QWidget:
            return self.place.edit

        self.work("Writing the report", work, self.done.emit, place)

    def _ask_where(self, parent: QWidget) -> Path | None:
        self._confirmed = self._choose(parent, Wanted.REPORT_PDF, self._name)
        return self._confirmed
