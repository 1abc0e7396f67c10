"""What a bundle must stand before it goes out or comes in: every record counts, nothing that was seen is lacking."""

from datetime import datetime

from clinicalc.errors import LibraryError
from clinicalc.library.authority import replay_authority
from clinicalc.library.bundle import Bundle
from clinicalc.library.keys import decode_public, key_id
from clinicalc.library.memory import Memory, SeenHead
from clinicalc.library.model_chain import replay_model
from clinicalc.library.records import ABOUT_THE_LIBRARY, Founding
from clinicalc.library.standing import FaultKind
from clinicalc.units.days import stated_day

_MOST_SAID = 5
_TIMELY = frozenset({FaultKind.FROM_THE_FUTURE, FaultKind.CLOCK_SET_BACK})
"""Faults that pass by themselves, and are for the machine that uses the library to judge."""


def practice_key_of(bundle: Bundle) -> str:
    """The id of the key that the founding record names for the practice."""
    founding = bundle.founding.record.statement
    assert isinstance(founding, Founding)  # a bundle without its founding was refused
    return key_id(decode_public(founding.key))


def require_sound(bundle: Bundle, where: str, practice_key: str, now: datetime, what: str) -> None:
    """Nothing where every record counts. Raises LibraryError with what does not."""
    authority = replay_authority(bundle.about(ABOUT_THE_LIBRARY), bundle.library, practice_key)
    faults = list(authority.faults)
    for fingerprint in sorted({sealed.record.about for sealed in bundle.records} - {ABOUT_THE_LIBRARY}):
        faults += replay_model(fingerprint, bundle.about(fingerprint), authority, now).faults
    wrong = [fault for fault in faults if fault.stops and fault.kind not in _TIMELY]
    if wrong:
        raise LibraryError(
            f"{what}, and nothing was changed.",
            where=where,
            why=" ".join(dict.fromkeys(fault.sentence for fault in wrong[:_MOST_SAID])),
            do="Ask who looks after the library; clinicalc library verify names everything.",
        )


def require_remembered(union: Bundle, memory: Memory | None) -> None:
    """Nothing where all that this machine has seen is there. Raises LibraryError with what is lacking."""
    if memory is None:
        return
    there = {sealed.digest for sealed in union.records}
    heads = [("of the library", head) for head in memory.library_heads]
    heads += [(f"of {model.id} {model.version}", head) for model in memory.models for head in model.heads]
    lacking = [_say_lacking(whose, head) for whose, head in heads if head.digest not in there]
    if lacking:
        raise LibraryError(
            "this bundle is older than what this machine has seen, and nothing was imported.",
            why=" ".join(lacking[:_MOST_SAID]),
            do="Export a new bundle from the library as it is now.",
        )


def _say_lacking(whose: str, head: SeenHead) -> str:
    kind = head.kind.replace("_", " ")
    return (
        f"It lacks the record {head.digest[:12]}… {whose} ({kind}, in the name of {head.name},"
        f" {stated_day(head.written)}), seen here on {stated_day(head.seen)}."
    )
