"""What the library's commands share: the place, the key, the time, and how an answer is told."""

import json
from collections.abc import Callable, Iterable, Mapping
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click

from clinicalc.cli.passphrase import ask_passphrase, passphrase_option
from clinicalc.operations.folding import fold

if TYPE_CHECKING:
    from clinicalc.library.keys import KeyCard, SigningKey
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.library.standing import ModelState, SealedRecord
    from clinicalc.library.writing import Desk

_Command = TypeVar("_Command", bound=Callable[..., Any])


def library_options(command: _Command) -> _Command:
    """Adds --library and --json, given to the command as `place` and `as_json`."""
    for decorate in (
        click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else."),
        click.option("--library", "place", metavar="PLACE", help="The library’s folder, if not this machine’s own."),
    ):
        command = decorate(command)
    return command


def key_options(command: _Command) -> _Command:
    """Adds --key and --passphrase-file."""
    key = click.option("--key", "key_file", required=True, metavar="KEYFILE", help="The file of your private key.")
    return key(passphrase_option(command))


def practice_key_options(command: _Command) -> _Command:
    """Adds --practice-key and --passphrase-file."""
    key = click.option(
        "--practice-key", "key_file", required=True, metavar="KEYFILE", help="The file of the practice’s private key."
    )
    return key(passphrase_option(command))


def take_key(key_file: str, passphrase_file: str | None) -> "SigningKey":
    """The opened private key. Raises KeyRefused."""
    from clinicalc.operations.signing_keys import take_key as take

    return take(Path(key_file), lambda card: ask_passphrase(passphrase_file, f"Passphrase of the key of {card.name}"))


def take_approver_key(desk: "Desk", key_file: str, passphrase_file: str | None) -> "SigningKey":
    """The same for a key of an approver in force. Raises LibraryError for any other before a passphrase is asked."""
    look_at_approver(desk, key_file)
    return take_key(key_file, passphrase_file)


def look_at_approver(desk: "Desk", key_file: str) -> "KeyCard":
    """The card of an approver's key; no passphrase is asked. Raises LibraryError for any other key."""
    from clinicalc.operations import signing_keys

    return signing_keys.look_at_approver(desk.authority, Path(key_file))


def take_practice_key(desk: "Desk", key_file: str, passphrase_file: str | None) -> "SigningKey":
    """The same for the practice's own key."""
    from clinicalc.operations.signing_keys import look_at_practice_key

    look_at_practice_key(desk.authority, Path(key_file))
    return take_key(key_file, passphrase_file)


def open_for_reading(place: str | None) -> "OpenedLibrary":
    """The library as it stands for this machine. Raises LibraryError, and UsageError for settings that cannot be."""
    from clinicalc.library.machine import this_machine
    from clinicalc.library.opening import open_library

    return open_library(this_machine(place), now())


def open_for_writing(place: str | None) -> "Desk":
    """The library, reachable and sound, to write a record in. Raises LibraryError."""
    from clinicalc.library.writing import sit_down

    return sit_down(open_for_reading(place))


def state_after(place: str | None, fingerprint: str) -> "ModelState":
    """Where a model stands now that something was written; this machine has then seen the new record too."""
    return next(state for state in open_for_reading(place).models if state.fingerprint == fingerprint)


def now() -> datetime:
    """The time of this machine with its zone: a review date ends at midnight here."""
    from clinicalc.operations import library_reading

    return library_reading.now()


def tell(as_json: bool, record: Mapping[str, object], lines: Iterable[str]) -> None:
    """Print the answer: one JSON object, or lines folded to the width of a page."""
    if as_json:
        click.echo(json.dumps(record, ensure_ascii=False, indent=2))
        return
    for line in lines:
        click.echo("\n".join(fold(line)) if line else "")


def describe_state(state: "ModelState") -> dict[str, object]:
    """Where a model stands, for JSON."""
    approval = state.approval
    return {
        "id": state.id,
        "version": state.version,
        "title": state.title,
        "fingerprint": state.fingerprint,
        "standing": state.standing.value,
        "reason": state.reason or None,
        "approval": None
        if approval is None
        else {
            "record": approval.digest,
            "by": approval.name,
            "role": approval.role,
            "reason": approval.reason,
            "written": f"{approval.written:%Y-%m-%dT%H:%M:%SZ}",
            "review_until": approval.review_until.isoformat(),
            "recalibration": approval.recalibration,
            "decision_points": [
                {"probability": point.probability, "label": point.label, "source": point.source}
                for point in approval.decision_points
            ],
            "compared": [{"at": one.at, "by": one.by} for one in approval.compared],
            "known_by": approval.known_by,
            "by_author": approval.by_author,
        },
        "faults": [{"kind": fault.kind.value, "says": fault.sentence, "stops": fault.stops} for fault in state.faults],
    }


def describe_written(sealed: "SealedRecord", state: "ModelState") -> dict[str, object]:
    """A record that was just written about a model, for JSON, and where the model stands by it."""
    return {"record": sealed.digest, "written": sealed.record.written, "model": describe_state(state)}
