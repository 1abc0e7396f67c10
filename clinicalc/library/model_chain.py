"""Where a model stands, from the records about it: the chain decides, never a date.

A record that does not count is void and named. What is forged, altered, of another library or unexplained stops the
model besides, since it may be the altered form of a withdrawal; what only lost its force (a revoked key, an approval by
the author) does not. Pure: no file is read, no clock is asked, and the order of the files makes no difference.
"""

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field, replace
from datetime import datetime, timedelta

from clinicalc.library.admission import REMOVE, Registrar, make_registrar, void
from clinicalc.library.authorship import is_author
from clinicalc.library.moments import find_future
from clinicalc.library.ordering import MOST_RECORDS, Chain, missing_records, order_records
from clinicalc.library.records import Approved, Installed
from clinicalc.library.standing import Authority, Fault, FaultKind, ModelState, SealedRecord, Standing
from clinicalc.library.verdict import Verdict, reach_verdict

AHEAD = timedelta(minutes=10)
"""How far two honest clocks may differ."""


def replay_model(
    fingerprint: str,
    records: Iterable[SealedRecord],
    authority: Authority,
    now: datetime,
    content_fault: Fault | None = None,
) -> ModelState:
    """The state of one model from the records about it, in any order; never raises.

    `now` carries its zone: a review is overdue from the midnight there that ends its last day. `content_fault` is what
    is wrong with the file itself. Every fault that stops, here or in the authority, makes the model REFUSED.

    In force is what no other approval or withdrawal follows. A withdrawal among these wins. Of several approvals the
    earliest review date holds, and where their choices differ the model waits for one that follows all of them.
    """
    given = tuple({sealed.digest: sealed for sealed in records}.values())
    faults = [content_fault] if content_fault else []
    if len(given) > MOST_RECORDS:
        sentence = f"There are {len(given)} records about this model, and at most {MOST_RECORDS} are read."
        faults.append(Fault(FaultKind.UNREADABLE_RECORD, fingerprint, sentence))
        return _refused(fingerprint, authority, faults, (), ())
    chain = order_records(given, lambda sealed: sealed.record.follows.model)
    if not authority.records:
        return _refused(fingerprint, authority, faults, (), chain.records)
    reading = _Reading(fingerprint, chain, make_registrar(authority), faults)
    reading.admit_all({sealed.digest for sealed in given})
    faults += find_future((*authority.records, *reading.counted.values()), now + AHEAD)
    verdict = reach_verdict(reading.registrar, chain, tuple(reading.counted.values()), now.date())
    if verdict.standing is Standing.WAITING and not verdict.reason:
        verdict = replace(verdict, reason=_lost_force(faults))
    faults += verdict.faults
    return _state(reading, authority, verdict)


