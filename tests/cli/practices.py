"""A practice on the command line: settings of its own, keys that open quickly, and a library."""

import os
from dataclasses import dataclass
from datetime import date, timedelta
from pathlib import Path

import pytest

from clinicalc.library.cards import write_card
from tests.cli.calling import Ended, call, example
from tests.library.keys_at_hand import PASSPHRASE, key_file

TARNWICK = "tarnwick-cvd-10y"
FINGERPRINT = "e82d04a7ad40d4efbc9ad16041a1cecb4715b589a363a03ce73fa083e5bedb32"
"""Of the shipped invented file; test_library asserts it."""
WOMAN = (
    "sex=female",
    "age=61",
    "systolic_bp=142",
    "total_cholesterol=5.2",
    "hdl_cholesterol=1.3",
    "smoker=yes",
    "diabetes=no",
    "bp_treated=no",
    "prior_cvd=no",
)


@dataclass(frozen=True, slots=True)
class Desk:
    """Where a practice keeps its keys and its library: `ada` and `cleo` may approve, `press` publishes."""

    folder: Path

    @property
    def place(self) -> str:
        """The library."""
        return os.fspath(self.folder / "library")

    def key(self, name: str) -> str:
        """The file of a key."""
        return os.fspath(self.folder / f"{name}.key")

    def card(self, name: str) -> str:
        """The file of its card."""
        return os.fspath(self.folder / f"{name}-card.json")

    def library(self, *words: str) -> Ended:
        """One command of the library."""
        return call("library", *words)

    def install(self, file: str | None = None, by: str = "cleo", *more: str) -> Ended:
        """Install a file."""
        return self.library("install", file or example(TARNWICK), "--key", self.key(by), *more)

    def approve(self, *more: str, by: str = "ada", model: str = TARNWICK, until: str = "") -> Ended:
        """Approve a model."""
        day = ("--review-until", until or _in_a_year())
        return self.library("approve", model, "--key", self.key(by), "--reason", "Agreed", *day, *more)


def found_practice(folder: Path, monkeypatch: pytest.MonkeyPatch) -> Desk:
    """A library that was just founded, with two approvers, and settings of its own."""
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(folder / "settings"))
    monkeypatch.setenv("CLINICALC_PASSPHRASE", PASSPHRASE)
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    desk = Desk(folder)
    names = {"practice": "Tarnwick Northgate", "ada": "Dr Ada Tarn", "cleo": "Cleo Fell", "press": "Tarnwick Press"}
    for short, name in names.items():
        write_card(Path(desk.card(short)), key_file(Path(desk.key(short)), name))
    approvers = ("--approver", desk.card("ada"), "--role", "GP partner", "--approver", desk.card("cleo"))
    words = ("--practice", "Tarnwick Northgate", "--practice-key", desk.key("practice"), *approvers)
    ended = desk.library("init", desk.place, *words, "--role", "Practice manager")
    assert ended.status == 0, ended.err
    return desk


def _in_a_year() -> str:
    return (date.today() + timedelta(days=365)).isoformat()
