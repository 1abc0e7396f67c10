"""`library init` and `library join`: which library this machine uses, and whose key speaks for the practice."""

from pathlib import Path

import click

from clinicalc.cli.library_session import now, practice_key_options, take_key, tell
from clinicalc.cli.outcome import ExitStatus
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import UsageError


@click.command(short_help="Found a library for a practice.")
@click.argument("place", metavar="PLACE")
@click.option("--practice", required=True, metavar="NAME", help="The name of the practice.")
@practice_key_options
@click.option("--approver", "cards", multiple=True, metavar="CARD", help="The card of a person who may approve.")
@click.option("--role", "roles", multiple=True, help="That person’s role, once for each --approver, in their order.")
@click.option("--author-may-approve", is_flag=True, help="Let who made or brought a file approve it as well.")
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
def init(
    place: str,
    practice: str,
    key_file: str,
    passphrase_file: str | None,
    cards: tuple[str, ...],
    roles: tuple[str, ...],
    author_may_approve: bool,
    as_json: bool,
) -> int:
    """Found a library in a new or an empty folder, and use it on this machine.

    The practice key signs who may approve; it is pinned in this machine's settings. Every other machine joins with
    `clinicalc library join`, for which the key's id is read aloud.
    """
    from clinicalc.library.appointing import check_label
    from clinicalc.library.founding import check_founding, found_library
    from clinicalc.library.key_files import read_card
    from clinicalc.library.records import Policy
    from clinicalc.operations.founding_steps import keep_practice_name
    from clinicalc.operations.practice_founding import approver_of

    if len(cards) != len(roles):
        raise UsageError(
            f"{len(cards)} cards and {len(roles)} roles are given.", do="Give one --role after each --approver."
        )
    approvers = tuple(approver_of(Path(card), role) for card, role in zip(cards, roles, strict=True))
    named = check_label(practice, "practice")
    check_founding(Path(place), named, read_card(Path(key_file)), approvers)
    key = take_key(key_file, passphrase_file)
    sealed = found_library(
        Path(place),
        practice=named,
        key=key,
        approvers=approvers,
        policy=Policy(author_may_approve=author_may_approve),
        now=now(),
    )
    keep_practice_name(named)
    grouped = group_fingerprint(key.id)
    tell(
        as_json,
        {"library": sealed.digest, "place": str(Path(place).absolute()), "practice_key": key.id, "practice": named},
        (
            f"The library of {named} was founded in {Path(place).absolute()}, and this machine uses it.",
            "The id of the practice key, to be read aloud on every machine that joins:",
            f"  {grouped[:39]}",
            f"  {grouped[40:]}",
            f"Approvers: {', '.join(f'{a.name} ({a.role})' for a in approvers) or 'nobody yet'}.",
            "Keep the practice key’s file off this machine and never in the library. It is needed to appoint people.",
        ),
    )
    return ExitStatus.ASSESSED


@click.command(short_help="Use a library that was founded on another machine.")
@click.argument("place", metavar="PLACE")
@click.option(
    "--practice-key-id",
    "said",
    required=True,
    metavar="DIGITS",
    help="The id of the practice key, all sixteen groups, as it was read aloud.",
)
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
def join(place: str, said: str, as_json: bool) -> int:
    """Use a library on this machine, if its practice key is the one whose id was read aloud.

    Hear the digits from the person who keeps the key, over the telephone or face to face, not from the folder itself.
    """
    from clinicalc.library.founding import join_library
    from clinicalc.operations.founding_steps import keep_practice_name

    founding = join_library(Path(place), said, now())
    keep_practice_name(founding.practice)
    where = str(Path(place).absolute())
    tell(
        as_json,
        {"place": where, "practice": founding.practice, "practice_key": "".join(said.split()).lower()},
        (
            f"All 64 digits agree. This machine now uses the library of {founding.practice} in {where}.",
            "See what it holds: clinicalc library list",
        ),
    )
    return ExitStatus.ASSESSED