@dataclass(slots=True)
class _Reading:
    """One walk along a chain: which records count so far, and what was found wrong."""

    fingerprint: str
    chain: Chain
    registrar: Registrar
    faults: list[Fault]
    counted: dict[str, SealedRecord] = field(default_factory=dict)
    _authority_seen: dict[str, frozenset[str]] = field(default_factory=dict)
    """For each record what it, and all that count before it, had seen of the library."""

    def admit_all(self, present: set[str]) -> None:
        """Every record that counts, in order, and a fault for every one that does not."""
        for sealed in self.chain.records:
            before = self._seen_before(sealed)
            fault = self.registrar.find_fault(sealed, self.fingerprint) or self._out_of_place(sealed, before)
            if fault is None:
                self.counted[sealed.digest] = sealed
                before |= self.registrar.seen_by(sealed)
            else:
                self.faults.append(fault)
            self._authority_seen[sealed.digest] = before
        self.faults += missing_records(self.chain, self.counted, present, self.fingerprint)
        for sealed in self.chain.circular:
            rest = f"follows records that follow it, which no honest record can. {REMOVE}"
            self.faults.append(void(FaultKind.NOT_DESCENDED, self.fingerprint, sealed, rest))
        if not present:
            sentence = "No record says who brought this file into the library. Install it properly, or take it out."
            self.faults.append(Fault(FaultKind.NOT_DESCENDED, self.fingerprint, sentence))

    def installations(self, before: SealedRecord | None = None) -> Iterator[SealedRecord]:
        """The installations that count; with `before`, only those that it follows."""
        for sealed in self.counted.values():
            if isinstance(sealed.record.statement, Installed) and (
                before is None or self.chain.follows(before.digest, sealed.digest)
            ):
                yield sealed

    def _seen_before(self, sealed: SealedRecord) -> frozenset[str]:
        known = (self._authority_seen.get(digest, frozenset()) for digest in sealed.record.follows.model)
        return frozenset[str]().union(*known)

    def _out_of_place(self, sealed: SealedRecord, seen_before: frozenset[str]) -> Fault | None:
        """What is wrong with the place of a record that its signer was allowed to write."""
        follows = sealed.record.follows
        if not seen_before <= self.registrar.seen_by(sealed):
            rest = (
                "follows a record that knew more of the library than it says to know itself, so it was written as if "
                f"the approvers were still the former ones. {REMOVE}"
            )
            return void(FaultKind.NOT_DESCENDED, self.fingerprint, sealed, rest)
        statement = sealed.record.statement
        if isinstance(statement, Installed):
            return None
        brought = tuple(self.installations(sealed))
        if not brought and all(digest in self.chain for digest in follows.model):
            rest = f"does not follow an installation of the file in this library. {REMOVE}"
            return void(FaultKind.NOT_DESCENDED, self.fingerprint, sealed, rest)
        return self._by_author(sealed, statement, brought) if isinstance(statement, Approved) else None

    def _by_author(self, sealed: SealedRecord, approved: Approved, brought: tuple[SealedRecord, ...]) -> Fault | None:
        said = [each.record.statement for each in brought if isinstance(each.record.statement, Installed)]
        own = approved.by_author or is_author(sealed.record.by, said, [each.record.by for each in brought])
        if not own or self.registrar.mandate(sealed).policy.author_may_approve:
            return None
        rest = (
            "does not count: it approves a file that its signer made, or brought without anybody’s signature, and the "
            "practice’s policy wants another approver for that."
        )
        return void(FaultKind.BY_AUTHOR, self.fingerprint, sealed, rest, stops=False)


def _lost_force(faults: Iterable[Fault]) -> str:
    """Why an approval that once may have been in force is none, where the model waits for another."""
    kinds = (FaultKind.REVOKED_SIGNER, FaultKind.BY_AUTHOR)
    return next((fault.sentence for fault in faults if fault.kind in kinds and not fault.stops), "")


def _state(reading: _Reading, authority: Authority, verdict: Verdict) -> ModelState:
    heads = tuple(sealed.digest for sealed in reading.chain.newest(reading.counted.values()))
    state = _refused(reading.fingerprint, authority, reading.faults, heads, reading.chain.records)
    refused = _first_stop(authority, reading.faults) is not None
    installed = sorted(reading.installations(), key=reading.registrar.is_revoked)
    brought = installed[0].record.statement if installed else None
    return ModelState(
        fingerprint=reading.fingerprint,
        id=brought.id if isinstance(brought, Installed) else "",
        version=brought.version if isinstance(brought, Installed) else "",
        title=brought.title if isinstance(brought, Installed) else "",
        standing=Standing.REFUSED if refused else verdict.standing,
        reason=state.reason if refused else verdict.reason,
        approval=None if refused else verdict.approval,
        heads=heads,
        records=state.records,
        faults=state.faults,
    )


def _refused(
    fingerprint: str,
    authority: Authority,
    faults: list[Fault],
    heads: tuple[str, ...],
    records: tuple[SealedRecord, ...],
) -> ModelState:
    stop = _first_stop(authority, faults)
    reason = stop.sentence if stop else "Nobody may approve in this library."
    return ModelState(fingerprint, "", "", "", Standing.REFUSED, reason, None, heads, records, tuple(faults))


def _first_stop(authority: Authority, faults: Iterable[Fault]) -> Fault | None:
    return next((fault for fault in (*authority.faults, *faults) if fault.stops), None)
