"""The key file and its passphrase: what every signature asks for, and what is said before a passphrase is used."""

from collections.abc import Callable
from pathlib import Path
from typing import TypeVar

from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError, KeyRefused, UsageError
from clinicalc.gui.file_choosing import ChooseOpen, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, WorkingDeed, read_field, refuse_at
from clinicalc.gui.models.deeds.given import LastKey
from clinicalc.library.key_files import require_outside_library
from clinicalc.operations.course import Course
from clinicalc.operations.signing_keys import Signer

_Result = TypeVar("_Result")


class KeyFields:
    """Both fields in a form. The path goes into `last` when it is used; the passphrase is kept nowhere."""

    def __init__(self, form: Form, choose: ChooseOpen, last: LastKey, *, of_practice: bool = False) -> None:
        self._last, self._of_practice = last, of_practice
        self.place = form.add_place(
            "&Key file of the practice" if of_practice else "Your &key file",
            lambda parent: choose(parent, Wanted.KEY_FILE),
        )
        self.secret = form.add_secret("&Passphrase", says="It is asked for every signature, and kept nowhere.")
        self.place.edit.setText(last.practice if of_practice else last.path)

    def path(self) -> Path:
        """The key file. Refused where none is named."""
        return read_field(self._path, self.place.edit)

    def signer(self) -> Signer:
        """Key file and passphrase as typed. Refused where one of them is missing."""
        path = self.path()
        if not self.secret.secret:
            missing = UsageError("the passphrase of the key is missing.", do="Type it; nothing else is missing.")
            refuse_at(missing, self.secret.edit)
        if self._of_practice:
            self._last.practice = self.place.field.text
        else:
            self._last.path = self.place.field.text
        return Signer(path, self.secret.secret)

    def concerned(self, error: ClinicalcError) -> QWidget | None:
        """The field where a refusal of the key is put right; None where it is about something else."""
        if isinstance(error, KeyRefused):
            return self.secret.edit if error.what.startswith("the passphrase") else self.place.edit
        if error.what.startswith(("the key ", "the practice key ", "this key ")):
            return self.place.edit
        return None

    def _path(self) -> Path:
        if not self.place.field.text:
            raise UsageError("no key file is named.", do="Type its path, or choose it with the button beside it.")
        return self.place.path()


def sign(
    deed: WorkingDeed,
    key: KeyFields,
    work: Callable[[Signer, Course], _Result],
    done: Callable[[_Result], None],
    place: Callable[[ClinicalcError], QWidget | None] = lambda _: None,
) -> None:
    """Run work that signs, with what stands in the key's fields. Refused where one of them is empty."""
    signer = key.signer()

    def run(course: Course) -> _Result:
        require_outside_library(signer.key_file)
        return work(signer, course)

    deed.work("Signing", run, done, lambda error: key.concerned(error) or place(error))


def check_first(
    deed: FormDeed,
    key: KeyFields,
    check: Callable[[Path, Course], None],
    place: Callable[[ClinicalcError], QWidget | None] = lambda _: None,
) -> bool:
    """Where no passphrase is typed yet, have everything else checked, and only then ask for it: True.

    Nobody types a secret for a deed that is refused without it. False where a passphrase is there.
    """
    key_file = key.path()
    if key.secret.secret:
        return False

    def run(course: Course) -> None:
        require_outside_library(key_file)
        check(key_file, course)

    def ask(_: None) -> None:
        missing = UsageError(
            "everything else is in order; what is missing is the passphrase of the key.", do="Type it."
        )
        deed.form.refuse(missing, key.secret.edit)

    deed.work("Checking", run, ask, lambda error: key.concerned(error) or place(error))
    return True
