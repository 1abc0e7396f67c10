"""The publishers trusted on this machine: whose signature on a coefficient file counts here.

One strict file, trust.json, in the settings folder. A key that was revoked stays in it, so that nobody trusts it again
by mistake. A file that cannot be read trusts nobody and is never written over.
"""

import os
from dataclasses import dataclass, replace
from datetime import UTC, datetime
from typing import Final, Literal

import msgspec

from clinicalc.coefficients.file_types import FileStruct, Label
from clinicalc.coefficients.pointers import quoted
from clinicalc.errors import FileNotWritten, KeyRefused
from clinicalc.library.cards import ID_DIGITS, make_card, require_same_id
from clinicalc.library.keys import KeyCard, decode_public
from clinicalc.library.records import Moment, PublicKey
from clinicalc.library.small_files import decode_strictly, read_small
from clinicalc.replacement import replace_file
from clinicalc.settings import settings_folder
from clinicalc.units.days import day_words

FILE_NAME = "trust.json"
_FORMAT: Final = "clinicalc.trust/1"
_MOST_BYTES = 1_000_000
_WHAT = "this machine's list of trusted publishers"
_LEAST_DIGITS = 8


class _Entry(FileStruct, frozen=True):
    name: Label
    public: PublicKey
    added: Moment
    revoked: Moment | None


class _TrustFile(FileStruct, frozen=True):
    format: Literal["clinicalc.trust/1"]
    publishers: tuple[_Entry, ...]


@dataclass(frozen=True, slots=True)
class Publisher:
    """A key trusted on this machine since `added`, and until `revoked` where that is not None (UTC, to the second)."""

    card: KeyCard
    added: datetime
    revoked: datetime | None = None


@dataclass(frozen=True, slots=True)
class TrustStore:
    """The publishers in the order in which they were added."""

    publishers: tuple[Publisher, ...] = ()

    def find(self, id: str) -> Publisher | None:
        """The publisher whose key has this id, revoked or not."""
        return next((publisher for publisher in self.publishers if publisher.card.id == id), None)

    def find_key(self, id: str) -> bytes | None:
        """The raw public key of this id where it is trusted now; None for an unknown or a revoked one."""
        found = self.find(id)
        return None if found is None or found.revoked is not None else decode_public(found.card.public)


def read_trust() -> TrustStore:
    """The publishers of this machine; none where there is no file yet.

    Raises KeyRefused for a file that cannot be taken whole, UsageError where there is no folder for settings.
    """
    path = settings_folder() / FILE_NAME
    if not os.path.lexists(path):
        return TrustStore()
    held = decode_strictly(read_small(path, _MOST_BYTES, _WHAT), _TrustFile, str(path), _WHAT)
    publishers = tuple(
        Publisher(
            make_card(entry.public, entry.name),
            _moment(entry.added),
            None if entry.revoked is None else _moment(entry.revoked),
        )
        for entry in held.publishers
    )
    if len({publisher.card.id for publisher in publishers}) < len(publishers):
        raise KeyRefused(
            "this machine's list of trusted publishers has one key twice.", where=str(path), do="Take one of them out."
        )
    return TrustStore(publishers)


def trust_publisher(card: KeyCard, typed_id: str, now: datetime, *, again: bool = False) -> Publisher:
    """Trust the key from now on, where the id typed as it was read aloud is the key's own; the publisher.

    Raises KeyRefused where the ids differ, where the key is trusted already, and where it was revoked here before
    unless `again` is said.
    """
    require_same_id(typed_id, card.id)
    store = read_trust()
    known = store.find(card.id)
    if known is not None and known.revoked is None:
        raise KeyRefused(f"this key is trusted here already, as {quoted(known.card.name)}.", do="Nothing was changed.")
    if known is not None and known.revoked is not None and not again:
        raise KeyRefused(
            f"this key was revoked here on {day_words(known.revoked.astimezone())}, as that of"
            f" {quoted(known.card.name)}.",
            why="A key is revoked when others may have it.",
            do="Ask its owner for a new one; if it was revoked by mistake, say --again. Nothing was trusted.",
        )
    added = Publisher(card, now)
    _write(TrustStore((*(other for other in store.publishers if other is not known), added)))
    return added


def revoke_publisher(id: str, now: datetime) -> Publisher:
    """Trust a publisher's key no longer; the publisher. The id may be cut after 8 digits or more.

    Raises KeyRefused where no key, more than one, or a key revoked already has this id.
    """
    store = read_trust()
    found = _find_by_beginning(store, id)
    if found.revoked is not None:
        day = day_words(found.revoked.astimezone())
        raise KeyRefused(f"this key was revoked here on {day} already.", do="Nothing was changed.")
    revoked = replace(found, revoked=now)
    _write(TrustStore(tuple(revoked if other is found else other for other in store.publishers)))
    return revoked


def _find_by_beginning(store: TrustStore, typed: str) -> Publisher:
    digits = "".join(typed.split()).casefold()
    if not _LEAST_DIGITS <= len(digits) <= ID_DIGITS:
        raise KeyRefused(
            f"a key's id has {ID_DIGITS} digits; at least {_LEAST_DIGITS} of them are needed; {len(digits)} are given.",
            do="`clinicalc trust list` shows the ids.",
        )
    found = [publisher for publisher in store.publishers if publisher.card.id.startswith(digits)]
    if len(found) != 1:
        raise KeyRefused(
            f"{'no key' if not found else 'more than one key'} of this machine's publishers begins with "
            f"{quoted(digits)}.",
            do="`clinicalc trust list` shows the ids.",
        )
    return found[0]


def _write(store: TrustStore) -> None:
    path = settings_folder() / FILE_NAME
    entries = tuple(
        _Entry(
            publisher.card.name,
            publisher.card.public,
            _spell(publisher.added),
            None if publisher.revoked is None else _spell(publisher.revoked),
        )
        for publisher in store.publishers
    )
    data = msgspec.json.format(msgspec.json.encode(_TrustFile(_FORMAT, entries)), indent=2) + b"\n"
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        replace_file(path.resolve(), data)  # where it is a link, the link stays
    except (OSError, RuntimeError, ValueError) as fault:
        raise FileNotWritten(
            "the list of trusted publishers could not be written.",
            where=str(path),
            why=f"The computer says: {getattr(fault, 'strerror', None) or fault}.",
            do="Nothing was changed. Make room there, or ask who looks after this computer.",
        ) from None


def _spell(moment: datetime) -> str:
    return f"{moment.astimezone(UTC):%Y-%m-%dT%H:%M:%SZ}"


def _moment(text: str) -> datetime:
    try:
        return datetime.strptime(text, "%Y-%m-%dT%H:%M:%SZ").replace(tzinfo=UTC)
    except ValueError:
        raise KeyRefused(
            f"{quoted(text)} is no moment there is.", where=FILE_NAME, do="Take the file from its backup."
        ) from None
