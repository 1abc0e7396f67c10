"""`library approve`, `extend`, `withdraw`, `comment`, `hold`, `release`: what is decided about a model."""

from datetime import date, datetime
from typing import TYPE_CHECKING

import click

from clinicalc.cli.library_session import (
    describe_state,
    describe_written,
    key_options,
    library_options,
    look_at_approver,
    now,
    open_for_reading,
    open_for_writing,
    state_after,
    take_approver_key,
    tell,
)
from clinicalc.cli.outcome import ExitStatus
from clinicalc.errors import UsageError
from clinicalc.operations.library_words import say_standing
from clinicalc.units.quoting import quote

if TYPE_CHECKING:
    from clinicalc.coefficients.schema import DecisionPoint
    from clinicalc.library.records import Compared
    from clinicalc.library.standing import ModelState, SealedRecord

_MODEL = click.argument("model", metavar="ID-or-FINGERPRINT")
_REVIEW = click.option(
    "--review-until", required=True, metavar="DATE", help="The last day on which it may be used, as 2027-11-30."
)


@click.command(short_help="Approve a model for use until a review date.")
@_MODEL
@click.option("--reason", required=True, help="Why it is approved.")
@_REVIEW
@click.option("--fingerprint", default="", metavar="DIGITS", help="The whole fingerprint, as its publisher stated it.")
@click.option("--recalibration", metavar="ID", help="The recalibration to be used, one that the file offers.")
@click.option(
    "--decision-point",
    "points",
    multiple=True,
    metavar='"P;LABEL;SOURCE"',
    help="A probability at which the practice acts, such as 0.10;Talk about tablets;Practice meeting of May.",
)
@click.option(
    "--compared",
    multiple=True,
    metavar="POINTER=NAME",
    help="Who compared an unconfirmed figure with its source. Holds for the places below it too.",
)
@key_options
@library_options
def approve(
    model: str,
    reason: str,
    review_until: str,
    fingerprint: str,
    recalibration: str | None,
    points: tuple[str, ...],
    compared: tuple[str, ...],
    key_file: str,
    passphrase_file: str | None,
    place: str | None,
    as_json: bool,
) -> int:
    """Approve a model for use at the bedside until the end of a day, with the choices that then hold.

    The file must be signed by a publisher trusted on this machine, or its whole fingerprint be typed. Of every figure
    that it calls unconfirmed somebody must have compared it with its source. Who made or brought the file does not
    approve it, unless the practice's policy says so.
    """
    from clinicalc.library import approving
    from clinicalc.library.choices import Choices
    from clinicalc.library.finding import find_state
    from clinicalc.library.installing import read_installed
    from clinicalc.library.standing import Standing
    from clinicalc.library.trust_store import read_trust

    choices = Choices(
        reason=reason,
        review_until=_read_day(review_until),
        recalibration=recalibration,
        decision_points=tuple(_read_point(text) for text in points),
        compared=tuple(_read_compared(text) for text in compared),
        fingerprint=fingerprint,
    )
    desk = open_for_writing(place)
    state = find_state(desk.models, model, (Standing.WAITING,))
    read, trust = read_installed(desk.source, state), read_trust()
    approving.settle(desk, state, read, choices, trust)  # before anybody types a passphrase
    approving.settle_by(desk, state, read, look_at_approver(desk, key_file), choices, trust)
    sealed = approving.approve(desk, state, read, take_approver_key(desk, key_file, passphrase_file), choices, trust)
    return _tell_written(place, as_json, sealed)


@click.command(short_help="Approve a model for longer, with the same choices.")
@_MODEL
@click.option("--reason", required=True, help="What was reviewed.")
@_REVIEW
@key_options
@library_options
def extend(
    model: str,
    reason: str,
    review_until: str,
    key_file: str,
    passphrase_file: str | None,
    place: str | None,
    as_json: bool,
) -> int:
    """Approve a model until a later day, with the recalibration and decision points that were chosen before."""
    from clinicalc.library import approving
    from clinicalc.library.finding import find_state
    from clinicalc.library.installing import read_installed
    from clinicalc.library.standing import Standing
    from clinicalc.library.trust_store import read_trust

    until = _read_day(review_until)
    desk = open_for_writing(place)
    state = find_state(desk.models, model, (Standing.IN_USE, Standing.REVIEW_OVERDUE))
    approving.approval_in_force(state)
    read, trust, card = read_installed(desk.source, state), read_trust(), look_at_approver(desk, key_file)
    approving.settle_extension(desk, state, read, card, trust, reason=reason, review_until=until)
    key = take_approver_key(desk, key_file, passphrase_file)
    sealed = approving.extend(desk, state, read, key, trust, reason=reason, review_until=until)
    return _tell_written(place, as_json, sealed)


