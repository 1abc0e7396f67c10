"""The library's folder: models and records under names that are computed from their contents, never taken from a file.

    library.json                          {"format", "library"}: the digest of the founding record, the library's id
    models/<fingerprint>.json             exactly the canonical bytes of {"format", "model"}
    records/<about>-<digest>.json         one record a file; what it is about stands first, so that one look finds all

Every reading compares the bytes with the name. Nothing here decides who may be trusted.
"""

import hashlib
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path

from clinicalc.errors import LibraryError, LibraryUnreachable
from clinicalc.library.creation import create_library, read_library_id
from clinicalc.library.file_faults import fault_of_model, fault_of_part, fault_of_record, open_record
from clinicalc.library.listing import Listing, find_strays, list_part
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.out_of_reach import out_of_reach
from clinicalc.library.places import (
    FOUNDING_FILE,
    MODELS,
    MOST_MODEL_BYTES,
    MOST_RECORD_BYTES,
    RECORDS,
    RecordName,
    model_file,
    read_model_name,
    read_record_name,
    short_model,
)
from clinicalc.library.placing import Placed, place_file
from clinicalc.library.records import ABOUT_THE_LIBRARY
from clinicalc.library.safe_reading import NotRead, Obstacle, read_regular
from clinicalc.library.sealing import unseal
from clinicalc.library.standing import Fault, SealedRecord


