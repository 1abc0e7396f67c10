"""The history of a library or of one model: every record in chain order, with everything that was found wrong."""

import heapq
from collections.abc import Collection, Iterable
from contextlib import suppress
from dataclasses import dataclass

from msgspec import UNSET

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import KeyRefused
from clinicalc.library.keys import decode_public, key_id
from clinicalc.library.records import (
    ABOUT_THE_LIBRARY,
    Approved,
    Approvers,
    Commented,
    Founding,
    Installed,
    KeyRevoked,
    KnownBy,
    Policy,
    PolicyChanged,
    Statement,
    Withdrawn,
)
from clinicalc.library.standing import Fault, SealedRecord
from clinicalc.units.days import stated_day
from clinicalc.units.quoting import quote

_KNOWN_BY: dict[KnownBy, str] = {
    "fingerprint": "file known by its typed fingerprint",
    "signature": "file known by a trusted publisher’s signature",
    "fingerprint_and_signature": "file known by its typed fingerprint and a trusted publisher’s signature",
}


@dataclass(frozen=True, slots=True)
class HistoryRow:
    """One record: what was said, by whom, when (as its writer's clock had it), why, and what is wrong with it.

    `model` is id and version of what it is about, "" for the library; `key` the id of the key that signed; `follows`
    the records its writer had before him.
    """

    digest: str
    about: str
    model: str
    kind: str
    what: str
    name: str
    role: str
    written: str
    why: str
    key: str
    follows: tuple[str, ...]
    faults: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class History:
    """The rows in chain order, and the faults that are not about any of them."""

    rows: tuple[HistoryRow, ...]
    faults: tuple[Fault, ...]


def tell_history(
    records: Iterable[SealedRecord], faults: Iterable[Fault], about: Collection[str] | None = None
) -> History:
    """The history of everything, or of what `about` names: fingerprints of models, 64 zeros for the library."""
    ordered = in_chain_order(records)
    names = model_names(ordered)
    listed = listed_names(ordered)
    chosen = [sealed for sealed in ordered if about is None or sealed.record.about in about]
    wanted = tuple(dict.fromkeys(fault for fault in faults if about is None or fault.about in about))
    here = {sealed.digest for sealed in chosen}
    rows = tuple(_row(sealed, names, listed, [f for f in wanted if f.record == sealed.digest]) for sealed in chosen)
    return History(rows, tuple(fault for fault in wanted if fault.record not in here))


def in_chain_order(records: Iterable[SealedRecord]) -> tuple[SealedRecord, ...]:
    """Each record after all that it follows; of several that could come next, the one that says it is the earliest.

    Records that follow each other in a ring, which no honest digest allows, stand at the end.
    """
    given = {sealed.digest: sealed for sealed in records}
    waits = {digest: len(_present(sealed, given)) for digest, sealed in given.items()}
    later: dict[str, list[str]] = {digest: [] for digest in given}
    for digest, sealed in given.items():
        for before in _present(sealed, given):
            later[before].append(digest)
    ready = [(given[digest].record.written, digest) for digest, count in waits.items() if not count]
    heapq.heapify(ready)
    order: list[SealedRecord] = []
    while ready:
        _, digest = heapq.heappop(ready)
        order.append(given[digest])
        for after in later[digest]:
            waits[after] -= 1
            if not waits[after]:
                heapq.heappush(ready, (given[after].record.written, after))
    done = {sealed.digest for sealed in order}
    return (*order, *(given[digest] for digest in sorted(given.keys() - done)))


def followed(sealed: SealedRecord) -> tuple[str, ...]:
    """The digests of the records that its writer had before him, about the library and about the model."""
    return (*sealed.record.follows.library, *sealed.record.follows.model)


def model_names(records: Iterable[SealedRecord]) -> dict[str, str]:
    """Id and version of each model by its fingerprint, as its first installation says."""
    names: dict[str, str] = {}
    for sealed in records:
        said = sealed.record.statement
        if isinstance(said, Installed):
            names.setdefault(sealed.record.about, f"{said.id} {said.version}")
    return names


def listed_names(records: Iterable[SealedRecord]) -> dict[str, tuple[str, ...]]:
    """The names under which the practice ever listed each key, by the key's id, its own name for its own key."""
    names: dict[str, dict[str, None]] = {}
    for sealed in records:
        said = sealed.record.statement
        pairs = [(said.practice, said.key)] if isinstance(said, Founding) else []
        pairs += [(one.name, one.key) for one in said.approvers] if isinstance(said, Approvers) else []
        for name, key in pairs:
            with suppress(KeyRefused):
                names.setdefault(key_id(decode_public(key)), {})[name] = None
    return {key: tuple(found) for key, found in names.items()}


def say_statement(said: Statement) -> tuple[str, str]:
    """What a record states, and why, in words; "" where it gives no reason."""
    match said:
        case Founding():
            return f"founded the library of {said.practice}; {_policy(said.policy)}", ""
        case Approvers():
            listed = ", ".join(f"{approver.name} ({approver.role})" for approver in said.approvers)
            return f"approvers from here on: {listed or 'nobody'}", ""
        case PolicyChanged():
            return f"policy from here on: {_policy(said.policy)}", said.reason
        case KeyRevoked():
            stay = "stays" if len(said.still_valid) == 1 else "stay"
            kept = f"; {len(said.still_valid)} of its approvals {stay} in force" if said.still_valid else ""
            return f"revoked the key {group_fingerprint(said.key, 3)}{kept}", said.reason
        case Installed():
            return f"installed {said.id} {said.version}, {said.title}, from {said.came_from}", ""
        case Approved():
            return f"approved until {stated_day(said.review_until)}{_choices(said)}", said.reason
        case Withdrawn():
            return "withdrawn", said.reason
        case Commented():
            return f"remarked: {said.text}", ""


def _choices(said: Approved) -> str:
    parts = [f"recalibration {said.recalibration}"] if said.recalibration is not None else []
    parts += [f"decision point {point.probability!r} ({point.label})" for point in said.decision_points]
    parts += [f"{one.at or 'whole model'} compared by {one.by}" for one in said.compared]
    parts += [_KNOWN_BY[said.known_by]] if said.known_by is not UNSET else []
    parts += ["by the file’s own author"] if said.by_author else []
    return "".join(f"; {part}" for part in parts)


def _policy(policy: Policy) -> str:
    may = "may" if policy.author_may_approve else "may not"
    return f"an author {may} approve, machines work on for {policy.offline_hours} hours without the library"


def _present(sealed: SealedRecord, given: dict[str, SealedRecord]) -> set[str]:
    return {digest for digest in followed(sealed) if digest in given}


def _row(
    sealed: SealedRecord, names: dict[str, str], listed: dict[str, tuple[str, ...]], faults: Iterable[Fault]
) -> HistoryRow:
    record = sealed.record
    said = [fault.sentence for fault in faults]
    if record.name not in listed.get(record.by, (record.name,)):
        said.append(f"It is in the name of {quote(record.name)}; its key is that of {' or '.join(listed[record.by])}.")
    what, why = say_statement(record.statement)
    unnamed = "" if record.about == ABOUT_THE_LIBRARY else group_fingerprint(record.about, 3)
    return HistoryRow(
        digest=sealed.digest,
        about=record.about,
        model=names.get(record.about, unnamed),
        kind=str(record.statement.__struct_config__.tag),
        what=what,
        name=record.name,
        role=record.role,
        written=record.written,
        why=why,
        key=record.by,
        follows=followed(sealed),
        faults=tuple(said),
    )
