"""Joining the practice's library from another machine: the folder, and the id of its key as it is read aloud."""

from pathlib import Path

from PySide6.QtCore import Signal

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseFolder
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import read_field
from clinicalc.gui.practice.heard_field import NOT_LOOKED_AT, UNPROVED, HeardField
from clinicalc.gui.practice.looked_at import LookedAt
from clinicalc.gui.practice.looking_form import LookingForm
from clinicalc.operations.joining_steps import StrangeLibrary, join, look_at_library, say_files


class JoinForm(LookingForm):
    """The folder is looked at as soon as it is named; what the library calls itself is shown as unproved."""

    joined = Signal(str)
    """This machine uses the library of this practice now."""

    def __init__(self, errands: Errands, choose_folder: ChooseFolder, place: Path | None = None) -> None:
        form = Form(
            "Join the practice’s library",
            "Telephone whoever keeps the practice key, or sit side by side: the id is read aloud from that person’s "
            "own screen or card, never from a message that came with the folder.",
            "&Join",
        )
        super().__init__(form, errands)
        self.place = form.add_place(
            "&Folder of the library", choose_folder, says="The folder in which library.json lies, mostly on the share."
        )
        self.practice = form.add_words("", semibold=True)
        self.unproved = form.add_words(NOT_LOOKED_AT, soft=True)
        self.said = HeardField(form, "&Id of the practice key")
        self.said.edit.textEdited.connect(self.settle_when_edited)
        self.said.edit.textChanged.connect(lambda: self._show_practice())
        self.looked = LookedAt(self, self.place, "Looking at the library", look_at_library, self._take)
        if place is not None:
            self.place.edit.setText(str(place))

    def begin(self) -> None:
        """Join, once the folder was looked at and all digits agree."""
        place = read_field(self.place.path, self.place.edit)
        if self.looked.require(place) is None:
            return
        said = self.said.heard()
        self.work("Joining the library", lambda _: join(place, said), self.joined.emit, lambda _: self.said.edit)

    def focus_first(self) -> None:
        """The focus to the folder, or to the id where the folder is known."""
        super().focus_first()
        self.looked.look_again()

    def _take(self, found: StrangeLibrary | None) -> None:
        self.said.expect(None if found is None else found.key)
        self._show_practice()

    def _show_practice(self) -> None:
        found = self.looked.found
        if found is None:
            self.practice.setText("")
            self.unproved.setText(NOT_LOOKED_AT)
            return
        files = say_files(found.models)
        proved = self.said.is_whole
        self.practice.setText(
            f"The library of {found.practice}, {files}." if proved else f"It calls itself “{found.practice}”, {files}."
        )
        self.unproved.setText("Its practice key is the one that was read aloud." if proved else UNPROVED)
