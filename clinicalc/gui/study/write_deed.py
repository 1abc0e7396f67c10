"""The coefficient file is written: where, and with whose signature, if any."""

from collections.abc import Callable
from pathlib import Path

from PySide6.QtWidgets import QWidget

from clinicalc.development.package import Package
from clinicalc.errors import ClinicalcError, FileNotWritten, KeyRefused, UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.library.keys import SigningKey
from clinicalc.operations.course import Course
from clinicalc.operations.signing_keys import Signer

Sign = Callable[[SigningKey, Course], Package]
"""Makes the same file once more, signed."""


class WriteDeed(FormDeed):
    """`done` has the Path that was written. A file that is there is replaced only where the dialog asked about it."""

    def __init__(self, package: Package, sign: Sign, folder: Path, errands: Errands, choices: FileChoices) -> None:
        form = Form(
            "Write the coefficient file",
            "It is put in place whole or not at all. A signature says that these are the coefficients you publish; it"
            " approves nothing for use.",
            "&Write",
        )
        self._confirmed: Path | None = None
        self._package, self._sign, self._choices = package, sign, choices
        self.place = form.add_place("&File to write", self._ask_where)
        self.place.edit.setText(str(folder / f"{package.model.content.id}.json"))
        self.key = form.add_place(
            "Sign with the &key", lambda parent: choices.which(parent, Wanted.KEY_FILE), says="Left empty: not signed."
        )
        self.secret = form.add_secret("&Passphrase", says="Only for a signature; it is kept nowhere.")
        super().__init__(form, errands)

    def begin(self) -> None:
        """Write the file."""
        path = read_field(self.place.path, self.place.edit)
        signer = self._signer()
        package, sign, replace = self._package, self._sign, path == self._confirmed

        def work(course: Course) -> Path:
            from clinicalc.operations.signing_keys import open_signer
            from clinicalc.operations.study import require_place, write_study

            require_place(path, replace=replace)
            key = None if signer is None else open_signer(signer)
            made = package if key is None else sign(key, course)
            course.go_on()
            write_study(made, path, replace=replace)
            return path

        self.work("Writing", work, self.done.emit, self._at)

    def _signer(self) -> Signer | None:
        if not self.key.field.text:
            if self.secret.secret:
                refuse_at(UsageError("no key file is named.", do="Choose it, or empty the passphrase."), self.key.edit)
            return None
        key_file = read_field(self.key.path, self.key.edit)
        if not self.secret.secret:
            missing = UsageError("the passphrase of the key is missing.", do="Type it, or name no key.")
            refuse_at(missing, self.secret.edit)
        return Signer(key_file, self.secret.secret)

    def _at(self, error: ClinicalcError) -> QWidget:
        if isinstance(error, KeyRefused):
            return self.secret.edit if error.what.startswith("the passphrase") else self.key.edit
        return self.place.edit if isinstance(error, FileNotWritten | UsageError) else self.form.deed

    def _ask_where(self, parent: QWidget) -> Path | None:
        name = f"{self._package.model.content.id}.json"
        self._confirmed = self._choices.where(parent, Wanted.NEW_COEFFICIENT_FILE, name)
        return self._confirmed
