"""Where an opening takes records and models from: the library's folder, or the verified copy on this machine."""

import errno
import hashlib
import threading
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Protocol, TypeVar

from clinicalc.errors import ClinicalcError
from clinicalc.library.file_faults import fault_of_record, open_record
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.kept_copy import KeptCopy
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.out_of_reach import out_of_reach
from clinicalc.library.places import MOST_RECORD_BYTES, RECORDS, RecordName, short_model
from clinicalc.library.records import ABOUT_THE_LIBRARY
from clinicalc.library.safe_reading import NotRead, Obstacle, read_regular
from clinicalc.library.standing import Fault, FaultKind, SealedRecord

_Answer = TypeVar("_Answer")
PATIENCE = 8.0
"""Seconds after which a share that does not answer counts as out of reach."""


@dataclass(frozen=True, slots=True)
class Contents:
    """What there is, by name: the digests of the records about each fingerprint, the models, and what is amiss."""

    records: Mapping[str, tuple[str, ...]]
    models: frozenset[str]
    faults: tuple[Fault, ...]


@dataclass(frozen=True, slots=True)
class Gathered:
    """Records whose bytes have the digest in their name, and a fault for each that has not.

    `fresh`: each file was looked at, and none recalled.
    """

    records: tuple[SealedRecord, ...]
    faults: tuple[Fault, ...]
    fresh: bool


class Source(Protocol):
    """A place from which a library is read."""

    @property
    def library(self) -> str:
        """The library's id."""
        ...

    def contents(self) -> Contents:
        """What there is now."""
        ...

    def records(self, about: str, digests: Iterable[str], *, freshly: bool) -> Gathered:
        """Those records; `freshly` where the file itself has to be looked at, though its content be known."""
        ...

    def model(self, fingerprint: str) -> bytes | Fault:
        """The bytes with this fingerprint."""
        ...


@dataclass(frozen=True, slots=True)
class FolderSource:
    """The library's own folder. What is known here is recalled from the copy by its digest, its signature unproved."""

    library: str
    folder: LibraryFolder
    kept: KeptCopy

    def contents(self) -> Contents:
        """What there is now. Raises LibraryUnreachable."""
        listed, models = self.folder.list_records(), self.folder.list_models()
        return Contents(_by_about(listed.names), frozenset(models.names), (*listed.faults, *models.faults))

    def records(self, about: str, digests: Iterable[str], *, freshly: bool) -> Gathered:
        """Those records. Raises LibraryUnreachable."""
        names = [RecordName(about, digest) for digest in digests]
        found: list[SealedRecord | Fault] = []
        if not freshly:
            recalled = {name.digest: self.kept.record(name.digest) for name in names}
            found += [sealed for sealed in recalled.values() if sealed is not None]
            names = [name for name in names if recalled[name.digest] is None]
        fresh = not found
        found += self._read(names) if names else []
        return _sorted_out(found, fresh=fresh)

    def model(self, fingerprint: str) -> bytes | Fault:
        """The bytes with this fingerprint. Raises LibraryUnreachable."""
        return self.folder.read_model(fingerprint)

    def _read(self, names: list[RecordName]) -> list[SealedRecord | Fault]:
        try:
            with OpenedFolder(self.folder.path) as root, root.open_part(RECORDS) as part:
                return [self._read_one(part, name) for name in names]
        except OSError as fault:
            raise out_of_reach("the library was not read", self.folder.path, fault) from None

    def _read_one(self, part: OpenedFolder, name: RecordName) -> SealedRecord | Fault:
        content = read_regular(part, name.file, MOST_RECORD_BYTES)
        if isinstance(content, NotRead):
            if content.obstacle is Obstacle.UNREADABLE:
                self.folder.library_id()  # or is it the whole folder that cannot be read?
            return fault_of_record(name, content)
        if hashlib.sha256(content).hexdigest() == name.digest:
            recalled = self.kept.record(name.digest)
            if recalled is not None:
                return recalled
        return open_record(name, content)


@dataclass(frozen=True, slots=True)
class KeptSource:
    """The verified copy, when the library is out of reach."""

    library: str
    kept: KeptCopy

    def contents(self) -> Contents:
        """What is kept; a fault for every line that is no record."""
        opened = {digest: self.kept.record(digest) for digest in self.kept.lines}
        names = [RecordName(sealed.record.about, digest) for digest, sealed in opened.items() if sealed is not None]
        faults = [_no_record(self.kept, digest) for digest, sealed in opened.items() if sealed is None]
        return Contents(_by_about(names), self.kept.models(), tuple(faults))

    def records(self, about: str, digests: Iterable[str], *, freshly: bool) -> Gathered:
        """Those records."""
        found = [self.kept.record(digest) for digest in digests]
        return _sorted_out([sealed for sealed in found if sealed is not None], fresh=True)

    def model(self, fingerprint: str) -> bytes | Fault:
        """The bytes with this fingerprint."""
        content = self.kept.model(fingerprint)
        if content is None:
            why = "was not read: no whole copy of it is on this machine. It is read again once the library is reached."
            return Fault(FaultKind.MISSING_FILE, fingerprint, f"{short_model(fingerprint)} {why}")
        return content


def reach_library(place: Path, patience: float = PATIENCE) -> str:
    """The id of the library at `place`. Raises LibraryUnreachable where it is not there or does not answer in time.

    Raises LibraryError where library.json was changed. Where it is missing the library counts as out of reach: an empty
    folder is what is left of a share that is not connected, and to delete it gains no more than to pull a cable.
    """
    try:
        return ask_in_time(LibraryFolder(place).library_id, patience)
    except TimeoutError as fault:
        raise out_of_reach("the library was not read", place, fault) from None


def ask_in_time(ask: Callable[[], _Answer], patience: float) -> _Answer:
    """What `ask` gives back or raises. Raises TimeoutError after `patience` seconds.

    A share that hangs cannot be interrupted, only left alone: the asking goes on by itself, and nobody listens.
    """
    answers: list[_Answer] = []
    refusals: list[Exception] = []

    def listen() -> None:
        try:
            answers.append(ask())
        except (ClinicalcError, OSError, ValueError) as fault:  # raised again by the one who asked
            refusals.append(fault)

    asking = threading.Thread(target=listen, daemon=True)
    asking.start()
    asking.join(patience)
    for refusal in refusals:
        raise refusal
    for answer in answers:
        return answer
    raise TimeoutError(errno.ETIMEDOUT, f"no answer in {patience:g} seconds")


def _no_record(kept: KeptCopy, digest: str) -> Fault:
    sentence = (
        f"This machine’s own copy of the library ({kept.folder}) was changed: a line of it ({digest[:12]}…) is no "
        "record. Once the library is reached again, clinicalc library verify makes the copy anew."
    )
    return Fault(FaultKind.UNREADABLE_RECORD, ABOUT_THE_LIBRARY, sentence, digest)


def _by_about(names: Iterable[RecordName]) -> dict[str, tuple[str, ...]]:
    found: dict[str, list[str]] = {}
    for name in names:
        found.setdefault(name.about, []).append(name.digest)
    return {about: tuple(sorted(digests)) for about, digests in found.items()}


def _sorted_out(found: Iterable[SealedRecord | Fault], *, fresh: bool) -> Gathered:
    records, faults = list[SealedRecord](), list[Fault]()
    for one in found:
        if isinstance(one, Fault):
            faults.append(one)
        else:
            records.append(one)
    return Gathered(tuple(records), tuple(faults), fresh)
