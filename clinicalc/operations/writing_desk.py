"""What every verb that writes shares: the library opened for writing, a key opened late, and a fresh reading after."""

from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime

from clinicalc.errors import ClinicalcError, LibraryError
from clinicalc.library.keys import SigningKey
from clinicalc.library.machine import Machine, this_machine
from clinicalc.library.opening import OpenedLibrary
from clinicalc.library.standing import ModelState
from clinicalc.library.writing import Desk, sit_down
from clinicalc.operations.course import Course
from clinicalc.operations.library_reading import now, read_library
from clinicalc.operations.library_view import LibraryView, ModelRow, view_of
from clinicalc.operations.signing_keys import Signer, open_signer


@dataclass(frozen=True, slots=True)
class WritingDesk:
    """Made once for a window; `machine` is asked at every verb, so that a library joined meanwhile is found."""

    machine: Callable[[], Machine] = this_machine
    clock: Callable[[], datetime] = now

    def read(self, course: Course) -> LibraryView:
        """The library as it stands: the records of every model, and the files of those in use."""
        return view_of(self.opened(course))

    def opened(self, course: Course) -> OpenedLibrary:
        """The library read now. Raises LibraryError, LibraryUnreachable and Stopped."""
        course.say("Reaching the library")
        return read_library(self.machine(), self.clock(), course)

    def sit_down(self, course: Course) -> Desk:
        """The library read now, to write in. Raises LibraryError where it is out of reach or unsound, and Stopped."""
        return sit_down(self.opened(course))

    def row_after(self, fingerprint: str) -> ModelRow:
        """One model as it stands now that something was written. Raises LibraryError that says that it was."""
        machine, moment = self.machine(), self.clock()
        opened = _reread(lambda: read_library(machine, moment, Course(), only=(fingerprint,)))
        found = view_of(opened).row(fingerprint)
        if found is None:
            raise _written_but("The model is not among its models.")
        return found

    def view_after(self) -> LibraryView:
        """The whole library as it stands now that something was written. Raises LibraryError that says that it was."""
        machine, moment = self.machine(), self.clock()
        return view_of(_reread(lambda: read_library(machine, moment, Course())))


def find_state_at(opened: OpenedLibrary | Desk, fingerprint: str) -> ModelState:
    """Where one model stands. Raises LibraryError where it is not in the library any more."""
    found = next((state for state in opened.models if state.fingerprint == fingerprint), None)
    if found is None:
        raise LibraryError(
            "this model is not in the library.",
            where=f"{fingerprint[:12]}…",
            do="Read the library again: it may have been taken away, or this machine has joined another library.",
        )
    return found


def open_key_late(signer: Signer, course: Course) -> SigningKey:
    """The opened key, after everything else was looked at; the last place at which the work can be stopped.

    Raises KeyRefused for a wrong passphrase, and Stopped.
    """
    course.say("Opening the key")
    key = open_signer(signer)
    course.say("Signing and writing the record")
    return key


def _reread(read: Callable[[], OpenedLibrary]) -> OpenedLibrary:
    try:
        return read()
    except ClinicalcError as fault:
        raise _written_but(str(fault)) from None


def _written_but(why: str) -> LibraryError:
    return LibraryError(
        "it was written, but the library could not be read again after that.",
        why=why,
        do="Read the library again, and look there before doing it a second time.",
    )
