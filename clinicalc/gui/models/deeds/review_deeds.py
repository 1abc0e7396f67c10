"""What an approver says about a model that is in the library: approve it for longer, withdraw it, leave a remark."""

from clinicalc.errors import UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.gui.form_fields import TextField
from clinicalc.gui.models.deeds.given import Given, LastKey
from clinicalc.gui.models.deeds.key_fields import KeyFields, sign
from clinicalc.gui.models.deeds.review_dates import a_year_after
from clinicalc.library.appointing import LONGEST_TEXT
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.vetting_desk import VettingDesk
from clinicalc.units.days import day_words


class _ReviewDeed(FormDeed):
    """Words and a key."""

    def __init__(
        self, form: Form, card: ModelCard, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey
    ) -> None:
        self.key = KeyFields(form, choose, last_key)
        super().__init__(form, errands)
        self.card, self.desk = card, desk


class ExtendDeed(_ReviewDeed):
    """The approval in force goes on with the same choices until a later day."""

    def __init__(
        self,
        card: ModelCard,
        desk: VettingDesk,
        errands: Errands,
        choose: ChooseOpen,
        last_key: LastKey,
        given: Given,
    ) -> None:
        form = Form(
            f"Approve {card.title} {card.version} for longer",
            "Recalibration, decision points and what was compared stay as they were approved.",
            "E&xtend",
        )
        approval = card.approval
        if approval is not None:
            until = day_words(approval.review_until)
            form.add_words(f"Now approved by {approval.name} ({approval.role}) until {until}.")
        self._reason = form.add_text("&Reason", says="What was reviewed, and what was found.", longest=LONGEST_TEXT)
        self._until = form.add_day("Approved &until", says="The last day on which it gives a number.")
        if approval is not None:
            self._until.fill(a_year_after(max(approval.review_until, desk.clock().date())))
        super().__init__(form, card, desk, errands, choose, last_key)
        self._given = given

    def begin(self) -> None:
        """Extend the approval."""
        desk = self.desk
        reason = read_words(self._reason, "reason")
        until = read_field(self._until.day, self._until.edit)
        card, typed = self.card, self._given.typed_fingerprint
        sign(
            self,
            self.key,
            lambda signer, course: desk.extend(card.fingerprint, reason, until, signer, course, typed, card),
            self.done.emit,
            lambda error: self._until.edit if isinstance(error, UsageError) else None,
        )


class WithdrawDeed(_ReviewDeed):
    """The model gives no number any more, anywhere in the practice."""

    def __init__(
        self, card: ModelCard, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey
    ) -> None:
        form = Form(
            f"Withdraw {card.title} {card.version}",
            "It gives no number any more, on every machine of the practice, until it is approved again. Every machine"
            " that reaches the library stops within a minute; one that does not reach it stops as soon as it does, or"
            " when its hours without the library are over. What was saved or printed stays as it is.",
            "&Withdraw",
        )
        self._reason = form.add_text("&Reason", says="Everybody who meets the model reads it.", longest=LONGEST_TEXT)
        super().__init__(form, card, desk, errands, choose, last_key)

    def begin(self) -> None:
        """Withdraw it."""
        desk = self.desk
        reason = read_words(self._reason, "reason")
        fingerprint = self.card.fingerprint
        sign(
            self,
            self.key,
            lambda signer, course: desk.withdraw(fingerprint, reason, signer, course),
            self.done.emit,
        )


class CommentDeed(_ReviewDeed):
    """A remark in the model's history, which changes nothing else."""

    def __init__(
        self, card: ModelCard, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey
    ) -> None:
        form = Form(
            f"Remark on {card.title} {card.version}",
            "A signed remark in the model’s history. It changes nothing else, and stays there for good.",
            "&Sign the remark",
        )
        self._text = form.add_text("&Remark", longest=LONGEST_TEXT)
        super().__init__(form, card, desk, errands, choose, last_key)

    def begin(self) -> None:
        """Leave the remark."""
        desk = self.desk
        text = read_words(self._text, "remark")
        fingerprint = self.card.fingerprint
        sign(
            self,
            self.key,
            lambda signer, course: desk.comment(fingerprint, text, signer, course),
            self.done.emit,
        )


def read_words(field: TextField, what: str) -> str:
    """The words in a field. Refused where there are none."""
    if not field.text:
        refuse_at(UsageError(f"the {what} is empty.", do="Say it in a few words."), field.edit)
    return field.text
