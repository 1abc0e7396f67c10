"""`library appoint`, `dismiss`, `revoke-key`, `policy`: what only the practice key may say."""

from collections.abc import Mapping
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
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import UsageError
from clinicalc.report.phrases import count_words

if TYPE_CHECKING:
    from clinicalc.library.standing import Authority
    from clinicalc.library.writing import Desk


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
    from clinicalc.library import appointing
    from clinicalc.library.cards import read_card_file

    held = read_card_file(Path(card))
    desk = open_for_writing(place)
    sealed = appointing.appoint(desk, take_practice_key(desk, key_file, passphrase_file), name or held.name, role, held)
    opening = f"{name or held.name} ({role}) may now install, approve and withdraw models."
    key = f"Key {group_fingerprint(held.id)}"
    return _tell_authority(place, as_json, sealed.digest, (opening, key))


@click.command(short_help="Take a person off the list of approvers.")
@click.argument("who", metavar="NAME-or-KEY")
@practice_key_options
@library_options
def dismiss(who: str, key_file: str, passphrase_file: str | None, place: str | None, as_json: bool) -> int:
    """Take a person off the list, and end that person's key for good.

    What the person approved so far stays valid, and is named; if any of it is in doubt, use revoke-key instead, which
    keeps only what you name.
    """
    from clinicalc.library import appointing

    desk = open_for_writing(place)
    appointing.find_approver(desk.authority, who)  # before anybody types a passphrase
    done = appointing.dismiss(desk, take_practice_key(desk, key_file, passphrase_file), who)
    gone = done.approver
    lines = (
        f"{gone.name} ({gone.role}) may no longer install, approve or withdraw, and that key counts no more for"
        " anything new. To come back, the person makes another key.",
        *_kept(desk, done.still_valid, gone.name),
    )
    more = {"revocation": done.revocation.digest, "still_valid": list(done.still_valid)}
    return _tell_authority(place, as_json, done.listed.digest, lines, more)


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
    from clinicalc.library import appointing

    desk = open_for_writing(place)
    key = take_practice_key(desk, key_file, passphrase_file)
    kept = tuple(_approval_of(desk, words) for words in still_valid)
    whole, sealed = appointing.revoke_key(desk, key, id, reason, kept)
    opening = f"The key {group_fingerprint(whole, 3)} counts no more."
    return _tell_authority(place, as_json, sealed.digest, (opening, *_lost(desk, place)))


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
    from clinicalc.library import appointing
    from clinicalc.library.records import Policy

    if author_may_approve is None and offline_hours is None:
        raise UsageError("nothing is to be changed.", do="Give --author-may-approve, its opposite, or --offline-hours.")
    desk = open_for_writing(place)
    held = desk.authority.policy
    wanted = Policy(
        author_may_approve=held.author_may_approve if author_may_approve is None else author_may_approve,
        offline_hours=held.offline_hours if offline_hours is None else offline_hours,
    )
    sealed = appointing.change_policy(desk, take_practice_key(desk, key_file, passphrase_file), wanted, reason)
    may = "may" if wanted.author_may_approve else "may not"
    lines = (
        f"Who made or brought a file {may} approve it.",
        f"Without the library, a machine works on for {wanted.offline_hours} hours.",
    )
    return _tell_authority(place, as_json, sealed.digest, lines)


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


def _tell_authority(
    place: str | None, as_json: bool, digest: str, lines: tuple[str, ...], more: Mapping[str, object] | None = None
) -> int:
    authority = open_for_reading(place).authority
    names = ", ".join(f"{approver.name} ({approver.role})" for approver in authority.approvers) or "nobody"
    tell(
        as_json,
        {"record": digest, **(more or {}), **describe_authority(authority)},
        (*lines, f"Approvers now: {names}."),
    )
    return ExitStatus.ASSESSED


def _approval_of(desk: "Desk", words: str) -> str:
    """The digest of the approval of a model."""
    from clinicalc.library.approving import approval_in_force
    from clinicalc.library.finding import find_state

    return approval_in_force(find_state(desk.models, words)).digest


def _kept(desk: "Desk", digests: tuple[str, ...], name: str) -> tuple[str, ...]:
    """The models of which these approvals, by one person, stay valid; those approvals in force are set apart."""
    in_force, replaced = list[str](), 0
    for state in desk.models:
        of_model = [sealed for sealed in state.records if sealed.digest in digests]
        current = [one for one in of_model if state.approval is not None and one.digest == state.approval.digest]
        in_force += [
            f"{state.title} {state.version} (until {state.approval.review_until})" for _ in current if state.approval
        ]
        replaced += len(of_model) - len(current)
    if not digests:
        return (f"{name} had approved nothing that counts now.",)
    said = "; ".join(in_force) or "none that is in force now"
    earlier = f" So do {count_words(replaced, 'approval')} of former days, for the history." if replaced else ""
    return (f"What {name} approved stays valid: {said}.{earlier}",)


def _lost(desk: "Desk", place: str | None) -> tuple[str, ...]:
    """The models that gave numbers before and no longer do, in a sentence."""
    from clinicalc.library.standing import Standing

    before = {state.fingerprint for state in desk.models if state.standing is Standing.IN_USE}
    after = {state.fingerprint: state for state in open_for_reading(place).models}
    lost = [
        f"{after[print].title} {after[print].version}"
        for print in sorted(before & after.keys())
        if after[print].standing is not Standing.IN_USE
    ]
    return (f"No longer in use: {'; '.join(lost)}.",) if lost else ()
