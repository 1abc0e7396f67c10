"""The verbs of vetting for a window: look, install, approve, extend, withdraw, remark, hold; and the long readings.

Everything that can be refused without a passphrase is refused before a key is opened. A passphrase is used once and is
kept nowhere. What comes back after something was written is from a fresh reading.
"""

from datetime import date
from pathlib import Path

from clinicalc.assessment.model import Model
from clinicalc.coefficients.reader import ReadFile
from clinicalc.errors import LibraryError
from clinicalc.library import approving, holds, installing, withdrawing
from clinicalc.library.as_of import AsOf
from clinicalc.library.bundle import Bundle
from clinicalc.library.choices import Choices
from clinicalc.library.history import History, tell_history
from clinicalc.library.installing import Candidate
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.standing import ModelState
from clinicalc.library.trust_store import TrustStore, read_trust
from clinicalc.library.writing import Desk
from clinicalc.operations import library_carrying
from clinicalc.operations.course import Course
from clinicalc.operations.library_carrying import BroughtIn, export_opened
from clinicalc.operations.library_reading import gather, look_back_on, read_everything
from clinicalc.operations.library_view import LibraryView, ModelRow, view_of
from clinicalc.operations.meanwhile import require_unchanged
from clinicalc.operations.model_card import ModelCard, card_of_candidate, card_of_state, read_state
from clinicalc.operations.practice_desk import PeopleAfter, PracticeDesk
from clinicalc.operations.signing_keys import Signer, look_at_approver
from clinicalc.operations.version_difference import VersionDifference, set_side_by_side
from clinicalc.operations.writing_desk import find_state_at, open_key_late

__all__ = ["LibraryView", "ModelCard", "ModelRow", "PeopleAfter", "Signer", "VersionDifference", "VettingDesk"]