@dataclass(frozen=True, slots=True)
class LibraryFolder:
    """A library at a place. Nothing is kept open or in memory; every answer is what the folder holds at that moment.

    Every method raises LibraryUnreachable where the folder cannot be used now (not there, not permitted, no room, a
    share that is gone), and LibraryError where it is no library.
    """

    path: Path

    def create(self, founding: SealedRecord) -> None:
        """Make the library, whole or not at all, in a new or an empty folder. Raises LibraryError."""
        create_library(self.path, unseal(founding.content, "the founding record"))

    def library_id(self) -> str:
        """The digest of the founding record, as library.json states it. Raises LibraryError."""
        with self._opened("the library was not read") as root:
            return read_library_id(root)

    def list_records(self, about: str | None = None) -> Listing[RecordName]:
        """The names of all records, or of those about one fingerprint (64 zeros: about the library itself)."""
        with self._opened("the library was not read") as root:
            part = _open_part(root, RECORDS, about or ABOUT_THE_LIBRARY)
            if isinstance(part, Fault):
                return Listing((), (part,))
            with part:
                return _list_records(part, about)

    def list_models(self) -> Listing[str]:
        """The fingerprints of all models."""
        with self._opened("the library was not read") as root:
            part = _open_part(root, MODELS, ABOUT_THE_LIBRARY)
            if isinstance(part, Fault):
                return Listing((), (part,))
            with part:
                return list_part(part, read_model_name, lambda name: (name, ""))

    def list_strays(self) -> tuple[Fault, ...]:
        """What lies beside library.json, models and records and does not belong there."""
        with self._opened("the library was not read") as root:
            return find_strays(root, (FOUNDING_FILE, MODELS, RECORDS))

    def read_record(self, about: str, digest: str) -> SealedRecord | Fault:
        """One record whose bytes agree with its name, or what was found instead."""
        name = RecordName(about, digest)
        with self._opened("the library was not read") as root:
            part = _open_part(root, RECORDS, about)
            if isinstance(part, Fault):
                return part
            with part:
                return self._read_record(part, name)

    def read_records(self, about: str | None = None) -> tuple[tuple[SealedRecord, ...], tuple[Fault, ...]]:
        """All records, or those about one fingerprint (or 64 zeros), in the order of their names, and every fault.

        To read those of many models, read all at once: each call looks through the whole folder.
        """
        with self._opened("the library was not read") as root:
            part = _open_part(root, RECORDS, about or ABOUT_THE_LIBRARY)
            if isinstance(part, Fault):
                return (), (part,)
            with part:
                listing = _list_records(part, about)
                found = [self._read_record(part, name) for name in listing.names]
        records = tuple(one for one in found if isinstance(one, SealedRecord))
        return records, (*listing.faults, *(one for one in found if isinstance(one, Fault)))

    def read_model(self, fingerprint: str) -> bytes | Fault:
        """The canonical bytes of a model, of which the fingerprint is the SHA-256, or what was found instead."""
        with self._opened("the library was not read") as root:
            part = _open_part(root, MODELS, fingerprint)
            if isinstance(part, Fault):
                return part
            with part:
                file = model_file(fingerprint)
                found = _read_named(part, file, read_model_name(file), MOST_MODEL_BYTES)
        if isinstance(found, bytes) and hashlib.sha256(found).hexdigest() == fingerprint:
            return found
        if isinstance(found, NotRead) and found.obstacle is Obstacle.UNREADABLE:
            self.library_id()  # or is it the whole folder that cannot be read?
        return fault_of_model(fingerprint, found)

    def put_model(self, fingerprint: str, canonical: bytes) -> None:
        """Put a model there; done where it is there already. Raises LibraryError, and nothing was changed."""
        if hashlib.sha256(canonical).hexdigest() != fingerprint or len(canonical) > MOST_MODEL_BYTES:
            raise LibraryError(
                "the model was not put into the library.",
                where=short_model(fingerprint),
                why=f"Its bytes do not have this fingerprint, or are more than {MOST_MODEL_BYTES:,}.",
                do="Read the coefficient file again, and install it then.",
            )
        self._put(MODELS, model_file(fingerprint), short_model(fingerprint), canonical)

    def put_record(self, sealed: SealedRecord) -> None:
        """Put a record there, named by its content; done where it is there already. Raises LibraryError, and nothing
        was changed.
        """
        again = unseal(sealed.content, "the record")
        library = self.library_id()
        if library not in (again.record.library, again.digest):
            raise LibraryError(
                "the record was not put into the library.",
                where=str(self.path),
                why="It was made for another library.",
                do="Choose the library for which it was made.",
            )
        name = RecordName(again.record.about, again.digest)
        self._put(RECORDS, name.file, str(name), again.content)

    def _read_record(self, part: OpenedFolder, name: RecordName) -> SealedRecord | Fault:
        found = _read_named(part, name.file, read_record_name(name.file), MOST_RECORD_BYTES)
        if isinstance(found, bytes):
            return open_record(name, found)
        if found.obstacle is Obstacle.UNREADABLE:
            self.library_id()  # or is it the whole folder that cannot be read?
        return fault_of_record(name, found)

    def _put(self, part_name: str, file: str, short: str, content: bytes) -> None:
        with self._opened(f"{short} was not written, and nothing was changed") as root:
            read_library_id(root)  # into nothing but a library
            part = _open_part(root, part_name, ABOUT_THE_LIBRARY)
            if isinstance(part, Fault):
                raise LibraryError(f"{short} was not written.", where=str(self.path), why=part.sentence)
            with part:
                placed = place_file(part, file, content)
        if placed is Placed.NAME_TAKEN:
            raise LibraryError(
                f"{short} was not written, and nothing was changed.",
                where=str(self.path),
                why="Something else has the name that only these bytes may have: a file was changed there.",
                do="Remove it or put it back from a copy, and do it again.",
            )
        if placed is Placed.UNCONFIRMED:
            raise LibraryUnreachable(
                f"{short} was written, but the disk did not confirm that it keeps it.",
                where=str(self.path),
                why="After a power failure it might be missing.",
                do="Do it again: nothing is written twice.",
            )

    @contextmanager
    def _opened(self, what: str) -> Iterator[OpenedFolder]:
        try:
            with OpenedFolder(self.path) as root:
                yield root
        except OSError as fault:
            raise out_of_reach(what, self.path, fault) from None


def _open_part(root: OpenedFolder, name: str, about: str) -> OpenedFolder | Fault:
    """The folder of models or of records. Raises LibraryError where there is no library at all, OSError."""
    try:
        return root.open_part(name)
    except (FileNotFoundError, NotADirectoryError) as fault:
        read_library_id(root)
        return fault_of_part(name, about, isinstance(fault, FileNotFoundError))


def _read_named(part: OpenedFolder, file: str, name: object, limit: int) -> bytes | NotRead:
    """The file's bytes; `name` is None where its name is none of ours, which no path out of the folder may pass for."""
    if name is None:
        return NotRead(Obstacle.MISSING, "no file can have this name")
    return read_regular(part, file, limit)


def _list_records(part: OpenedFolder, about: str | None) -> Listing[RecordName]:
    return list_part(
        part, read_record_name, lambda name: (name.about, name.digest), begins=f"{about}-" if about else ""
    )
