"""What the records about the library say: the practice, who may approve, the policy, and what is wrong with them.

All of them are signed by the practice key, whose id is pinned on this machine; nothing in the library can change it.
A record that does not count is named by a fault that stops the whole library: it may be the altered form of one that
took somebody's key away. Pure: no file is read, no clock is asked.
"""

from collections.abc import Iterable, Iterator

from clinicalc.errors import KeyRefused
from clinicalc.library.keys import decode_public, key_id
from clinicalc.library.mandate import Mandate, read_mandate, usable_approvers
from clinicalc.library.moments import find_impossible
from clinicalc.library.ordering import MOST_RECORDS, Chain, missing_records, named, order_records
from clinicalc.library.records import ABOUT_THE_LIBRARY, Approvers, Founding, KeyRevoked, Policy, PolicyChanged
from clinicalc.library.sealing import is_signed_by
from clinicalc.library.standing import Authority, Fault, FaultKind, SealedRecord

_ASK = "Do not use this library, and ask who looks after it."
_REMOVE = "Find out who put this file there, and take it out of the library’s folder."


def replay_authority(records: Iterable[SealedRecord], library_id: str, practice_key_id: str) -> Authority:
    """The authority at its newest end, from the records about the library in any order; never raises.

    Exactly one record founds the library: its digest is the library's id, the key it names has the id pinned on this
    machine, and that key signed it. Every other one is signed by the same key and descends from it. Of approvers and
    policies that do not follow each other the narrower holds, with a fault that does not stop; a revocation on any
    branch counts. After a revocation of the practice key itself the library gives nothing.
    """
    given = tuple({sealed.digest: sealed for sealed in records}.values())
    if len(given) > MOST_RECORDS:
        return _nothing(library_id, practice_key_id, _too_many(len(given)))
    founding = next((sealed for sealed in given if sealed.digest == library_id), None)
    statement = founding.record.statement if founding else None
    if founding is None or not isinstance(statement, Founding):
        return _nothing(library_id, practice_key_id, _unfounded(library_id, given))
    public = _usable(statement.key)
    if public is None or key_id(public) != practice_key_id:
        return _nothing(library_id, practice_key_id, _other_key(library_id), statement.practice)
    if not _is_first(founding) or not is_signed_by(founding, public):
        return _nothing(library_id, practice_key_id, _forged(founding), statement.practice)
    faults: list[Fault] = []
    counted = [founding]
    for sealed in sorted(given, key=lambda each: each.digest):
        if sealed is not founding and (fault := _find_fault(sealed, library_id, public)):
            faults.append(fault)
        elif sealed is not founding:
            counted.append(sealed)
    whole = order_records(counted, _follows)
    missing = missing_records(
        whole, {each.digest for each in counted}, {each.digest for each in given}, ABOUT_THE_LIBRARY
    )
    faults += missing
    chain = order_records(_descendants(whole, founding), _follows)
    if not missing:
        faults += _not_descended(chain, counted)
    return _conclude(chain, founding, practice_key_id, faults)


def _conclude(chain: Chain, founding: SealedRecord, practice_key_id: str, faults: list[Fault]) -> Authority:
    heads = tuple(sealed.digest for sealed in chain.newest(chain.records))
    mandate = read_mandate(chain, heads)
    faults += _disputes(mandate)
    faults += _revoked_practice(chain, practice_key_id)
    faults += _refused_keys(chain)
    return Authority(
        library=founding.digest,
        practice=_practice_of(founding),
        practice_key=practice_key_id,
        approvers=tuple(approver for _, approver in mandate.approvers),
        policy=mandate.policy,
        heads=heads,
        records=chain.records,
        faults=tuple(faults),
    )


def _follows(sealed: SealedRecord) -> tuple[str, ...]:
    return sealed.record.follows.library


def _descendants(chain: Chain, founding: SealedRecord) -> Iterator[SealedRecord]:
    return (each for each in chain.records if each is founding or chain.follows(each.digest, founding.digest))


def _not_descended(chain: Chain, signed: list[SealedRecord]) -> Iterator[Fault]:
    for sealed in signed:
        if sealed.digest not in chain:
            rest = "does not descend from the founding of this library. " + _REMOVE
            yield _fault(FaultKind.NOT_DESCENDED, sealed, rest)


def _practice_of(founding: SealedRecord) -> str:
    statement = founding.record.statement
    return statement.practice if isinstance(statement, Founding) else ""


def _is_first(founding: SealedRecord) -> bool:
    record = founding.record
    follows = record.follows
    return record.library == "" and record.about == ABOUT_THE_LIBRARY and not follows.library and not follows.model


def _usable(key: str) -> bytes | None:
    try:
        return decode_public(key)
    except KeyRefused:
        return None


