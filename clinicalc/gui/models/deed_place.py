"""The place of the forms on the right side of the Models page: one deed at a time, which is gone when it is done."""

from PySide6.QtCore import Signal

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices
from clinicalc.gui.form_place import FormPlace
from clinicalc.gui.models.deeds.given import Given, LastKey, LibraryDeed
from clinicalc.gui.models.deeds.opening import open_deed
from clinicalc.gui.right_stack import RightStack
from clinicalc.operations.model_card import Deed, ModelCard
from clinicalc.operations.vetting_desk import VettingDesk


class DeedPlace(FormPlace):
    """Opens deeds; `done` tells the ModelRow as it stands after it, or None where it was not about one model."""

    card_ready = Signal(object)
    """The ModelCard of a file that was looked at."""
    written = Signal()
    """Something was written, and the deed stays because it still says something."""

    def __init__(self, stack: RightStack, desk: VettingDesk, errands: Errands, choices: FileChoices) -> None:
        super().__init__(stack)
        self._desk, self._errands, self._choices = desk, errands, choices
        self._last_key = LastKey()

    def remember_key(self, path: str) -> None:
        """A person's key file that was named elsewhere in this window: the next form shows it."""
        self._last_key.path = path or self._last_key.path

    def begin(self, deed: Deed | LibraryDeed, card: ModelCard | None, given: Given) -> None:
        """Open the form of a deed about a model, or about the library."""
        choices = self._choices
        made = open_deed(
            deed,
            card,
            self._desk,
            self._errands,
            choices.which,
            choices.where,
            last_key=self._last_key,
            given=given,
        )
        made.card_ready.connect(self._hand_over)
        made.written.connect(self.written)
        self.open(made)
        made.focus_first()

    def _hand_over(self, card: object) -> None:
        self.close()
        self.card_ready.emit(card)
