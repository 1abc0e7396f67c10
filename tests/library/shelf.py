"""A library for tests: an invented practice, its key, records and models, always the same for the same words."""

import hashlib
from pathlib import Path

import rfc8785

from clinicalc.library.folder import LibraryFolder
from clinicalc.library.keys import SigningKey, signing_key
from clinicalc.library.records import (
    ABOUT_THE_LIBRARY,
    RECORD_FORMAT,
    Commented,
    Follows,
    Founding,
    Policy,
    Record,
    Statement,
)
from clinicalc.library.sealing import seal
from clinicalc.library.standing import SealedRecord


def practice_key(words: str = "the key of the practice") -> SigningKey:
    """A key made from words; nobody else may ever use one made so."""
    return signing_key(hashlib.sha256(words.encode()).digest(), "Tarnwick Practice")


def sealed(library: str, about: str, statement: Statement) -> SealedRecord:
    """A statement about a fingerprint, sealed with the practice's key."""
    record = Record(
        format=RECORD_FORMAT,
        library=library,
        about=about,
        follows=Follows((library,) if library else (), ()),
        written="2026-12-01T10:00:00Z",
        by=practice_key().id,
        name="Tarnwick Practice",
        role="practice",
        statement=statement,
    )
    return seal(record, practice_key())


def founding(practice: str = "Tarnwick Practice") -> SealedRecord:
    """The first record of a library."""
    return sealed("", ABOUT_THE_LIBRARY, Founding(practice=practice, key=practice_key().public, policy=Policy()))


def comment(about: str, text: str) -> SealedRecord:
    """A remark about a model of the library that `founding()` begins."""
    return sealed(founding().digest, about, Commented(text=text))


def model(words: str) -> tuple[str, bytes]:
    """A fingerprint and the bytes that have it; to the folder any bytes are a model."""
    content = rfc8785.dumps({"format": "clinicalc.coefficients/1", "model": {"title": words}})
    return hashlib.sha256(content).hexdigest(), content


def found(place: Path) -> LibraryFolder:
    """A library at a place that holds nothing but its founding."""
    library = LibraryFolder(place)
    library.create(founding())
    return library


def everything_in(place: Path) -> dict[str, bytes | None]:
    """Every path below a folder with its bytes (None for what is no file), temporary ones included."""
    return {
        str(path.relative_to(place)): path.read_bytes() if path.is_file() and not path.is_symlink() else None
        for path in sorted(place.rglob("*"))
    }


def is_whole(library: LibraryFolder) -> bool:
    """Whether every file that the library lists can be read and agrees with its name, and nothing is told."""
    models, records = library.list_models(), library.list_records()
    read = [library.read_model(name) for name in models.names]
    sealed_records, faults = library.read_records()
    return (
        all(isinstance(content, bytes) for content in read)
        and len(sealed_records) == len(records.names)
        and not (faults or models.faults or records.faults)
    )
