"""A key for a person who is to become an approver, or for a publisher, and the card that is handed out."""

import os
from pathlib import Path

from clinicalc.errors import KeyRefused
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseSave, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import read_field, refuse_at
from clinicalc.gui.labels import make_button
from clinicalc.gui.practice.key_plate import KeyPlate
from clinicalc.gui.practice.key_to_make import KeyToMake
from clinicalc.gui.practice.keyed_form import KeyedForm
from clinicalc.gui.practice.sheet_page import SheetPage
from clinicalc.library.appointing import check_label
from clinicalc.library.key_files import BEFORE_MAKING
from clinicalc.library.keys import KeyCard
from clinicalc.operations.founding_steps import make_key_and_card


class MakeKeyForm(KeyedForm):
    """Makes the key and writes its card; `done` comes once its id was shown and the page was left.

    Where the key is there already, only its card is written: that needs no passphrase.
    """

    def __init__(self, errands: Errands, choose_save: ChooseSave) -> None:
        form = Form(
            "Make a key and its card",
            "The key file and its passphrase stay with one person. The card is handed to whoever keeps the practice "
            "key, who appoints the person with it; its id is read aloud.",
            "&Make it",
        )
        self.name = form.add_text("&Name", says="Of the person, as others shall read it.", longest=120)
        form.add_words(BEFORE_MAKING)
        key = KeyToMake(
            form, choose_save, "my.key", says="A new file, on a stick or in a folder of your own.", signs=False
        )
        self.card = form.add_place(
            "Card, to be &handed out", lambda parent: choose_save(parent, Wanted.NEW_CARD, "card.json")
        )
        super().__init__(form, errands, key)
        self.shown: SheetPage | None = None
        """The page with the key's id, once it was made."""

    def name_found(self, card: KeyCard) -> None:
        """The name that the key carries."""
        self.name.edit.setText(card.name)

    def begin(self) -> None:
        """The name comes first on the form, and so it is refused first."""
        self._name()
        super().begin()

    def begin_with_key(self, path: Path) -> None:
        """Make the key where it is not there, and write its card."""
        name = self._name()
        card = read_field(self.card.path, self.card.edit)
        if os.path.lexists(card):
            taken = KeyRefused("there is a file of this name already.", where=str(card), do="Choose another name.")
            refuse_at(taken, self.card.edit)
        passphrase = self.key.passphrase()
        self.work(
            "Making the key",
            lambda _: make_key_and_card(path, name, passphrase, card),
            self._show_id,
            lambda error: self.card.edit if error.where == str(card) else self.key.concerned(error),
        )

    def _name(self) -> str:
        return read_field(lambda: check_label(self.name.text, "name"), self.name.edit)

    def focus_first(self) -> None:
        """The focus to the first field, or to the way on once the key was made."""
        if self.shown is not None:
            self.shown.focus_first()
        else:
            super().focus_first()

    def _show_id(self, card: KeyCard) -> None:
        page = SheetPage(f"The key of {card.name} is made", f"Its card was written to {self.card.field.text}.")
        page.rows.addWidget(KeyPlate(card.id, f"Id of the key of {card.name}"))
        page.add_words(
            "Hand the card to whoever keeps the practice key, and read these sixteen groups aloud when you are asked. "
            "Copy the key file to a second place, and write the passphrase down where you keep what must not be lost."
        )
        go_on = make_button("&Done", name="primary")
        page.foot.addWidget(go_on)
        page.first = go_on
        go_on.clicked.connect(lambda: self.done.emit(None))
        page.left.connect(lambda: self.done.emit(None))
        self.form.hide()
        layout = self.layout()
        assert layout is not None  # the base made it
        layout.addWidget(page)
        page.show()
        self.shown = page
        page.focus_first()
