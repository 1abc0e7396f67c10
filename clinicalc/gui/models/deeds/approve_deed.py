"""Approving a model: until when, with which recalibration and decision points, and with whose key."""

from pathlib import Path

from PySide6.QtWidgets import QWidget

from clinicalc.coefficients.schema import DecisionPoint
from clinicalc.errors import ClinicalcError, UsageError
from clinicalc.gui.chooser import FramedChooser
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.gui.models.deeds.decision_rows import DecisionRows
from clinicalc.gui.models.deeds.given import Given, LastKey
from clinicalc.gui.models.deeds.key_fields import KeyFields, check_first, sign
from clinicalc.gui.models.deeds.review_dates import a_year_after
from clinicalc.gui.models.deeds.review_deeds import read_words
from clinicalc.gui.window_words import replace_commands
from clinicalc.library.appointing import LONGEST_TEXT
from clinicalc.library.choices import Choices
from clinicalc.library.standing import Standing
from clinicalc.operations.course import Course
from clinicalc.operations.library_view import ModelRow
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.signing_keys import Signer
from clinicalc.operations.vetting_desk import VettingDesk
from clinicalc.report.phrases import count_words


class ApproveDeed(FormDeed):
    """Everything that needs no key is refused first; the passphrase may be left empty until that is in order."""

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
            f"Approve {card.title} {card.version}",
            "It then gives numbers on every machine of the practice, until the end of the day named here.",
            "&Approve",
        )
        if stands := say_where_it_stands(card):
            form.add_words(stands, semibold=True)
        form.add_words(say_what_is_known(card, given))
        self._reason = form.add_text("&Reason", says="It stands in the history.", longest=LONGEST_TEXT)
        self._until = form.add_day("Approved &until", says="The last day on which it gives a number.")
        self._until.fill(given.review_until or a_year_after(desk.clock().date()))
        self._recalibration = _add_recalibration(form, card)
        form.add_heading("Decision points of the practice")
        form.add_words(
            "The file’s own stand beside every number in any case." if _own_points(card) else _NO_POINTS, soft=True
        )
        self._points = DecisionRows(_own_points(card))
        if card.approval is not None:
            self._points.fill(card.approval.decision_points)
        form.add_widget(self._points)
        form.add_heading("Signature")
        self._key = KeyFields(form, choose, last_key)
        super().__init__(form, errands)
        self._card, self._desk, self._given = card, desk, given

    def begin(self) -> None:
        """Check everything that needs no key, and sign where a passphrase is typed."""
        choices, desk, card = self._choices(), self._desk, self._card

        def check(key_file: Path, course: Course) -> None:
            desk.check_approval(card.fingerprint, choices, key_file, course, card)

        def approve(signer: Signer, course: Course) -> ModelRow:
            return desk.approve(card.fingerprint, choices, signer, course, card)

        if check_first(self, self._key, check, self._at):
            return
        sign(self, self._key, approve, self.done.emit, self._at)

    def _choices(self) -> Choices:
        return Choices(
            reason=read_words(self._reason, "reason"),
            review_until=read_field(self._until.day, self._until.edit),
            recalibration=self._chosen_recalibration(),
            decision_points=self._points.points(),
            compared=self._given.compared,
            fingerprint=self._given.typed_fingerprint,
        )

    def _chosen_recalibration(self) -> str | None:
        if self._recalibration is None:
            return None
        chooser = self._recalibration.chooser
        if chooser.currentIndex() < 0:
            none = UsageError(
                "no recalibration is chosen, and this file gives no number without one.", do="Choose the practice’s."
            )
            refuse_at(none, chooser)
        chosen: str | None = chooser.currentData()
        return chosen

    def _at(self, error: ClinicalcError) -> QWidget | None:
        return self._until.edit if "review date" in error.what else None


def say_where_it_stands(card: ModelCard) -> str:
    """What an approval would put aside, in sentences; "" for a model that only waits for its first."""
    if card.row is None or card.row.standing is Standing.WAITING:
        return ""
    after = {
        Standing.WITHDRAWN: "An approval brings it back into use.",
        Standing.HELD: "An approval does not end the hold on this machine.",
    }
    then = after.get(card.row.standing, "This approval takes the place of that one.")
    return f"{replace_commands(card.row.reason)} {then}"


def say_what_is_known(card: ModelCard, given: Given) -> str:
    """By what the file is known to be the publisher's, and how many open figures somebody compared, in sentences."""
    if card.is_trusted:
        known = "A publisher trusted on this machine signed this file."
    elif given.typed_fingerprint.strip():
        known = "The fingerprint that you were given was typed on the card; it is compared now."
    else:
        known = (
            "No publisher trusted on this machine signed this file: its whole fingerprint, as you were given it, is to"
            " be typed on the card first. “Back” leads there."
        )
    if not card.unconfirmed:
        return known
    count = len(card.unconfirmed)
    figures = count_words(count, "figure")
    told = {one.at for one in given.compared}
    done = sum(any(entry.at == at or entry.at.startswith(f"{at}/") for at in told) for entry in card.unconfirmed)
    return f"{known} The file calls {figures} unconfirmed; on the card it is said of {done} who compared them."


_OWN_STAY = "The file’s own stand beside every number in any case; these stand there besides."
_NO_POINTS = "Risks at which the practice acts; there need not be any."


def _own_points(card: ModelCard) -> tuple[DecisionPoint, ...]:
    return () if card.candidate is None else card.candidate.model.content.decision_points


def _add_recalibration(form: Form, card: ModelCard) -> FramedChooser | None:
    """The chooser of what the file offers; a required one is chosen beforehand only where it is the only one."""
    if not card.recalibrations:
        return None
    offers: list[tuple[str, str | None]] = [(f"{label} ({id})", id) for id, label in card.recalibrations]
    entries = offers if card.recalibration_required else [("None: as the file was published", None), *offers]
    says = "This file gives no number without one." if card.recalibration_required else ""
    field = form.add_choice("Reca&libration", entries, says=says)
    before = None if card.approval is None else card.approval.recalibration
    ids = [id for _, id in entries]
    if card.approval is not None and before in ids:
        field.chooser.show_place(ids.index(before))
    elif card.recalibration_required and len(entries) > 1:
        field.chooser.show_place(-1)
    return field
