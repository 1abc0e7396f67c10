"""What holds among the approvals and withdrawals of a model that count."""

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date

from msgspec import UNSET

from clinicalc.library.admission import Registrar, void
from clinicalc.library.moments import last_day, moment_written
from clinicalc.library.ordering import Chain
from clinicalc.library.records import Approved, Withdrawn
from clinicalc.library.standing import Approval, Fault, FaultKind, SealedRecord, Standing
from clinicalc.units.days import stated_day


@dataclass(frozen=True, slots=True)
class Verdict:
    """What the chain says of a model, before anything that stops it."""

    standing: Standing
    reason: str
    approval: Approval | None
    faults: tuple[Fault, ...]


def reach_verdict(registrar: Registrar, chain: Chain, counted: tuple[SealedRecord, ...], today: date) -> Verdict:
    """The verdict from the records that count. A withdrawal wins over what stands beside it; of approvals the stricter.

    `today` is the day where the program is used; the review date itself is still in time.
    """
    newest = chain.newest(each for each in counted if isinstance(each.record.statement, Approved | Withdrawn))
    stated = [(sealed, sealed.record.statement) for sealed in newest]
    withdrawals = [(sealed, said) for sealed, said in stated if isinstance(said, Withdrawn)]
    approvals = [(sealed, said) for sealed, said in stated if isinstance(said, Approved)]
    if withdrawals:
        reason = " ".join(_say_withdrawn(registrar, sealed, said) for sealed, said in withdrawals)
        faults = (*_revoked_keys(registrar, withdrawals), *_overruled(approvals))
        return Verdict(Standing.WITHDRAWN, reason, None, faults)
    if not approvals:
        return Verdict(Standing.WAITING, "", None, ())
    if len({_choices(approved) for _, approved in approvals}) > 1:
        fault = _differing(approvals)
        return Verdict(Standing.WAITING, fault.sentence, None, (fault,))
    sealed, approved = min(approvals, key=lambda each: (last_day(each[1]), each[0].digest))
    overdue = last_day(approved) < today
    faults = () if len(approvals) == 1 else (_side_by_side(sealed, len(approvals)),)
    standing = Standing.REVIEW_OVERDUE if overdue else Standing.IN_USE
    return Verdict(standing, "", _approval(registrar, sealed, approved), faults)


def _say_withdrawn(registrar: Registrar, sealed: SealedRecord, withdrawn: Withdrawn) -> str:
    name = _name_and_role(registrar, sealed)[0]
    return f"Withdrawn by {name} on {stated_day(sealed.record.written)}: {withdrawn.reason}"


def _revoked_keys(registrar: Registrar, withdrawals: list[tuple[SealedRecord, Withdrawn]]) -> Iterator[Fault]:
    for sealed, _ in withdrawals:
        if registrar.is_revoked(sealed):
            rest = (
                "was signed with a key that has been revoked. It holds all the same, because it takes a number away; "
                "an approval that follows it settles it."
            )
            yield void(FaultKind.REVOKED_SIGNER, sealed.record.about, sealed, rest, stops=False)


def _overruled(approvals: list[tuple[SealedRecord, Approved]]) -> Iterator[Fault]:
    for sealed, _ in approvals:
        rest = (
            "stands beside a withdrawal; neither knew of the other. The withdrawal wins until an approval follows both."
        )
        yield void(FaultKind.FORK, sealed.record.about, sealed, rest, stops=False)


def _differing(approvals: list[tuple[SealedRecord, Approved]]) -> Fault:
    first, _ = approvals[0]
    names = " and ".join(sealed.record.name for sealed, _ in approvals)
    rest = (
        f"is one of {len(approvals)} approvals that did not know of each other ({names}) and that chose differently "
        "between recalibrations or decision points. There is no number until an approval follows all of them."
    )
    return void(FaultKind.FORK, first.record.about, first, rest, stops=False)


def _side_by_side(stricter: SealedRecord, count: int) -> Fault:
    rest = (
        f"is the strictest of {count} approvals that did not know of each other. It holds until one follows them all."
    )
    return void(FaultKind.FORK, stricter.record.about, stricter, rest, stops=False)


def _choices(approved: Approved) -> tuple[object, ...]:
    """What decides which number is read off. The order in which decision points were given says nothing."""
    return approved.recalibration, frozenset(approved.decision_points)


def _name_and_role(registrar: Registrar, sealed: SealedRecord) -> tuple[str, str]:
    """The signer as the practice lists that person; a record may call itself by any name."""
    signer = registrar.signer(sealed)
    return (signer.name, signer.role) if signer else (sealed.record.name, sealed.record.role)


def _approval(registrar: Registrar, sealed: SealedRecord, approved: Approved) -> Approval:
    name, role = _name_and_role(registrar, sealed)
    return Approval(
        digest=sealed.digest,
        name=name,
        role=role,
        reason=approved.reason,
        written=moment_written(sealed),
        review_until=last_day(approved),
        recalibration=approved.recalibration,
        decision_points=approved.decision_points,
        compared=approved.compared,
        by_author=approved.by_author,
        known_by=None if approved.known_by is UNSET else approved.known_by,
    )
