"""A library carried as one file: written for a machine without the share, and brought up to date from one."""

from pathlib import Path

from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError, FileNotWritten
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen, ChooseSave, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field
from clinicalc.library.bundle import Bundle
from clinicalc.operations.library_carrying import BroughtIn
from clinicalc.operations.vetting_desk import VettingDesk
from clinicalc.report.phrases import count_words


class ExportDeed(FormDeed):
    """All models and records in one file. A file that is there is replaced only where the dialog asked about it."""

    def __init__(self, desk: VettingDesk, errands: Errands, choose_save: ChooseSave) -> None:
        form = Form(
            "Export the library",
            "All models and records in one file of at most 64 MB, for a machine without the share. No key is in it.",
            "E&xport",
        )
        self._confirmed: Path | None = None
        self._choose = choose_save
        self._place = form.add_place("&File to write", self._ask_where)
        self.said = form.add_words("", semibold=True)
        super().__init__(form, errands)
        self._desk = desk

    def begin(self) -> None:
        """Write the file."""
        desk = self._desk
        path = read_field(self._place.path, self._place.edit)
        replace = path == self._confirmed
        self.said.setText("")
        self.work(
            "Exporting",
            lambda course: desk.export(path, course, replace=replace),
            lambda bundle: self._take(path, bundle),
            lambda error: self._place.edit if isinstance(error, FileNotWritten) else None,
        )

    def _take(self, path: Path, bundle: Bundle) -> None:
        models, records = count_words(len(bundle.models), "model"), count_words(len(bundle.records), "record")
        self.said.setText(f"{models} and {records} were written to {path.name}.")
        self.form.leave.setFocus()

    def _ask_where(self, parent: QWidget) -> Path | None:
        self._confirmed = self._choose(parent, Wanted.NEW_BUNDLE, "library.json")
        return self._confirmed


class BringInDeed(FormDeed):
    """Brings this machine's library up to date from a file; nothing in it is taken away by that."""

    def __init__(self, desk: VettingDesk, errands: Errands, choose_open: ChooseOpen) -> None:
        form = Form(
            "Bring in an exported library",
            "What is new in the file is put into the library that this machine uses; nothing is taken away. It is"
            " refused whole where a record in it does not count.",
            "Bring &in",
        )
        self._place = form.add_place("&File", lambda parent: choose_open(parent, Wanted.BUNDLE))
        self.said = form.add_words("", semibold=True)
        super().__init__(form, errands)
        self._desk = desk

    def begin(self) -> None:
        """Bring it in."""
        desk = self._desk
        path = read_field(self._place.path, self._place.edit)
        self.said.setText("")
        self.work("Bringing in", lambda course: desk.bring_in(path, course), self._take, self._at)

    def _take(self, done: BroughtIn) -> None:
        new = f"{count_words(done.carried.new_models, 'model')} and {count_words(done.carried.new_records, 'record')}"
        all_ = f"{count_words(done.carried.models, 'model')} and {count_words(done.carried.records, 'record')}"
        self.said.setText(f"New: {new}. The library now holds {all_}.")
        self.form.leave.setFocus()
        self.written.emit()

    def _at(self, _: ClinicalcError) -> QWidget:
        return self._place.edit
