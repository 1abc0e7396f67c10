"""`sign` and `trust`: keys, the cards that are handed out, and the publishers trusted on this machine."""

import json
from collections.abc import Iterator, Mapping
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING

import click

from clinicalc.cli.outcome import ExitStatus
from clinicalc.cli.passphrase import NEW_VARIABLE, ask_passphrase, passphrase_option
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.folding import fold

if TYPE_CHECKING:
    from clinicalc.library.keys import KeyCard
    from clinicalc.library.trust_store import Publisher

json_option = click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")


@click.command(short_help="Sign a coefficient file with your key.")
@click.argument("file", metavar="FILE.json")
@click.option("--key", "key_path", required=True, metavar="KEY", help="The file of your private key.")
@click.option("--out", metavar="FILE.json", help="Write the signed file there, instead of in place.")
@passphrase_option
@json_option
def sign(file: str, key_path: str, out: str | None, passphrase_file: str | None, as_json: bool) -> int:
    """Add your signature to a coefficient file. Its fingerprint does not change.

    The file is read and its worked examples are recomputed first; a file that is refused is not signed. Signing says
    that these are the coefficients you publish. It approves nothing for use.
    """
    # here and below, so that no other command waits for it
    from clinicalc.library.key_files import open_key
    from clinicalc.operations.publishing import prepare_signing, write_signed

    read = prepare_signing(Path(file), None if out is None else Path(out))
    key = open_key(Path(key_path), ask_passphrase(passphrase_file))
    place = Path(file if out is None else out)
    signatures = write_signed(read, key, place)
    _tell(
        as_json,
        {"file": str(place), "fingerprint": read.fingerprint, "key": key.id, "signatures": signatures},
        f"{read.content.model.title}: signed by {key.name} and written to {place}",
        *_groups("Fingerprint", read.fingerprint),
        *_groups("Key id", key.id),
        f"Signatures it carries now: {signatures}",
    )
    return ExitStatus.ASSESSED


@click.group(short_help="Keys, and the publishers trusted on this machine.")
def trust() -> None:
    """Make a key of your own, hand out its card, and say whose signatures count on this machine."""


@trust.command("make-key", short_help="Make a key of your own.")
@click.option("--name", required=True, help="Whose key it is, as others shall read it.")
@click.option("--out", required=True, metavar="FILE", help="The file to write; never one that is there already.")
@passphrase_option
@json_option
def make(name: str, out: str, passphrase_file: str | None, as_json: bool) -> int:
    """Make a key to sign with, sealed by a passphrase of at least 12 characters.

    The passphrase cannot be recovered by anybody. The file never belongs in a library's folder.
    """
    from clinicalc.library.key_files import BEFORE_MAKING, check_place, make_key

    check_place(Path(out))
    click.echo("\n".join(fold(BEFORE_MAKING)), err=True)
    card = make_key(Path(out), name, ask_passphrase(passphrase_file, "New passphrase", confirm=True))
    _tell(
        as_json,
        {"file": out, **_card_object(card)},
        f"The key was made: {out}",
        *_card_lines(card),
        "Make a copy of the file now. `clinicalc trust card` writes the card that you hand out.",
    )
    return ExitStatus.ASSESSED


@trust.command(short_help="Show a key's card, or write it for others.")
@click.argument("file", metavar="FILE")
@click.option("--out", metavar="CARD.json", help="Write the card to this file, to be handed out.")
@json_option
def card(file: str, out: str | None, as_json: bool) -> int:
    """Show the name, the id and the public key of a key's file or of a card; no passphrase is asked.

    Read the id aloud to those who shall trust the key; they type it as they hear it.
    """
    from clinicalc.library.cards import write_card
    from clinicalc.operations.publishing import read_any_card

    found = read_any_card(Path(file))
    if out is not None:
        write_card(Path(out), found)
    written = () if out is None else (f"The card was written to {out}",)
    _tell(as_json, {"file": out, **_card_object(found)}, *_card_lines(found), *written)
    return ExitStatus.ASSESSED


@trust.command("change-passphrase", short_help="Seal your key under another passphrase.")
@click.argument("file", metavar="FILE")
@passphrase_option
@click.option("--new-passphrase-file", metavar="FILE", help=f"The same for the new one; without it {NEW_VARIABLE}.")
@json_option
def change(file: str, passphrase_file: str | None, new_passphrase_file: str | None, as_json: bool) -> int:
    """Seal the same key under another passphrase. Copies of the file keep the old one."""
    from clinicalc.library.key_files import BEFORE_MAKING, change_passphrase, open_key, read_card

    read_card(Path(file))  # a file that is no key is said before anything is typed
    old = ask_passphrase(passphrase_file, "Passphrase so far")
    open_key(Path(file), old)  # and a wrong passphrase before a new one is
    click.echo("\n".join(fold(BEFORE_MAKING)), err=True)
    new = ask_passphrase(new_passphrase_file, "New passphrase", confirm=True, variable=NEW_VARIABLE)
    found = change_passphrase(Path(file), old, new)
    _tell(
        as_json,
        {"file": file, **_card_object(found)},
        f"{file} opens with the new passphrase only. Copies made before still open with the old one: replace them.",
    )
    return ExitStatus.ASSESSED


