"""Records in an order in which each stands after what it follows, whatever order their files were found in."""

import heapq
from collections.abc import Callable, Collection, Iterable
from dataclasses import dataclass

from clinicalc.library.standing import Fault, FaultKind, SealedRecord
from clinicalc.units.days import stated_day
from clinicalc.units.quoting import quote

MOST_RECORDS = 10_000
"""More about one model, or about the library, are not replayed: the work grows with their square."""


@dataclass(frozen=True, slots=True)
class Chain:
    """Records in order, and who follows whom. The order is the same for every order of the files.

    `records` stand after those they follow; of several that could come next, the smallest digest comes first.
    `missing` names the digests that are followed and are not here, each with a record that follows it.
    `circular` are records that follow each other in a ring, which no honest digest allows; they are in no order.
    """

    records: tuple[SealedRecord, ...]
    missing: tuple[tuple[str, SealedRecord], ...]
    circular: tuple[SealedRecord, ...]
    _places: dict[str, int]
    _before: tuple[int, ...]
    """For each record a number whose bit i says that it follows record i, near or far."""

    def __contains__(self, digest: str) -> bool:
        return digest in self._places

    def follows(self, later: str, earlier: str) -> bool:
        """Whether the record `later` follows `earlier`, directly or by way of others. Both must be in the chain."""
        return bool(self._before[self._places[later]] >> self._places[earlier] & 1)

    def up_to(self, digests: Iterable[str]) -> tuple[SealedRecord, ...]:
        """The records with these digests and all that they follow, in order; digests not in the chain are left out."""
        bits = 0
        for place in (self._places[digest] for digest in digests if digest in self._places):
            bits |= self._before[place] | 1 << place
        return tuple(sealed for place, sealed in enumerate(self.records) if bits >> place & 1)

    def newest(self, among: Iterable[SealedRecord]) -> tuple[SealedRecord, ...]:
        """Those of the records that none of the others follows, in order: the heads."""
        chosen = sorted({self._places[sealed.digest] for sealed in among})
        followed = 0
        for place in chosen:
            followed |= self._before[place]
        return tuple(self.records[place] for place in chosen if not followed >> place & 1)


def order_records(records: Iterable[SealedRecord], read_follows: Callable[[SealedRecord], tuple[str, ...]]) -> Chain:
    """The chain of these records, by what `read_follows` says each of them follows.

    A record given twice counts once. Each record and each of its digests is looked at once.
    """
    given = {sealed.digest: sealed for sealed in records}
    follows = {digest: tuple(dict.fromkeys(read_follows(sealed))) for digest, sealed in given.items()}
    later: dict[str, list[str]] = {digest: [] for digest in given}
    waits: dict[str, int] = {}
    for digest, named in follows.items():
        present = [other for other in named if other in given]
        waits[digest] = len(present)
        for other in present:
            later[other].append(digest)
    ready = [digest for digest, count in waits.items() if not count]
    heapq.heapify(ready)
    order: list[str] = []
    while ready:
        order.append(digest := heapq.heappop(ready))
        for after in later[digest]:
            waits[after] -= 1
            if not waits[after]:
                heapq.heappush(ready, after)
    return _linked(given, follows, order)


def missing_records(chain: Chain, counted: Collection[str], present: Collection[str], about: str) -> tuple[Fault, ...]:
    """A fault for every record that a record which counts follows, and that is not among those present."""
    missing: dict[str, SealedRecord] = {}
    for digest, follower in chain.missing:
        if follower.digest in counted and digest not in present:
            missing.setdefault(digest, follower)
    return tuple(
        Fault(
            FaultKind.MISSING_RECORD,
            about,
            f"Record missing: {digest}. {named(follower)} follows it, and what the missing one says, a withdrawal "
            "perhaps, is not known here. Fetch the file whose name ends in these digits from another copy of the "
            "library.",
            digest,
        )
        for digest, follower in missing.items()
    )


def named(sealed: SealedRecord) -> str:
    """A record in a sentence: the beginning of its digest, what it is, in whose name, of which day; all as it says."""
    record = sealed.record
    kind = record.statement.__struct_config__.tag
    said = f"{kind}, in the name of {quote(record.name)}, {stated_day(record.written)}"
    return f"The record {sealed.digest[:12]}… ({said})"


def _linked(given: dict[str, SealedRecord], follows: dict[str, tuple[str, ...]], order: list[str]) -> Chain:
    places = {digest: place for place, digest in enumerate(order)}
    before: list[int] = []
    missing: list[tuple[str, SealedRecord]] = []
    for digest in order:
        bits = 0
        for other in follows[digest]:
            if other in places:
                bits |= before[places[other]] | 1 << places[other]
            else:
                missing.append((other, given[digest]))
        before.append(bits)
    circular = tuple(given[digest] for digest in sorted(given.keys() - places.keys()))
    return Chain(tuple(given[d] for d in order), tuple(missing), circular, places, tuple(before))
