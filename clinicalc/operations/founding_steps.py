"""The founding of a practice's library in steps that can be left and taken up again; each is checked before the next.

What is done is on the disk: a key that was made stays made, and a founding that was broken off goes on with its file.
No passphrase is kept from one step to the next, so that the practice key is made and signs within one step, the last.
"""

import os
from dataclasses import dataclass, replace
from pathlib import Path

from clinicalc.errors import FileNotWritten, KeyRefused, LibraryError, UsageError
from clinicalc.library.appointing import check_label
from clinicalc.library.cards import write_card
from clinicalc.library.creation import check_free
from clinicalc.library.key_files import check_place, make_key
from clinicalc.library.keys import KeyCard
from clinicalc.library.records import Approver, Policy
from clinicalc.operations import practice_founding
from clinicalc.operations.practice_founding import Founded
from clinicalc.operations.publishing import read_any_card
from clinicalc.operations.signing_keys import Signer
from clinicalc.settings import change_settings, library_place, read_settings

LONGEST_PRACTICE = 80
"""So that it fits on a print as well."""


@dataclass(frozen=True, slots=True)
class MachineStands:
    """How far this machine is: where its library lies (None for none), whether it was joined, the practice's name.

    `problems`: what could not be read in the settings, which may be why nothing is stated.
    """

    place: Path | None
    practice_key: str
    practice: str
    problems: tuple[str, ...]

    @property
    def has_joined(self) -> bool:
        """Whether a place is named and a key that speaks for the practice is pinned."""
        return self.place is not None and bool(self.practice_key)


@dataclass(frozen=True, slots=True)
class FoundingPlan:
    """What was settled before the practice key signs; no passphrase is among it.

    `own_key`: the file of the approver's key. `author_may_approve` is None while nobody has said it.
    """

    practice: str = ""
    place: Path | None = None
    approver: Approver | None = None
    own_key: str = ""
    author_may_approve: bool | None = None

    @property
    def is_whole(self) -> bool:
        """Whether only the practice key is missing."""
        settled = self.practice and self.place is not None and self.approver is not None
        return bool(settled) and self.author_may_approve is not None


def look_at_machine() -> MachineStands:
    """How far this machine is, by its settings. Never raises."""
    reading = read_settings()
    problems = list(reading.problems)
    place: Path | None = None
    try:
        place = library_place(reading.settings.library)
    except UsageError as fault:
        problems.append(str(fault))
    return MachineStands(place, reading.settings.practice_key, reading.settings.practice, tuple(problems))


def check_practice(name: str) -> str:
    """The practice's name as it is kept. Raises UsageError where it is empty, too long or holds what is not seen."""
    kept = check_label(name, "practice’s name")
    if len(kept) > LONGEST_PRACTICE:
        raise UsageError(f"the practice’s name has {len(kept)} characters, and at most {LONGEST_PRACTICE} are kept.")
    return kept


def check_new_place(place: Path) -> None:
    """Nothing where a library can be made at `place`: a new folder in one that is there, or an empty one.

    Raises LibraryError with what is in the way; nothing is left behind by the trial.
    """
    if not place.is_absolute():
        raise UsageError(
            f"{place} is not the full path of a folder.",
            do="Begin at the drive or the root, or choose the folder above it and add a name.",
        )
    above = place.parent
    if not os.path.lexists(place) and not above.is_dir():
        raise LibraryError(
            f"the folder {above} is not there, so no library can be made in it.",
            do="Make that folder first, connect the share on which it lies, or choose another place.",
        )
    check_free(place)


def look_at_key(path: Path, library: Path | None) -> KeyCard | None:
    """The card of the key in the file at `path`, None where a new key can be put there.

    `library`: the folder that is to become the library, None where it is not known yet. Raises KeyRefused where the
    file is something else, or its place lies in a library; FileNotWritten where nothing can be written there.
    """
    if library is not None and _lies_in(path, library):
        raise KeyRefused(
            "a private key is never kept inside a library’s folder, which is copied and shared.",
            where=str(path),
            do="Choose a folder of your own, such as one on a stick that you carry. No key was made.",
        )
    if os.path.lexists(path):
        return read_any_card(path)
    check_place(path)
    _try_to_write(path)
    return None


def make_approver(path: Path, name: str, role: str, passphrase: str) -> Approver:
    """A person with the key of the file at `path`, which is made where it is not there yet (`passphrase` seals it).

    Raises KeyRefused, LibraryError, UsageError, FileNotWritten.
    """
    kept = check_label(role, "role")
    card = look_at_key(path, None) or make_key(path, check_label(name, "name"), passphrase)
    return Approver(check_label(name or card.name, "name"), kept, card.public)


def make_key_and_card(path: Path, name: str, passphrase: str, card_file: Path) -> KeyCard:
    """The card of the key at `path`, which is made where it is not there yet, written to `card_file`.

    Raises KeyRefused, FileNotWritten; a key that was made stays, and the next try writes its card.
    """
    card = look_at_key(path, None) or make_key(path, check_label(name, "name"), passphrase)
    write_card(card_file, card)
    return card


def found(plan: FoundingPlan, key_file: Path, passphrase: str) -> Founded:
    """Found the library with the practice key of the file, which is made where it is not there yet.

    Raises ClinicalcError; then there is no library, or it says that there is one all the same. A key that was made
    meanwhile stays, for the next try.
    """
    if not plan.is_whole or plan.place is None or plan.approver is None:
        raise UsageError("something is still missing.", do="Go back to the steps; they say what.")
    check_new_place(plan.place)
    if look_at_key(key_file, plan.place) is None:
        make_key(key_file, plan.practice, passphrase)
    policy = Policy(author_may_approve=bool(plan.author_may_approve))
    founded = practice_founding.found(plan.place, plan.practice, Signer(key_file, passphrase), (plan.approver,), policy)
    keep_practice_name(plan.practice)
    return founded


def keep_practice_name(practice: str) -> None:
    """Take the practice's name for this machine's prints, where it has none. What cannot be written is left out."""
    reading = read_settings()
    if reading.settings.practice or reading.problems:
        return
    try:
        change_settings(reading.settings, replace(reading.settings, practice=practice))
    except (FileNotWritten, UsageError):
        return  # a long name, or no room: the library is founded all the same, and the name can be typed in Settings


def _lies_in(path: Path, folder: Path) -> bool:
    try:
        real, inside = os.path.realpath(folder), os.path.realpath(path.absolute().parent)
    except ValueError as fault:
        raise KeyRefused("its name cannot be a file name.", where=str(path), do="Choose another name.") from fault
    return Path(inside) == Path(real) or Path(real) in Path(inside).parents


def _try_to_write(path: Path) -> None:
    """Raises FileNotWritten where no file can be put into the folder; none stays there."""
    import tempfile

    try:
        with tempfile.TemporaryFile(dir=path.parent):
            pass
    except (OSError, ValueError) as fault:
        said = getattr(fault, "strerror", None) or "its name cannot be a file name"
        raise FileNotWritten(
            "no file can be written there.",
            where=str(path),
            why=f"The computer says: {said}.",
            do="Choose another folder, or make room on this one. No key was made.",
        ) from None
