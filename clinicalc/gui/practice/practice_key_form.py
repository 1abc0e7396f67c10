"""Founding, step 4: the practice key is made and signs the founding."""

from pathlib import Path

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseSave
from clinicalc.gui.form import Form
from clinicalc.gui.practice.key_to_make import KeyToMake
from clinicalc.gui.practice.keyed_form import KeyedForm
from clinicalc.operations.founding_steps import FoundingPlan, found

_BEFORE_FOUNDING = (
    "A lost passphrase is final: nobody can recover it, and without it or without the file nobody can be appointed or "
    "dismissed any more. Before you use the library, copy the file to a second stick and put that, with the passphrase "
    "on paper in a closed envelope, into the practice’s safe."
)


class PracticeKeyForm(KeyedForm):
    """The last step: before it there is no library, after it there is one."""

    founded = Signal(object)
    """The Founded: this machine uses the library now."""

    def __init__(self, errands: Errands, choose_save: ChooseSave, plan: FoundingPlan) -> None:
        form = Form(
            "Practice key",
            f"Step 4 of 4. The practice key says who may approve in the library of {plan.practice}. It signs the "
            "founding now; afterwards it is needed only to appoint or dismiss people and to change the rule.",
            "Found th&e library",
        )
        form.add_words(_BEFORE_FOUNDING, semibold=True)
        key = KeyToMake(
            form,
            choose_save,
            "practice.key",
            says="A new file, best on a stick that is locked away; or the practice key of a founding that broke off.",
            signs=True,
        )
        super().__init__(form, errands, key)
        self._plan = plan

    def library(self) -> Path | None:
        """The folder that was settled in step 1."""
        return self._plan.place

    def begin_with_key(self, path: Path) -> None:
        """Make the key where it is not there yet, and found the library with it."""
        passphrase, plan = self.key.passphrase(), self._plan
        self.work("Founding the library", lambda _: found(plan, path, passphrase), self.founded.emit, self._concerned)

    def _concerned(self, error: ClinicalcError) -> QWidget | None:
        self.key_failed(error)
        return self.key.concerned(error)