class VettingDesk(PracticeDesk):
    """VettingDesk(machine, clock), both of this machine where left out; made once for a window.

    Every verb raises LibraryError, LibraryUnreachable, KeyRefused, UsageError or FileNotWritten with what to do, and
    those with a course Stopped, before anything was changed.
    """

    __slots__ = ()

    def read_all(self, course: Course) -> LibraryView:
        """The library with every record and every file read anew."""
        return view_of(self._everything(course))

    def card(self, view: LibraryView, fingerprint: str, course: Course) -> ModelCard:
        """Everything about one model of the view; its file is read now and its examples are recomputed."""
        course.say("Reading the file and recomputing its examples")
        return card_of_state(view, find_state_at(view.opened, fingerprint), read_trust())

    def look_at(self, path: Path, course: Course) -> ModelCard:
        """A file that may be installed, read once; the card holds it until it is installed.

        Raises CoefficientFileRefused with every problem found.
        """
        course.say("Reading the file and recomputing its examples")
        candidate = installing.look_at(path, read_trust())
        opened = self.opened(course)
        state = opened.state(candidate.model.fingerprint)
        is_new = installing.find_among(opened.models, candidate) is None
        return card_of_candidate(view_of(opened), candidate, state, is_new=is_new)

    def difference(self, view: LibraryView, old: str, new: str | ModelCard, course: Course) -> VersionDifference:
        """Two versions side by side: fingerprints of models of the view, or the card of a file that is not in it."""
        course.say("Reading the files and recomputing their examples", 0, 3)
        before = _model_of(view.opened, old)
        after = _model_of(view.opened, new) if isinstance(new, str) else _candidate(new).model
        row = next(row for row in view.rows if row.fingerprint == old)
        return set_side_by_side(row, before, after, course)

    def check_installation(self, card: ModelCard, came_from: str, key_file: Path, course: Course | None = None) -> None:
        """Nothing where `install` needs only the passphrase; raises every other refusal."""
        self._ready_to_install(card, came_from, key_file, course or Course())

    def install(self, card: ModelCard, signer: Signer, came_from: str, course: Course) -> ModelRow:
        """Put the very file that the card shows into the library; it waits for its approval."""
        desk = self._ready_to_install(card, came_from, signer.key_file, course)
        installing.install(desk, _candidate(card), open_key_late(signer, course), came_from)
        return self.row_after(card.fingerprint)

    def check_approval(
        self,
        fingerprint: str,
        choices: Choices,
        key_file: Path,
        course: Course | None = None,
        seen: ModelCard | None = None,
    ) -> None:
        """Nothing where `approve` needs only the passphrase; raises every other refusal."""
        self._ready_to_approve(fingerprint, choices, key_file, course or Course(), seen)

    def approve(
        self, fingerprint: str, choices: Choices, signer: Signer, course: Course, seen: ModelCard | None = None
    ) -> ModelRow:
        """Let a model be used until its review date, with these choices.

        `seen` is the card on which it was decided: what others wrote since then is a refusal, never overruled unseen.
        """
        desk, state, read, trust = self._ready_to_approve(fingerprint, choices, signer.key_file, course, seen)
        approving.approve(desk, state, read, open_key_late(signer, course), choices, trust)
        return self.row_after(fingerprint)

    def extend(
        self,
        fingerprint: str,
        reason: str,
        until: date,
        signer: Signer,
        course: Course,
        typed: str = "",
        seen: ModelCard | None = None,
    ) -> ModelRow:
        """Approve a model for longer with the same choices; a `typed` fingerprint has to be its own.

        `seen` as in `approve`.
        """
        desk = self.sit_down(course)
        state = find_state_at(desk, fingerprint)
        require_unchanged(state, seen)
        approving.approval_in_force(state)
        read, trust = installing.read_installed(desk.source, state), read_trust()
        approving.settle_extension(
            desk,
            state,
            read,
            look_at_approver(desk.authority, signer.key_file),
            trust,
            reason=reason,
            review_until=until,
            typed=typed,
        )
        key = open_key_late(signer, course)
        approving.extend(desk, state, read, key, trust, reason=reason, review_until=until, typed=typed)
        return self.row_after(fingerprint)

    def withdraw(self, fingerprint: str, reason: str, signer: Signer, course: Course) -> ModelRow:
        """Take a model out of use on every machine of the practice."""
        desk = self.sit_down(course)
        state, holder = find_state_at(desk, fingerprint), look_at_approver(desk.authority, signer.key_file)
        withdrawing.settle_withdrawal(desk, state, holder, reason)
        withdrawing.withdraw(desk, state, open_key_late(signer, course), reason)
        return self.row_after(fingerprint)

    def comment(self, fingerprint: str, text: str, signer: Signer, course: Course) -> ModelRow:
        """Leave a remark in a model's history."""
        desk = self.sit_down(course)
        state, holder = find_state_at(desk, fingerprint), look_at_approver(desk.authority, signer.key_file)
        withdrawing.settle_comment(desk, holder, text)
        withdrawing.comment(desk, state, open_key_late(signer, course), text)
        return self.row_after(fingerprint)

    def hold(self, fingerprint: str, why: str) -> ModelRow:
        """Stop using a model on this machine at once; no key is needed."""
        holds.hold(self.machine(), fingerprint, why, self.clock())
        return self.row_after(fingerprint)

    def release(self, fingerprint: str) -> ModelRow:
        """End the hold on this machine; the model then stands where the library says."""
        holds.release(self.machine(), fingerprint, self.clock())
        return self.row_after(fingerprint)

    def history(self, fingerprint: str | None, course: Course) -> History:
        """Every record about one model, or (None) about the library and all models, in chain order."""
        opened = self._everything(course)
        if fingerprint is not None:
            find_state_at(opened, fingerprint)
        records, faults = gather(opened)
        return tell_history(records, faults, None if fingerprint is None else {fingerprint})

    def as_of(self, day: date, course: Course) -> AsOf:
        """Which models gave numbers at the end of a day that is past."""
        return look_back_on(self._everything(course), day)

    def export(self, path: Path, course: Course, *, replace: bool = False) -> Bundle:
        """Write the whole library into one file; refused where something is wrong with it."""
        opened = self.opened(course)
        course.say("Writing the library into one file")
        return export_opened(opened, path, self.clock(), replace=replace)

    def bring_in(self, path: Path, course: Course) -> BroughtIn:
        """Bring this machine's library up to date from an exported file."""
        course.say("Reading the exported file and the library")
        return library_carrying.bring_in(path, self.machine().place, self.clock(), may_make=False)

    def _everything(self, course: Course) -> OpenedLibrary:
        course.say("Reaching the library")
        return read_everything(self.machine(), self.clock(), course)

    def _ready_to_install(self, card: ModelCard, came_from: str, key_file: Path, course: Course) -> Desk:
        desk, candidate = self.sit_down(course), _candidate(card)
        installing.settle_installation(desk, candidate, look_at_approver(desk.authority, key_file), came_from)
        return desk

    def _ready_to_approve(
        self, fingerprint: str, choices: Choices, key_file: Path, course: Course, seen: ModelCard | None
    ) -> tuple[Desk, ModelState, ReadFile, TrustStore]:
        desk = self.sit_down(course)
        state = find_state_at(desk, fingerprint)
        require_unchanged(state, seen)
        read, trust = installing.read_installed(desk.source, state), read_trust()
        approving.settle(desk, state, read, choices, trust)  # what is wrong with the choices before whose key it is
        approving.settle_by(desk, state, read, look_at_approver(desk.authority, key_file), choices, trust)
        return desk, state, read, trust


def _candidate(card: ModelCard) -> Candidate:
    """The proved file of a card. Raises LibraryError where it cannot be used."""
    if card.candidate is None:
        raise LibraryError("its file cannot be used.", where=f"{card.title} {card.version}", why=card.file_fault)
    return card.candidate


def _model_of(opened: OpenedLibrary, fingerprint: str) -> Model:
    """The proved model of the library. Raises LibraryError where its file cannot be used."""
    state = find_state_at(opened, fingerprint)
    candidate, fault = read_state(opened, state, TrustStore())
    if candidate is None:
        raise LibraryError("its file cannot be used.", where=f"{state.title} {state.version}", why=fault)
    return candidate.model
