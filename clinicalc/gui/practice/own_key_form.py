"""Founding, step 2: the key of the first person who may install and approve."""

from pathlib import Path

from PySide6.QtCore import Signal

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseSave
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import read_field
from clinicalc.gui.practice.key_to_make import KeyToMake
from clinicalc.gui.practice.keyed_form import KeyedForm
from clinicalc.library.appointing import check_label
from clinicalc.library.key_files import BEFORE_MAKING
from clinicalc.library.keys import KeyCard
from clinicalc.operations.founding_steps import FoundingPlan, make_approver


class OwnKeyForm(KeyedForm):
    """Name, role and key; a key file or a card that is there already is taken as it is."""

    settled = Signal(object, str)
    """The Approver, and the key file on the disk."""

    def __init__(self, errands: Errands, choose_save: ChooseSave, plan: FoundingPlan) -> None:
        form = Form(
            "Your own key",
            "Step 2 of 4. Whoever installs or approves a model signs with a key of their own. This one is yours; other "
            "people are appointed later, each with a key that nobody else has.",
            "&Continue",
        )
        self.name = form.add_text("Your &name", longest=120)
        self.role = form.add_text("Your &role", says="As it stands beside your name, such as “partner”.", longest=120)
        form.add_words(BEFORE_MAKING)
        key = KeyToMake(
            form,
            choose_save,
            "my.key",
            says="A new file, on a stick or in a folder of your own; or a key you have already.",
            signs=False,
        )
        super().__init__(form, errands, key)
        self._library = plan.place
        key.place.edit.setText(plan.own_key)
        if plan.approver is not None:
            self.name.edit.setText(plan.approver.name)
            self.role.edit.setText(plan.approver.role)

    def library(self) -> Path | None:
        """The folder that was settled in step 1."""
        return self._library

    def name_found(self, card: KeyCard) -> None:
        """The name that the key carries, where none was typed."""
        if not self.name.text:
            self.name.edit.setText(card.name)

    def begin_with_key(self, path: Path) -> None:
        """Make the key, or take the one that is there."""
        name = read_field(lambda: check_label(self.name.text, "name"), self.name.edit)
        role = read_field(lambda: check_label(self.role.text, "role"), self.role.edit)
        passphrase = self.key.passphrase()
        self.work(
            "Making the key" if self.key.found is None else "Reading the key",
            lambda _: make_approver(path, name, role, passphrase),
            lambda approver: self.settled.emit(approver, str(path)),
            self.key.concerned,
        )
