"""Another passphrase for a key that is there; nobody is asked for the new one before the old one is."""

from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError, KeyRefused, UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.library.keys import KeyCard
from clinicalc.library.passphrases import ASKED, check_passphrase
from clinicalc.operations.practice_founding import change_passphrase


class ChangePassphraseForm(FormDeed):
    """`done` comes once the key opens with the new passphrase only."""

    def __init__(self, errands: Errands, choose_open: ChooseOpen) -> None:
        form = Form(
            "Change the passphrase of a key",
            "The key stays the same, and so does what was signed with it. A lost passphrase is final: nobody can "
            "recover it. Copies made before still open with the old one, so replace the copy in the safe.",
            "&Change it",
        )
        super().__init__(form, errands)
        self.place = form.add_place("Key &file", lambda parent: choose_open(parent, Wanted.KEY_FILE))
        self.old = form.add_secret("Passphrase so fa&r")
        self.new = form.add_secret("&New passphrase", says=ASKED)
        self.again = form.add_secret("New passphrase &again")

    def begin(self) -> None:
        """Everything that can be refused without opening the key is refused first."""
        path = read_field(self.place.path, self.place.edit)
        old, new = self.old.secret, self.new.secret
        if not old:
            refuse_at(UsageError("the passphrase so far is missing.", do="Type it first."), self.old.edit)
        read_field(lambda: check_passphrase(new), self.new.edit)
        if new != self.again.secret:
            differ = UsageError("the two new passphrases differ.", do="Type it twice, the same. Nothing was changed.")
            refuse_at(differ, self.new.edit)
        self.work(
            "Changing the passphrase", lambda _: change_passphrase(path, old, new), self._tell_done, self._concerned
        )

    def _tell_done(self, _: KeyCard) -> None:
        self.done.emit(None)

    def _concerned(self, error: ClinicalcError) -> QWidget | None:
        wrong = isinstance(error, KeyRefused) and "passphrase" in error.what
        return self.old.edit if wrong else self.place.edit