@click.command(short_help="Withdraw a model: it gives no number any more.")
@_MODEL
@click.option("--reason", required=True, help="Why; everybody who meets the model reads it.")
@key_options
@library_options
def withdraw(
    model: str, reason: str, key_file: str, passphrase_file: str | None, place: str | None, as_json: bool
) -> int:
    """Withdraw a model. It gives no number any more on every machine of the practice, until it is approved again."""
    from clinicalc.library import withdrawing
    from clinicalc.library.finding import find_state
    from clinicalc.library.standing import Standing

    desk = open_for_writing(place)
    state = find_state(desk.models, model, (Standing.IN_USE, Standing.REVIEW_OVERDUE, Standing.HELD))
    withdrawing.settle_withdrawal(desk, state, look_at_approver(desk, key_file), reason)
    sealed = withdrawing.withdraw(desk, state, take_approver_key(desk, key_file, passphrase_file), reason)
    return _tell_written(place, as_json, sealed)


@click.command(short_help="Leave a remark in a model’s history.")
@_MODEL
@click.argument("text", metavar="TEXT")
@key_options
@library_options
def comment(model: str, text: str, key_file: str, passphrase_file: str | None, place: str | None, as_json: bool) -> int:
    """Leave a remark in a model's history. It changes nothing else."""
    from clinicalc.library import withdrawing
    from clinicalc.library.finding import find_state

    desk = open_for_writing(place)
    state = find_state(desk.models, model)
    withdrawing.settle_comment(desk, look_at_approver(desk, key_file), text)
    sealed = withdrawing.comment(desk, state, take_approver_key(desk, key_file, passphrase_file), text)
    return _tell_written(place, as_json, sealed)


@click.command(short_help="Stop using a model on this machine; needs no key.")
@_MODEL
@click.option("--why", required=True, help="What is wrong with it.")
@library_options
def hold(model: str, why: str, place: str | None, as_json: bool) -> int:
    """Stop using a model on this machine at once. Anybody may, without a key; tell an approver as well."""
    from clinicalc.library import holds
    from clinicalc.library.finding import find_state
    from clinicalc.library.machine import this_machine
    from clinicalc.library.standing import Standing

    machine = this_machine(place)
    state = find_state(open_for_reading(place).models, model, (Standing.IN_USE,))
    holds.hold(machine, state.fingerprint, why, now())
    return _tell_state(as_json, state_after(place, state.fingerprint))


@click.command(short_help="End a hold on this machine.")
@_MODEL
@library_options
def release(model: str, place: str | None, as_json: bool) -> int:
    """End a hold on this machine. The model then stands where the library says."""
    from clinicalc.library import holds
    from clinicalc.library.finding import find_state
    from clinicalc.library.machine import this_machine
    from clinicalc.library.standing import Standing

    machine = this_machine(place)
    state = find_state(open_for_reading(place).models, model, (Standing.HELD,))
    holds.release(machine, state.fingerprint, now())
    return _tell_state(as_json, state_after(place, state.fingerprint))


def _tell_written(place: str | None, as_json: bool, sealed: "SealedRecord") -> int:
    state = state_after(place, sealed.record.about)
    record = sealed.record
    signed = f"Signed by {record.name} ({record.role})."
    tell(as_json, describe_written(sealed, state), (f"{state.title} {state.version}", signed, say_standing(state)))
    return ExitStatus.ASSESSED


def _tell_state(as_json: bool, state: "ModelState") -> int:
    tell(as_json, {"model": describe_state(state)}, (f"{state.title} {state.version}", say_standing(state)))
    return ExitStatus.ASSESSED


def _read_day(text: str) -> date:
    try:
        return datetime.strptime(text.strip(), "%Y-%m-%d").date()
    except ValueError:
        raise UsageError(
            f"{quote(text)} is no day of the calendar.", do="Write the review date as year, month, day: 2027-11-30."
        ) from None


def _read_point(text: str) -> "DecisionPoint":
    from clinicalc.coefficients.schema import DecisionPoint

    probability, *rest = (part.strip() for part in text.split(";"))
    try:
        label, source = rest
        return DecisionPoint(float(probability), label, source)
    except ValueError:
        raise UsageError(
            f"{quote(text)} is no decision point.",
            do='Write probability, label and source with semicolons: "0.10;Talk about tablets;Practice meeting".',
        ) from None


def _read_compared(text: str) -> "Compared":
    from clinicalc.library.records import Compared

    at, mark, name = text.rpartition("=")
    if not mark or not name.strip():
        raise UsageError(
            f"{quote(text)} does not say who compared what.", do="Write the place and the name: /equations/0=A. Person."
        )
    return Compared(at.strip(), name.strip())
