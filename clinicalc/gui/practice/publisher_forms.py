"""Trusting a publisher's key by its card and its id read aloud, and trusting it no longer."""

from dataclasses import dataclass
from pathlib import Path

from clinicalc.assessment.fields import AnswerOption
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import KeyRefused, UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.gui.practice.heard_field import NOT_LOOKED_AT, UNPROVED, HeardField
from clinicalc.gui.practice.looked_at import LookedAt
from clinicalc.gui.practice.looking_form import LookingForm
from clinicalc.library.cards import read_card_file
from clinicalc.library.keys import KeyCard
from clinicalc.library.trust_store import Publisher
from clinicalc.operations.practice_founding import publishers, revoke_publisher, trust_publisher
from clinicalc.operations.read_aloud import KeyToHear
from clinicalc.units.days import day_words

_KEEP, _AGAIN = "no", "yes"
_ANSWERS = (AnswerOption(_KEEP, "No, leave it revoked"), AnswerOption(_AGAIN, "Yes, trust it again"))


@dataclass(frozen=True, slots=True)
class _FoundCard:
    """A card that was read; `is_revoked`: its key was trusted here once and then revoked."""

    card: KeyCard
    is_revoked: bool


class TrustPublisherForm(LookingForm):
    """`done` comes once signatures of the key count on this machine."""

    def __init__(self, errands: Errands, choose_open: ChooseOpen) -> None:
        form = Form(
            "Trust a publisher",
            "A publisher’s valid signature stands in for the fingerprint that would otherwise be typed. The owner "
            "reads the id aloud, over the telephone or side by side; copied out of the message that brought the card "
            "it proves nothing.",
            "&Trust this key",
        )
        super().__init__(form, errands)
        self.card = form.add_place(
            "&Card of the key",
            lambda parent: choose_open(parent, Wanted.CARD),
            says="The file that the owner handed out.",
        )
        self.name = form.add_words("", semibold=True)
        self.unproved = form.add_words(NOT_LOOKED_AT, soft=True)
        self.again = form.add_question("It was &revoked here. Was that by mistake?", _ANSWERS)
        form.show_field(self.again, shown=False)
        self.said = HeardField(form, "&Id as it is read")
        self.said.edit.textEdited.connect(self.settle_when_edited)
        self.said.edit.textChanged.connect(self._show_card)
        self.looked = LookedAt(self, self.card, "Reading the card", _look_at_card, self._take)

    def begin(self) -> None:
        """Trust the key, once the card was read and all digits agree."""
        path = read_field(self.card.path, self.card.edit)
        found = self.looked.require(path)
        if found is None:
            return
        said, again = self.said.heard(), self.again.answer == _AGAIN
        if found.is_revoked and not again:
            revoked = KeyRefused(
                "this key was revoked here, and is trusted again only where that was a mistake.",
                why="A key is revoked when others may have it.",
                do="Ask its owner for a new one, or answer the question with yes.",
            )
            refuse_at(revoked, self.again)
        self.work(
            "Keeping the publisher",
            lambda _: trust_publisher(path, said, again=again),
            lambda _: self.done.emit(None),
            lambda _: self.card.edit,
        )

    def _take(self, found: _FoundCard | None) -> None:
        self.form.show_field(self.again, found is not None and found.is_revoked)
        self.said.expect(None if found is None else KeyToHear(found.card.id))
        self._show_card()

    def _show_card(self) -> None:
        found = self.looked.found
        whole = self.said.is_whole
        name = "" if found is None else found.card.name
        self.name.setText("" if found is None else name if whole else f"It calls itself “{name}”.")
        self.unproved.setText(NOT_LOOKED_AT if found is None else "" if whole else UNPROVED)


class RevokePublisherForm(FormDeed):
    """`done` comes once signatures of the key count no more on this machine."""

    def __init__(self, errands: Errands, publisher: Publisher) -> None:
        form = Form(
            "Trust a publisher no longer",
            f"{publisher.card.name}, key {group_fingerprint(publisher.card.id, 3)}…, trusted on this machine since "
            f"{day_words(publisher.added.astimezone().date())}.",
            "&Revoke it",
        )
        super().__init__(form, errands)
        self._id = publisher.card.id
        form.add_words(
            "Its signatures count no more on this machine, also on files that come later. What is installed stays as "
            "it is: withdraw a model that must not be used. Every machine keeps its own list."
        )

    def begin(self) -> None:
        """Revoke it; the key stays in the list, so that nobody trusts it again by mistake."""
        id = self._id
        self.work("Keeping that", lambda _: revoke_publisher(id), lambda _: self.done.emit(None))


def _look_at_card(path: Path) -> _FoundCard:
    """The card in a file. Raises KeyRefused, and UsageError where its key is trusted already."""
    card = read_card_file(path)
    known = next((publisher for publisher in publishers() if publisher.card.id == card.id), None)
    if known is not None and known.revoked is None:
        raise UsageError(f"this key is trusted here already, as {known.card.name}.", do="Nothing is to be done.")
    return _FoundCard(card, is_revoked=known is not None)
