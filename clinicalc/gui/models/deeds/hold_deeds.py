"""Stopping the use of a model on this machine, and ending that: no key is needed, and nobody else is concerned."""

from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.models.deeds.review_deeds import read_words
from clinicalc.gui.window_words import replace_commands
from clinicalc.library.appointing import LONGEST_TEXT
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.vetting_desk import VettingDesk


class HoldDeed(FormDeed):
    """The model gives no number on this machine until somebody here says otherwise."""

    def __init__(self, card: ModelCard, desk: VettingDesk, errands: Errands) -> None:
        form = Form(
            f"Hold {card.title} {card.version}",
            "It gives no number on this machine from now on. Other machines go on using it: tell an approver, who can"
            " withdraw it everywhere. No key is needed.",
            "&Hold it here",
        )
        self._why = form.add_text("Wh&y", says="Whoever meets the model here reads it.", longest=LONGEST_TEXT)
        super().__init__(form, errands)
        self._card, self._desk = card, desk

    def begin(self) -> None:
        """Hold it."""
        desk = self._desk
        why = read_words(self._why, "reason")
        fingerprint = self._card.fingerprint
        self.work("Holding", lambda _: desk.hold(fingerprint, why), self.done.emit, lambda _: self._why.edit)


class ReleaseDeed(FormDeed):
    """The hold of this machine ends; the model then stands where the library says."""

    def __init__(self, card: ModelCard, desk: VettingDesk, errands: Errands) -> None:
        form = Form(
            f"Release {card.title} {card.version}",
            "The hold of this machine ends, and the model stands where the library says. No key is needed.",
            "&Release",
        )
        if card.row is not None:
            form.add_words(replace_commands(card.row.reason))
        super().__init__(form, errands)
        self._card, self._desk = card, desk

    def begin(self) -> None:
        """Release it."""
        desk = self._desk
        fingerprint = self._card.fingerprint
        self.work("Releasing", lambda _: desk.release(fingerprint), self.done.emit)
