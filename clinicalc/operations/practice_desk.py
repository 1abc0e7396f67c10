"""The verbs for which the practice key is needed: who may approve, which key counts no more, what is allowed."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from pathlib import Path

from clinicalc.library.appointing import find_approver, settle_policy
from clinicalc.library.keys import SigningKey
from clinicalc.library.records import Policy
from clinicalc.library.writing import Desk
from clinicalc.operations import practice_deeds
from clinicalc.operations.course import Course
from clinicalc.operations.library_view import LibraryView
from clinicalc.operations.practice_deeds import PracticeDeed, say_lost
from clinicalc.operations.signing_keys import Signer, look_at_practice_key
from clinicalc.operations.writing_desk import WritingDesk, open_key_late


@dataclass(frozen=True, slots=True)
class PeopleAfter:
    """The library after the practice key said something, and the sentences that tell what it did."""

    view: LibraryView
    says: tuple[str, ...]


class PracticeDesk(WritingDesk):
    """Each verb wants the file and the passphrase of the practice key, and gives back the library read anew."""

    __slots__ = ()

    def appoint(self, card_file: Path, role: str, signer: Signer, course: Course, name: str = "") -> PeopleAfter:
        """Let the person whose card this is install, approve and withdraw; the name is the card's if left out."""
        desk = self._sit_down_for(signer, course)
        practice_deeds.check_appointment(desk, card_file, role, name)
        return self._do(desk, signer, course, lambda key: practice_deeds.appoint(desk, key, card_file, role, name))

    def dismiss(self, who: str, signer: Signer, course: Course) -> PeopleAfter:
        """Take a person (a name, or a key's id) off the list, and end that key; what was approved stays valid."""
        desk = self._sit_down_for(signer, course)
        find_approver(desk.authority, who)
        return self._do(desk, signer, course, lambda key: practice_deeds.dismiss(desk, key, who))

    def revoke_key(
        self, id: str, reason: str, still_valid: Iterable[str], signer: Signer, course: Course
    ) -> PeopleAfter:
        """A lost or stolen key counts no more; `still_valid` are the fingerprints whose approvals by it stay."""
        kept = tuple(still_valid)
        desk = self._sit_down_for(signer, course)
        practice_deeds.check_revocation(desk, id, reason, kept)
        return self._do(desk, signer, course, lambda key: practice_deeds.revoke_key(desk, key, id, reason, kept))

    def set_policy(self, policy: Policy, reason: str, signer: Signer, course: Course) -> PeopleAfter:
        """Another policy from here on."""
        desk = self._sit_down_for(signer, course)
        settle_policy(desk.authority, policy, reason)
        return self._do(desk, signer, course, lambda key: practice_deeds.set_policy(desk, key, policy, reason))

    def _sit_down_for(self, signer: Signer, course: Course) -> Desk:
        """The library to write in, where the file is that of the practice key."""
        desk = self.sit_down(course)
        look_at_practice_key(desk.authority, signer.key_file)
        return desk

    def _do(
        self, desk: Desk, signer: Signer, course: Course, deed: Callable[[SigningKey], PracticeDeed]
    ) -> PeopleAfter:
        done = deed(open_key_late(signer, course))
        view = self.view_after()
        return PeopleAfter(view, (*done.says, *say_lost(desk.models, view.opened.models)))
