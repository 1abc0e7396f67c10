"""The fields of a key: a file that is made, with a passphrase twice, or one that is there already."""

from pathlib import Path

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QLabel, QWidget

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import ClinicalcError, KeyRefused, UsageError
from clinicalc.gui.file_choosing import ChooseSave, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import read_field, refuse_at
from clinicalc.library.keys import KeyCard
from clinicalc.library.passphrases import ASKED, check_passphrase


class KeyToMake:
    """Fields in a form. `signs`: whether a key that is there already signs now, so that its passphrase is needed."""

    def __init__(self, form: Form, choose: ChooseSave, suggestion: str, *, says: str, signs: bool) -> None:
        self._form = form
        self._signs = signs
        self.found: KeyCard | None = None
        """The key that was found in the file; None while one is to be made."""
        self.place = form.add_place("Key &file", lambda parent: choose(parent, Wanted.NEW_KEY, suggestion), says=says)
        self.says: QLabel = form.add_words("", semibold=True)
        self.says.hide()
        self.secret = form.add_secret("&Passphrase", says=ASKED)
        self.again = form.add_secret("Passphrase &again", says="So that a slip of the finger does not lock you out.")

    def path(self) -> Path:
        """The file. Refuses at the field where none is named, or by half a path."""
        return read_field(self.named, self.place.edit)

    def show(self, card: KeyCard | None) -> None:
        """What a look at the file found: one passphrase, two, or none is needed."""
        self.found = card
        was_here = self.secret.edit.hasFocus() or self.again.edit.hasFocus()
        self._form.show_field(self.secret, card is None or self._signs)
        self._form.show_field(self.again, card is None)
        if card is not None:  # nothing stays typed in a field that is not on screen
            self.again.edit.setText("")
            if not self._signs:
                self.secret.edit.setText("")
        if was_here and card is not None:  # a field that goes would leave the focus to the way out
            (self.secret.edit if self._signs else self._form.deed).setFocus(Qt.FocusReason.OtherFocusReason)
        self.says.setVisible(card is not None)
        if card is not None:
            need = " Only its passphrase is asked for." if self._signs else " No passphrase is asked for."
            self.says.setText(
                f"The key of {card.name}, {group_fingerprint(card.id, 3)}…, is in this file already and is used.{need}"
            )

    def passphrase(self) -> str:
        """The passphrase as typed, "" where none is needed. Refuses at the field what will not do, or differs."""
        if self.found is not None and not self._signs:
            return ""
        typed = self.secret.secret
        if not typed:
            refuse_at(UsageError("the passphrase is missing.", do=ASKED), self.secret.edit)
        if self.found is not None:
            return typed
        try:
            check_passphrase(typed)
        except KeyRefused as error:
            refuse_at(error, self.secret.edit)
        if self.again.secret != typed:
            differ = UsageError(
                "the two passphrases differ." if self.again.secret else "the passphrase is typed only once.",
                do="Type it twice, the same. No key was made.",
            )
            refuse_at(differ, self.secret.edit)
        return typed

    def concerned(self, error: ClinicalcError) -> QWidget | None:
        """The field where a refusal of the key is put right; None where it is about something else."""
        if isinstance(error, KeyRefused):
            return self.secret.edit if "passphrase" in error.what else self.place.edit
        return self.place.edit if error.where and error.where == str(self.place.field.text) else None

    def named(self) -> Path:
        """The file as it is typed. Raises UsageError where there is none, or half a path."""
        if not self.place.field.text:
            raise UsageError(
                "no key file is named.", do="Type its path, or choose it with the button beside the field."
            )
        path = self.place.path()
        if not path.is_absolute():
            raise UsageError(
                f"{path} is not the full path of a file.", do="Begin at the drive or the root, or choose the place."
            )
        return path
