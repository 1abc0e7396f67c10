"""What is said of a file of the library that is not as it should be."""

import hashlib

from clinicalc.errors import LibraryError
from clinicalc.library.places import RecordName, short_model
from clinicalc.library.safe_reading import NotRead, Obstacle
from clinicalc.library.sealing import unseal
from clinicalc.library.standing import Fault, FaultKind, SealedRecord

_FROM_A_COPY = "Put it back from another copy of the library."


def open_record(name: RecordName, content: bytes) -> SealedRecord | Fault:
    """The record in these bytes, where they and the name agree."""
    if hashlib.sha256(content).hexdigest() != name.digest:
        sentence = f"{name} was changed, or another file was given its name: its content has another digest."
        return Fault(FaultKind.CHANGED_FILE, name.about, f"{sentence} {_FROM_A_COPY}", name.digest)
    try:
        sealed = unseal(content, str(name))
    except LibraryError as refused:
        return Fault(FaultKind.UNREADABLE_RECORD, name.about, str(refused), name.digest)
    if sealed.record.about == name.about:
        return sealed
    right = RecordName(sealed.record.about, sealed.digest)
    sentence = f"{name} holds the record whose name is {right}: it was renamed or copied."
    return Fault(FaultKind.MISNAMED_RECORD, name.about, f"{sentence} Give it its name back, or remove it.", name.digest)


def fault_of_record(name: RecordName, found: NotRead) -> Fault:
    """Why a record was not read."""
    kinds = {
        Obstacle.MISSING: FaultKind.MISSING_RECORD,
        Obstacle.NOT_A_FILE: FaultKind.NOT_A_FILE,
        Obstacle.TOO_LARGE: FaultKind.CHANGED_FILE,
        Obstacle.UNREADABLE: FaultKind.UNREADABLE_RECORD,
    }
    sentence = f"{name} was not read: {found.why}. {_do(found)}"
    return Fault(kinds[found.obstacle], name.about, sentence, name.digest)


def fault_of_model(fingerprint: str, found: bytes | NotRead) -> Fault:
    """Why a model was not read; bytes are such as have another fingerprint."""
    short = short_model(fingerprint)
    if isinstance(found, bytes):
        return Fault(
            FaultKind.CHANGED_FILE,
            fingerprint,
            f"{short} was changed after it was installed: its content no longer has this fingerprint. {_FROM_A_COPY}",
        )
    kinds = {
        Obstacle.MISSING: FaultKind.MISSING_FILE,
        Obstacle.NOT_A_FILE: FaultKind.NOT_A_FILE,
        Obstacle.TOO_LARGE: FaultKind.CHANGED_FILE,
        Obstacle.UNREADABLE: FaultKind.MISSING_FILE,
    }
    return Fault(kinds[found.obstacle], fingerprint, f"{short} was not read: {found.why}. {_do(found)}")


def fault_of_part(part: str, about: str, is_missing: bool) -> Fault:
    """What is said where the folder of models or records is missing, or is a link or a file."""
    if is_missing:
        sentence = f"The library's folder {part} is missing. {_FROM_A_COPY}"
    else:
        sentence = f"The library's folder {part} was replaced by a link or a file. Put the folder back in its place."
    return Fault(FaultKind.MISSING_FILE if is_missing else FaultKind.NOT_A_FILE, about, sentence)


def _do(found: NotRead) -> str:
    if found.obstacle is Obstacle.UNREADABLE:
        return "Ask who looks after the computer to make it readable for you."
    return _FROM_A_COPY
