"""A form with a key that is made or found: what lies at its place is looked at before a passphrase is typed."""

from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QTimer

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.practice.key_to_make import KeyToMake
from clinicalc.gui.practice.looking_form import LookingForm
from clinicalc.library.keys import KeyCard
from clinicalc.operations.founding_steps import look_at_key


class KeyedForm(LookingForm):
    """Subclasses say in `begin_with_key` what is done once it is known whether the key is there already."""

    def __init__(self, form: Form, errands: Errands, key: KeyToMake) -> None:
        super().__init__(form, errands)
        self.key = key
        self._seen = ""
        key.place.edit.editingFinished.connect(self.look_again)
        key.place.edit.textEdited.connect(self._forget_seen)

    def library(self) -> Path | None:
        """The folder that is to become the library, where no key may lie; None where that is not known."""
        return None

    def begin_with_key(self, path: Path) -> None:
        """Begin the work. Refuses at the field for what the form itself can say is wrong."""
        raise NotImplementedError

    def begin(self) -> None:
        """Look first where that is still to be done."""
        path = self.key.path()
        if str(path) == self._seen:
            self.begin_with_key(path)
            return
        self._look(path, self.ask)

    def look_again(self) -> None:
        """Look at the file that is named, if it is another one than before."""
        try:
            path = self.key.named()
        except ClinicalcError:
            return  # said when the deed is asked for
        if str(path) != self._seen:
            self._look(path, lambda: None)

    def name_found(self, card: KeyCard) -> None:
        """A key was found in the file; nothing to do here."""

    def key_failed(self, error: ClinicalcError) -> None:
        """The deed was refused; a key may have been made meanwhile, so that the next try looks again."""
        self._seen = ""
        QTimer.singleShot(0, self, self.look_again)

    def _look(self, path: Path, then: Callable[[], None]) -> None:
        library = self.library()

        def done(card: KeyCard | None) -> None:
            self._seen = str(path)
            self.key.show(card)
            if card is not None:
                self.name_found(card)
            QTimer.singleShot(0, self, then)  # the errand itself ends after this

        def failed(error: ClinicalcError) -> None:
            self.key.show(None)
            self.form.refuse(error, self.key.place.edit)

        self.look("Looking at the place of the key", lambda _: look_at_key(path, library), done, failed)

    def _forget_seen(self) -> None:
        self._seen = ""
