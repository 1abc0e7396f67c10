"""A practice with a library for the verbs of the window: keys that open quickly, and a clock that stands still."""

import os
from dataclasses import dataclass, field
from datetime import UTC, date, datetime, timedelta
from pathlib import Path

import pytest

from clinicalc.library.cards import write_card
from clinicalc.library.choices import Choices
from clinicalc.operations import practice_founding
from clinicalc.operations.course import Course
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.signing_keys import Signer
from clinicalc.operations.vetting_desk import ModelRow, VettingDesk
from clinicalc.resources import find_shipped
from tests.library.keys_at_hand import PASSPHRASE, key_file
from tests.library.shelf import everything_in

NOON = datetime(2026, 12, 1, 12, 0, tzinfo=UTC)
NEXT_YEAR = date(2027, 11, 30)
TARNWICK = "tarnwick-cvd-10y"
PEOPLE = {"practice": "Tarnwick Northgate", "ada": "Dr Ada Tarn", "cleo": "Cleo Fell", "press": "Tarnwick Press"}
WRONG = "another passphrase altogether"


@dataclass
class StandingClock:
    """Says the same time until it is set on."""

    at: datetime = NOON

    def __call__(self) -> datetime:
        return self.at

    def go_on(self, days: float) -> None:
        """It is later."""
        self.at += timedelta(days=days)


@dataclass
class Room:
    """The practice's room: `ada` and `cleo` may approve, `press` publishes, `practice` is the practice key."""

    folder: Path
    clock: StandingClock = field(default_factory=StandingClock)

    @property
    def place(self) -> Path:
        """The library."""
        return self.folder / "library"

    @property
    def desk(self) -> VettingDesk:
        """The verbs, on this machine."""
        return VettingDesk(clock=self.clock)

    def key(self, name: str) -> Path:
        """The file of a key."""
        return self.folder / f"{name}.key"

    def card_file(self, name: str) -> Path:
        """The file of its card."""
        return self.folder / f"{name}-card.json"

    def signer(self, name: str, passphrase: str = PASSPHRASE) -> Signer:
        """A key with its passphrase."""
        return Signer(self.key(name), passphrase)

    def look(self, file: Path | None = None) -> ModelCard:
        """A file looked at."""
        return self.desk.look_at(file or shipped(), Course())

    def install(self, file: Path | None = None, by: str = "cleo") -> ModelRow:
        """A file installed; the shipped invented one unless another is named."""
        return self.desk.install(self.look(file), self.signer(by), "handed over on a stick", Course())

    def approve(self, row: ModelRow, by: str = "ada") -> ModelRow:
        """A model approved, its fingerprint typed."""
        return self.desk.approve(row.fingerprint, choices(row.fingerprint), self.signer(by), Course())

    def card(self, fingerprint: str) -> ModelCard:
        """The card of a model as it stands now."""
        return self.desk.card(self.desk.read(Course()), fingerprint, Course())

    def contents(self) -> dict[str, bytes | None]:
        """Everything in the library's folder."""
        return everything_in(self.place)


def shipped(id: str = TARNWICK) -> Path:
    """A shipped coefficient file."""
    return Path(str(find_shipped(f"example_models/{id}.json")))


def choices(fingerprint: str = "", until: date = NEXT_YEAR, reason: str = "Agreed on 1 December") -> Choices:
    """Choices that nothing is wrong with, where the model has no unconfirmed figures."""
    return Choices(reason, until, fingerprint=fingerprint)


def found_room(folder: Path, monkeypatch: pytest.MonkeyPatch) -> Room:
    """A library that was just founded on a machine with settings of its own."""
    room = empty_room(folder, monkeypatch)
    approvers = (
        practice_founding.approver_of(room.card_file("ada"), "GP partner"),
        practice_founding.approver_of(room.card_file("cleo"), "Practice manager"),
    )
    signer = room.signer("practice")
    practice_founding.found(room.place, PEOPLE["practice"], signer, approvers, moment=room.clock())
    return room


def empty_room(folder: Path, monkeypatch: pytest.MonkeyPatch) -> Room:
    """Keys and cards, and no library yet."""
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(folder / "settings"))
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    room = Room(folder)
    for short, name in PEOPLE.items():
        write_card(room.card_file(short), key_file(room.key(short), name))
    return room
