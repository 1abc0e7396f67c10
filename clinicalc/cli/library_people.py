"""`library appoint`, `dismiss`, `revoke-key`, `policy`: what only the practice key may say."""

from collections.abc import Mapping
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.library_session import (
    library_options,
    open_for_reading,
    open_for_writing,
    practice_key_options,
    take_practice_key,
    tell,
)
from clinicalc.cli.outcome import ExitStatus
from clinicalc.errors import UsageError

if TYPE_CHECKING:
    from clinicalc.library.standing import Authority
    from clinicalc.operations.practice_deeds import PracticeDeed


@click.command(short_help="Let a person install, approve and withdraw.")
@click.option("--name", help="The person’s name; that of the card, if left out.")
@click.option("--role", required=True, help="The person’s role in the practice.")
@click.option("--card", required=True, metavar="CARD", help="The card of the person’s key.")
@practice_key_options
@library_options
def appoint(
    name: str | None,
    role: str,
    card: str,
    key_file: str,
    passphrase_file: str | None,
    place: str | None,
    as_json: bool,
) -> int:
    """Let a person install, approve and withdraw models. The practice key signs the new list of approvers."""
    from clinicalc.library.cards import read_card_file
    from clinicalc.operations import practice_deeds

    file = Path(card)
    read_card_file(file)  # what is no card is said before the library is reached
    desk = open_for_writing(place)
    practice_deeds.check_appointment(desk, file, role, name or "")
    key = take_practice_key(desk, key_file, passphrase_file)
    return _tell_deed(place, as_json, practice_deeds.appoint(desk, key, file, role, name or ""))


@click.command(short_help="Take a person off the list of approvers.")
@click.argument("who", metavar="NAME-or-KEY")
@practice_key_options
@library_options
def dismiss(who: str, key_file: str, passphrase_file: str | None, place: str | None, as_json: bool) -> int:
    """Take a person off the list, and end that person's key for good.

    What the person approved so far stays valid, and is named; if any of it is in doubt, use revoke-key instead, which
    keeps only what you name.
    """
    from clinicalc.library.appointing import find_approver
    from clinicalc.operations import practice_deeds

    desk = open_for_writing(place)
    find_approver(desk.authority, who)  # before anybody types a passphrase
    done = practice_deeds.dismiss(desk, take_practice_key(desk, key_file, passphrase_file), who)
    more = {"revocation": done.revocation, "still_valid": list(done.still_valid)}
    return _tell_deed(place, as_json, done, more)


@click.command("revoke-key", short_help="Say that a key is lost or stolen.")
@click.argument("id", metavar="KEY-ID")
@click.option("--reason", required=True, help="Why it counts no more.")
@click.option(
    "--still-valid",
    multiple=True,
    metavar="MODEL",
    help="A model whose approval by this key stays in force, by id or fingerprint. Give it once for each.",
)
@practice_key_options
@library_options
def revoke_key(
    id: str,
    reason: str,
    still_valid: tuple[str, ...],
    key_file: str,
    passphrase_file: str | None,
    place: str | None,
    as_json: bool,
) -> int:
    """Say that a key is lost or stolen. Its approvals are void, but for those of models named with --still-valid.

    Name a model only where its approval is known to be by the key's owner: nobody else can tell.
    """
    from clinicalc.operations import practice_deeds

    desk = open_for_writing(place)
    practice_deeds.check_revocation(desk, id, reason, still_valid)
    key = take_practice_key(desk, key_file, passphrase_file)
    done = practice_deeds.revoke_key(desk, key, id, reason, still_valid)
    after = open_for_reading(place)
    lost = practice_deeds.say_lost(desk.models, after.models)
    return _tell_deed(place, as_json, replace(done, says=(*done.says, *lost)))


@click.command(short_help="Say what the practice allows by way of exception.")
@click.option(
    "--author-may-approve/--no-author-may-approve",
    default=None,
    help="Whether who made or brought a file may approve it as well.",
)
@click.option("--offline-hours", type=int, metavar="HOURS", help="How long a machine may work without the library.")
@click.option("--reason", required=True, help="Why it is changed.")
@practice_key_options
@library_options
def policy(
    author_may_approve: bool | None,
    offline_hours: int | None,
    reason: str,
    key_file: str,
    passphrase_file: str | None,
    place: str | None,
    as_json: bool,
) -> int:
    """Change what the practice allows. What is not named stays as it is."""
    from clinicalc.library.appointing import settle_policy
    from clinicalc.library.records import Policy
    from clinicalc.operations import practice_deeds

    if author_may_approve is None and offline_hours is None:
        raise UsageError("nothing is to be changed.", do="Give --author-may-approve, its opposite, or --offline-hours.")
    desk = open_for_writing(place)
    held = desk.authority.policy
    wanted = Policy(
        author_may_approve=held.author_may_approve if author_may_approve is None else author_may_approve,
        offline_hours=held.offline_hours if offline_hours is None else offline_hours,
    )
    settle_policy(desk.authority, wanted, reason)
    key = take_practice_key(desk, key_file, passphrase_file)
    return _tell_deed(place, as_json, practice_deeds.set_policy(desk, key, wanted, reason))


def describe_authority(authority: "Authority") -> dict[str, object]:
    """Practice, approvers and policy, for JSON."""
    from clinicalc.library.writing import approvers_by_key

    return {
        "library": authority.library,
        "practice": authority.practice,
        "practice_key": authority.practice_key,
        "approvers": [
            {"name": approver.name, "role": approver.role, "key": key}
            for key, approver in approvers_by_key(authority).items()
        ],
        "policy": {
            "author_may_approve": authority.policy.author_may_approve,
            "offline_hours": authority.policy.offline_hours,
        },
    }


def _tell_deed(place: str | None, as_json: bool, done: "PracticeDeed", more: Mapping[str, object] | None = None) -> int:
    authority = open_for_reading(place).authority
    names = ", ".join(f"{approver.name} ({approver.role})" for approver in authority.approvers) or "nobody"
    tell(
        as_json,
        {"record": done.record.digest, **(more or {}), **describe_authority(authority)},
        (*done.says, f"Approvers now: {names}."),
    )
    return ExitStatus.ASSESSED
