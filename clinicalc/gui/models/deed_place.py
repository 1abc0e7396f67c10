"""The place of the forms on the right side of the Models page: one deed at a time, which is gone when it is done."""

from PySide6.QtCore import QObject, Signal

from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices
from clinicalc.gui.models.deeds.given import Given, LastKey, LibraryDeed
from clinicalc.gui.models.deeds.opening import open_deed
from clinicalc.gui.models.right_stack import RightStack
from clinicalc.operations.model_card import Deed, ModelCard
from clinicalc.operations.vetting_desk import VettingDesk


class DeedPlace(QObject):
    """Opens deeds in a stack. Whichever way a deed ends, it is out of the stack before that is told."""

    done = Signal(object)
    """The ModelRow as it stands after the deed, or None where it was not about one model."""
    left = Signal()
    """It was left without doing anything."""
    card_ready = Signal(object)
    """The ModelCard of a file that was looked at."""
    written = Signal()
    """Something was written, and the deed stays because it still says something."""

    def __init__(self, stack: RightStack, desk: VettingDesk, errands: Errands, choices: FileChoices) -> None:
        super().__init__()
        self._stack, self._desk, self._errands, self._choices = stack, desk, errands, choices
        self._last_key = LastKey()
        self._deed: Deedlike | None = None

    @property
    def is_open(self) -> bool:
        """Whether a deed is on screen, or would be if its page were."""
        return self._deed is not None

    def remember_key(self, path: str) -> None:
        """A person's key file that was named elsewhere in this window: the next form shows it."""
        self._last_key.path = path or self._last_key.path

    def open(self, deed: Deed | LibraryDeed, card: ModelCard | None, given: Given) -> None:
        """Open a deed in place of what the stack shows; one that is open already is left."""
        self.close()
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
        self._deed = made
        made.done.connect(self._finish)
        made.left.connect(self._leave)
        made.card_ready.connect(self._hand_over)
        made.written.connect(self.written)
        self._stack.cover(made)
        made.focus_first()

    def focus(self) -> None:
        """The focus back into the deed, where it was."""
        if self._deed is not None:
            inside = self._deed.focusWidget()
            if inside is not None and inside.isVisible() and inside.isEnabled():
                inside.setFocus()
            else:
                self._deed.focus_first()

    def forget(self) -> None:
        """The passphrases typed in an open deed go: it is out of sight."""
        if self._deed is not None:
            self._deed.forget()

    def close(self) -> None:
        """The open deed goes, if there is one, with everything typed in it."""
        deed, self._deed = self._deed, None
        if deed is not None:
            deed.forget()
            self._stack.uncover()

    def _finish(self, row: object) -> None:
        self.close()
        self.done.emit(row)

    def _leave(self) -> None:
        self.close()
        self.left.emit()

    def _hand_over(self, card: object) -> None:
        self.close()
        self.card_ready.emit(card)
