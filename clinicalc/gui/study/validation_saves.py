"""A validation is saved: as a report, with the update if there is one, or as tables in a folder."""

from pathlib import Path

from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field
from clinicalc.gui.study.report_deed import SavedReport
from clinicalc.gui.study.validation_state import MadeUpdate, MadeValidation, OpenedValidation
from clinicalc.operations.course import Course


class ValidationReportDeed(FormDeed):
    """`done` has the SavedReport. A file that is there is replaced only where the dialog asked about it."""

    def __init__(self, made: MadeValidation, update: MadeUpdate | None, errands: Errands, choices: FileChoices) -> None:
        more = " The update is in it too." if update is not None else ""
        form = Form(
            "Save a report of the validation",
            f"A PDF with the verdict, the people, every figure with its limits and how it was made.{more} It approves"
            " nothing.",
            "&Save",
        )
        self._made, self._update, self._choices = made, update, choices
        self._confirmed: Path | None = None
        self._name = f"{made.ground.model.content.id}-validation.pdf"
        self.place = form.add_place("&File to write", self._ask_where)
        self.place.edit.setText(str(made.ground.path.parent / self._name))
        super().__init__(form, errands)

    def begin(self) -> None:
        """Write the file."""
        path = read_field(self.place.path, self.place.edit)
        made, update, replace = self._made, self._update, path == self._confirmed

        def work(course: Course) -> SavedReport:
            from clinicalc.operations.study_prints import require_report_place
            from clinicalc.operations.validation_prints import write_validation_report
            from clinicalc.operations.validation_report import ReportedUpdate, ReportedValidation

            require_report_place(path, replace=replace)
            updated = None if update is None else ReportedUpdate(update.update, update.package, "", update.after)
            file = made.ground.settled.cohort_file.name
            points = _points(made.ground)
            reported = ReportedValidation(made.validation, made.ground.model, file, points, updated)
            write_validation_report(path, reported, course, replace=replace)
            return SavedReport(path)

        def place(_: ClinicalcError) -> QWidget:
            return self.place.edit

        self.work("Writing the report", work, self.done.emit, place)

    def _ask_where(self, parent: QWidget) -> Path | None:
        self._confirmed = self._choices.where(parent, Wanted.VALIDATION_PDF, self._name)
        return self._confirmed


class _FolderDeed(FormDeed):
    """`done` has the SavedReport, whose path is the folder."""

    HEADING, SAYS, ENDING, WORKS, WHAT = "", "", "", "", ""

    def __init__(self, made: MadeValidation, errands: Errands, choices: FileChoices) -> None:
        form = Form(self.HEADING, self.SAYS, "&Save")
        self._made = made
        self.place = form.add_place("&Folder to make", choices.folder, says="A new folder, or one that is empty.")
        self.place.edit.setText(str(made.ground.path.parent / f"{made.ground.model.content.id}-{self.ENDING}"))
        super().__init__(form, errands)

    def begin(self) -> None:
        """Write the files."""
        folder = read_field(self.place.path, self.place.edit)

        def work(course: Course) -> SavedReport:
            course.go_on()
            self.write(folder)
            return SavedReport(folder, self.WHAT)

        self.work(self.WORKS, work, self.done.emit, lambda _: self.place.edit)

    def write(self, folder: Path) -> None:
        """Put them in the folder; runs beside the window."""
        raise NotImplementedError


class TablesDeed(_FolderDeed):
    """Every figure of a validation in tables."""

    HEADING = "Save the tables of the validation"
    SAYS = (
        "Files for a spreadsheet, in a folder that is made: every figure with its limits, the curve, the decision"
        " points, the groups, where everybody went."
    )
    ENDING, WORKS, WHAT = "validation", "Writing the tables", "The tables were"

    def write(self, folder: Path) -> None:
        """A CSV file each."""
        from clinicalc.operations.validation_tables import write_validation_tables

        write_validation_tables(folder, self._made.validation)


class DrawingsDeed(_FolderDeed):
    """Every drawing of a validation as a file."""

    HEADING = "Save the drawings of the validation"
    SAYS = (
        "A PDF for each drawing, for a paper or a slide, in a folder that is made: where everybody went, calibration,"
        " how the predictions lie, net benefit, the groups."
    )
    ENDING, WORKS, WHAT = "drawings", "Writing the drawings", "The drawings were"

    def write(self, folder: Path) -> None:
        """A PDF each."""
        from clinicalc.operations.validation_figures import write_validation_figures

        write_validation_figures(folder, self._made.validation, self._made.ground.model)


def _points(ground: OpenedValidation) -> tuple[float, ...]:
    own = ground.model.content.id
    return tuple(point.probability for point in ground.practice_points if point.model == own)