def _find_fault(sealed: SealedRecord, library_id: str, public: bytes) -> Fault | None:
    """What is wrong with one record by itself; where it stands in the chain is looked at later."""
    record = sealed.record
    if record.about != ABOUT_THE_LIBRARY:
        return _fault(FaultKind.MISNAMED_RECORD, sealed, "is about a model and lies among those about the library.")
    if record.library != library_id:
        return _fault(FaultKind.OTHER_LIBRARY, sealed, "belongs to another library. " + _REMOVE)
    if record.by != key_id(public):
        return _fault(
            FaultKind.UNKNOWN_SIGNER, sealed, "is about the library and was not signed by the practice key. " + _REMOVE
        )
    if not is_signed_by(sealed, public):
        return _forged(sealed)
    if not isinstance(record.statement, Approvers | PolicyChanged | KeyRevoked):
        return _fault(FaultKind.MISNAMED_RECORD, sealed, "says about the library what can only be said of a model.")
    if record.follows.model:
        return _fault(FaultKind.NOT_DESCENDED, sealed, "is about the library and follows records about a model.")
    return find_impossible(sealed)


def _disputes(mandate: Mandate) -> Iterator[Fault]:
    """Lists and policies that do not follow each other and do not say the same."""
    if len({frozenset(usable_approvers(sealed)) for sealed in mandate.lists}) > 1:
        names = ", ".join(approver.name for _, approver in mandate.approvers) or "nobody"
        yield Fault(
            FaultKind.FORK,
            ABOUT_THE_LIBRARY,
            f"{len(mandate.lists)} lists of approvers were signed without knowing of each other. Until another list is "
            f"signed only those count who are on all of them: {names}.",
            mandate.lists[-1].digest,
            stops=False,
        )
    if len({_policy_of(sealed) for sealed in mandate.policies}) > 1:
        yield Fault(
            FaultKind.FORK,
            ABOUT_THE_LIBRARY,
            f"{len(mandate.policies)} policies were signed without knowing of each other. Until another one is signed "
            "the strictest of each point holds.",
            mandate.policies[-1].digest,
            stops=False,
        )


def _policy_of(sealed: SealedRecord) -> Policy | None:
    statement = sealed.record.statement
    return statement.policy if isinstance(statement, PolicyChanged | Founding) else None


def _revoked_practice(chain: Chain, practice_key_id: str) -> Iterator[Fault]:
    for sealed in chain.records:
        statement = sealed.record.statement
        if isinstance(statement, KeyRevoked) and statement.key == practice_key_id:
            yield _fault(
                FaultKind.REVOKED_SIGNER,
                sealed,
                "revokes the practice key itself. This library gives nothing more; the practice founds another one "
                "with a new key, and every machine joins that.",
            )


def _refused_keys(chain: Chain) -> Iterator[Fault]:
    for sealed in chain.records:
        statement = sealed.record.statement
        for approver in statement.approvers if isinstance(statement, Approvers) else ():
            if _usable(approver.key) is None:
                yield _fault(
                    FaultKind.BAD_SIGNATURE,
                    sealed,
                    f"lists {approver.name} with a key under which a signature proves nothing. {approver.name} does "
                    "not count as an approver.",
                    stops=False,
                )


def _fault(kind: FaultKind, sealed: SealedRecord, rest: str, *, stops: bool = True) -> Fault:
    return Fault(kind, ABOUT_THE_LIBRARY, f"{named(sealed)} {rest}", sealed.digest, stops)


def _forged(sealed: SealedRecord) -> Fault:
    return _fault(
        FaultKind.BAD_SIGNATURE, sealed, "is not as the practice key signed it: it was changed or made up. " + _ASK
    )


def _other_key(library_id: str) -> Fault:
    return Fault(
        FaultKind.OTHER_PRACTICE_KEY,
        ABOUT_THE_LIBRARY,
        f"The practice key is not the one this machine was told to trust. {_ASK}",
        library_id,
    )


def _unfounded(library_id: str, given: Iterable[SealedRecord]) -> Fault:
    founding = [sealed for sealed in given if isinstance(sealed.record.statement, Founding)]
    if any(sealed.digest == library_id for sealed in given):
        sentence = f"The record {library_id[:12]}…, by which this library is named, founds no library. {_ASK}"
        return Fault(FaultKind.NOT_DESCENDED, ABOUT_THE_LIBRARY, sentence, library_id)
    swapped = ""
    if founding:
        swapped = f"Another one ({founding[0].digest[:12]}…) lies in its place, which this machine never joined. "
    sentence = f"Record missing: {library_id}. It is the one that founds this library. {swapped}{_ASK}"
    return Fault(FaultKind.MISSING_RECORD, ABOUT_THE_LIBRARY, sentence, library_id)


def _too_many(count: int) -> Fault:
    sentence = f"There are {count} records about the library, and at most {MOST_RECORDS} are read. {_ASK}"
    return Fault(FaultKind.UNREADABLE_RECORD, ABOUT_THE_LIBRARY, sentence)


def _nothing(library_id: str, practice_key_id: str, fault: Fault, practice: str = "") -> Authority:
    """An authority under which nobody may sign and nothing holds."""
    return Authority(library_id, practice, practice_key_id, (), Policy(offline_hours=0), (), (), (fault,))