# one public key in 64 begins with a dash, and is no option for that; nor is it a call for help where an h follows
@trust.command(
    short_help="Trust a publisher's key on this machine.",
    context_settings={"ignore_unknown_options": True, "help_option_names": ["--help"]},
)
@click.argument("card_or_public", metavar="CARD-OR-PUBLIC")
@click.option("--id", "typed", required=True, help="All 64 digits, as the owner reads them aloud; spaces are allowed.")
@click.option("--name", default="", help="Whose key it is; needed with a public key, otherwise the card's.")
@click.option("--again", is_flag=True, help="Trust a key that was revoked here by mistake.")
@json_option
def add(card_or_public: str, typed: str, name: str, again: bool, as_json: bool) -> int:
    """Trust a publisher's key from now on: signatures by it count on this machine.

    Have the owner read the id aloud, over the telephone or in person, and type what you hear. Copying the id out of
    the same message as the card proves nothing.
    """
    from clinicalc.library.cards import find_card
    from clinicalc.library.trust_store import trust_publisher

    added = trust_publisher(find_card(card_or_public, name), typed, datetime.now(UTC), again=again)
    _tell(as_json, _publisher_object(added), "Trusted on this machine from now on:", *_card_lines(added.card))
    return ExitStatus.ASSESSED


@trust.command("list", short_help="The publishers trusted on this machine.")
@json_option
def list_publishers(as_json: bool) -> int:
    """Everybody whose signatures count on this machine, and every key that was revoked here."""
    from clinicalc.library.trust_store import read_trust

    publishers = read_trust().publishers
    if as_json:
        click.echo(json.dumps({"publishers": [_publisher_object(p) for p in publishers]}, ensure_ascii=False))
        return ExitStatus.ASSESSED
    blocks = ["\n".join((*_card_lines(p.card), *_since(p))) for p in publishers]
    click.echo("\n\n".join(blocks) or "No publisher is trusted on this machine.")
    return ExitStatus.ASSESSED


@trust.command(short_help="Trust a publisher's key no longer.")
@click.argument("key_id", metavar="KEYID")
@json_option
def revoke(key_id: str, as_json: bool) -> int:
    """Trust a key no longer on this machine; at least the first 8 digits of its id are needed.

    What was installed stays as it is: withdraw a model that must not be used.
    """
    from clinicalc.library.trust_store import revoke_publisher

    revoked = revoke_publisher(key_id, datetime.now(UTC))
    _tell(as_json, _publisher_object(revoked), "No longer trusted on this machine:", *_card_lines(revoked.card))
    return ExitStatus.ASSESSED


def _tell(as_json: bool, said: Mapping[str, object], *lines: str) -> None:
    click.echo(json.dumps(said, ensure_ascii=False) if as_json else "\n".join(lines))


def _groups(head: str, id: str) -> Iterator[str]:
    """An id of 64 digits in groups of four, on two lines."""
    grouped = group_fingerprint(id)
    yield f"{head:<12}{grouped[:39]}"
    yield f"{'':<12}{grouped[40:]}"


def _card_lines(card: "KeyCard") -> Iterator[str]:
    yield f"{'Name':<12}{card.name}"
    yield from _groups("Key id", card.id)
    yield f"{'Public key':<12}{card.public}"


def _since(publisher: "Publisher") -> Iterator[str]:
    yield f"{'Trusted':<12}since {publisher.added:%Y-%m-%d}"
    if publisher.revoked is not None:
        yield f"{'Revoked':<12}on {publisher.revoked:%Y-%m-%d}: its signatures do not count here"


def _card_object(card: "KeyCard") -> dict[str, object]:
    return {"name": card.name, "id": card.id, "public": card.public}


def _publisher_object(publisher: "Publisher") -> dict[str, object]:
    revoked = publisher.revoked
    return {
        **_card_object(publisher.card),
        "added": f"{publisher.added:%Y-%m-%dT%H:%M:%SZ}",
        "revoked": None if revoked is None else f"{revoked:%Y-%m-%dT%H:%M:%SZ}",
    }
