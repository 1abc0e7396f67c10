"""What only the practice key says: who may approve, whose key counts no more, what is allowed by way of exception."""

from clinicalc.assessment.fields import AnswerOption
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import UsageError
from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseOpen, Wanted
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed, read_field, refuse_at
from clinicalc.gui.models.deeds.given import LastKey
from clinicalc.gui.models.deeds.key_fields import KeyFields, sign
from clinicalc.gui.models.deeds.review_deeds import read_words
from clinicalc.gui.segments import Segments
from clinicalc.library.appointing import LONGEST_NAME, LONGEST_TEXT
from clinicalc.library.keys import decode_public, key_id
from clinicalc.library.records import Approver, Policy
from clinicalc.library.standing import ModelState
from clinicalc.operations.library_view import LibraryView
from clinicalc.operations.vetting_desk import VettingDesk

_STAYS = (AnswerOption("void", "Void"), AnswerOption("stays", "Stays in force"))
_MAY = (AnswerOption("no", "May not"), AnswerOption("yes", "May"))


class PeopleForm(FormDeed):
    """A form signed with the practice key; `done` carries the PeopleAfter."""

    def __init__(self, form: Form, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey) -> None:
        form.add_heading("Signature of the practice")
        self.key = KeyFields(form, choose, last_key, of_practice=True)
        super().__init__(form, errands)
        self.desk = desk


class AppointForm(PeopleForm):
    """A person may install, approve and withdraw from here on."""

    def __init__(self, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey) -> None:
        form = Form(
            "Appoint a person",
            "Whose card this is may install, approve and withdraw models from here on. Take the card from the person"
            " and have the key’s digits read aloud: a card alone proves nothing.",
            "&Appoint",
        )
        self._card = form.add_place("&Card of the person’s key", lambda parent: choose(parent, Wanted.CARD))
        self._role = form.add_text("&Role in the practice", longest=LONGEST_NAME)
        self._name = form.add_text("&Name", says="That of the card where this is left empty.", longest=LONGEST_NAME)
        super().__init__(form, desk, errands, choose, last_key)

    def begin(self) -> None:
        """Appoint the person."""
        desk = self.desk
        card = read_field(self._card.path, self._card.edit)
        role, name = read_words(self._role, "role"), self._name.text
        sign(
            self,
            self.key,
            lambda signer, course: desk.appoint(card, role, signer, course, name),
            self.done.emit,
        )


class DismissForm(PeopleForm):
    """A person may approve no longer; what that person approved stays valid."""

    def __init__(
        self, approver: Approver, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey
    ) -> None:
        form = Form(
            f"Dismiss {approver.name}",
            f"{approver.name} ({approver.role}) may no longer install, approve or withdraw, and that key counts no more"
            " for anything new. What was approved with it stays valid; if any of that is in doubt, revoke the key"
            " instead.",
            "&Dismiss",
        )
        self._id = key_id(decode_public(approver.key))
        super().__init__(form, desk, errands, choose, last_key)

    def begin(self) -> None:
        """Dismiss the person."""
        id, desk = self._id, self.desk
        sign(self, self.key, lambda signer, course: desk.dismiss(id, signer, course), self.done.emit)


class RevokeForm(PeopleForm):
    """A key is lost or stolen; each approval by it that is in force is void unless it is known to be the owner's."""

    def __init__(
        self,
        approver: Approver,
        view: LibraryView,
        desk: VettingDesk,
        errands: Errands,
        choose: ChooseOpen,
        last_key: LastKey,
    ) -> None:
        self._id = key_id(decode_public(approver.key))
        form = Form(
            f"Revoke the key of {approver.name}",
            f"The key {group_fingerprint(self._id, 3)} is lost or stolen, and counts no more from here on, for anybody."
            " Withdrawals and installations by it stay.",
            "Re&voke the key",
        )
        self._reason = form.add_text("&Reason", says="It stands in the history.", longest=LONGEST_TEXT)
        self._kept: list[tuple[str, Segments]] = []
        approved = _approved_with(self._id, view)
        if approved:
            form.add_heading("Approvals by this key that are in force")
            form.add_words(
                "Each becomes void, and the model gives no number until it is approved anew, unless you know that the"
                " approval was the owner’s own. Nobody else can tell.",
                soft=True,
            )
        for state in approved:
            answers = form.add_question(f"{state.title} {state.version}", _STAYS)
            answers.choose("void")
            self._kept.append((state.fingerprint, answers))
        super().__init__(form, desk, errands, choose, last_key)

    def begin(self) -> None:
        """Revoke the key."""
        id, desk = self._id, self.desk
        reason = read_words(self._reason, "reason")
        kept = tuple(fingerprint for fingerprint, answers in self._kept if answers.answer == "stays")
        sign(
            self,
            self.key,
            lambda signer, course: desk.revoke_key(id, reason, kept, signer, course),
            self.done.emit,
        )


class PolicyForm(PeopleForm):
    """What the practice allows by way of exception."""

    def __init__(
        self, policy: Policy, desk: VettingDesk, errands: Errands, choose: ChooseOpen, last_key: LastKey
    ) -> None:
        form = Form(
            "Change the policy", "What the practice allows by way of exception, from here on.", "&Sign the policy"
        )
        self._may = form.add_question(
            "&Who made or brought a file", _MAY, says="approve it as well; usually a second person does."
        )
        self._may.choose("yes" if policy.author_may_approve else "no")
        self._hours = form.add_text(
            "&Hours without the library",
            says="0 to 720: for so long a machine that cannot reach the library works on with its verified copy.",
            width=90,
            longest=3,
        )
        self._hours.edit.setText(str(policy.offline_hours))
        self._reason = form.add_text("&Reason", longest=LONGEST_TEXT)
        super().__init__(form, desk, errands, choose, last_key)

    def begin(self) -> None:
        """Change the policy."""
        desk = self.desk
        text = self._hours.text
        if not (text.isascii() and text.isdigit() and int(text) <= _MOST_HOURS):
            wrong = UsageError(
                f"“{text}” is no number of hours between 0 and {_MOST_HOURS}.", do="Type whole hours, such as 24."
            )
            refuse_at(wrong, self._hours.edit)
        policy = Policy(author_may_approve=self._may.answer == "yes", offline_hours=int(text))
        reason = read_words(self._reason, "reason")
        sign(
            self,
            self.key,
            lambda signer, course: desk.set_policy(policy, reason, signer, course),
            self.done.emit,
        )


_MOST_HOURS = 720


def _approved_with(key: str, view: LibraryView) -> tuple[ModelState, ...]:
    """The models whose approval in force was signed with this key."""
    by = {sealed.digest: sealed.record.by for state in view.opened.models for sealed in state.records}
    found = (state for state in view.opened.models if state.approval is not None)
    return tuple(state for state in found if state.approval is not None and by.get(state.approval.digest) == key)
