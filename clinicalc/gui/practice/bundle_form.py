"""Bringing in a bundle on a machine that does not reach the share: its library is made here and joined at once."""

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError, KeyRefused
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseFolder, ChooseOpen, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import read_field
from clinicalc.gui.practice.heard_field import NOT_LOOKED_AT, UNPROVED, HeardField
from clinicalc.gui.practice.looked_at import LookedAt
from clinicalc.gui.practice.looking_form import LookingForm
from clinicalc.operations.joining_steps import StrangeBundle, bring_in_and_join, look_at_bundle, say_files


class BundleForm(LookingForm):
    """Nothing is written before all digits of the practice key's id agree."""

    joined = Signal(str)
    """This machine uses the library of this practice now."""

    def __init__(self, errands: Errands, choose_open: ChooseOpen, choose_folder: ChooseFolder) -> None:
        form = Form(
            "Bring in an exported library",
            "A bundle: a whole library in one file, exported on a machine that reaches the practice’s folder. It is a "
            "copy: what is decided later comes with a newer file only, a withdrawal too.",
            "Bring it i&n",
        )
        super().__init__(form, errands)
        self.file = form.add_place("E&xported library", lambda parent: choose_open(parent, Wanted.BUNDLE))
        self.practice = form.add_words("", semibold=True)
        self.unproved = form.add_words(NOT_LOOKED_AT, soft=True)
        self.place = form.add_place(
            "&Folder for the library", choose_folder, says="A new folder inside one that is there, or an empty one."
        )
        self.said = HeardField(form, "&Id of the practice key")
        self.said.edit.textEdited.connect(self.settle_when_edited)
        self.looked = LookedAt(self, self.file, "Reading the bundle", look_at_bundle, self._take)
        self.said.edit.textChanged.connect(lambda: self._show_practice())

    def begin(self) -> None:
        """Bring it in, once it was looked at and all digits agree."""
        path = read_field(self.file.path, self.file.edit)
        bundle = self.looked.require(path)
        if bundle is None:
            return
        place = read_field(self.place.path, self.place.edit)
        said = self.said.heard()
        title = "Bringing in the library"
        self.work(title, lambda _: bring_in_and_join(bundle, place, said), self.joined.emit, self._concerned)

    def _concerned(self, error: ClinicalcError) -> QWidget | None:
        return self.said.edit if isinstance(error, KeyRefused) else self.place.edit

    def _take(self, found: StrangeBundle | None) -> None:
        self.said.expect(None if found is None else found.key)
        self._show_practice()

    def _show_practice(self) -> None:
        found = self.looked.found
        self.practice.setText(
            "" if found is None else f"It calls itself “{found.practice}”, {say_files(found.models)}."
        )
        self.unproved.setText(NOT_LOOKED_AT if found is None else "" if self.said.is_whole else UNPROVED)
