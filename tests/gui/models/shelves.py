"""A practice's library with a model in every state, behind a window; and readings that list many models."""

import hashlib
import json
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from time import monotonic
from typing import Any

import rfc8785
from PySide6.QtTest import QTest

from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.models.models_page import ModelsPage
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.holds import hold
from clinicalc.library.opening import open_library
from clinicalc.library.records import Installed, Policy
from clinicalc.library.standing import Standing
from clinicalc.operations.library_view import LibraryView, ModelRow, view_of
from clinicalc.operations.library_words import Shelf
from tests.gui.approving import Surgery
from tests.library.machines import model_bytes
from tests.library.records_kit import CLEO, Practice

OVERDUE, WAITING, WITHDRAWN, REFUSED, HELD = (
    "Falls after 65",
    "Lipid form",
    "Older lipid form",
    "Hip fracture",
    "Kidney",
)
IN_USE = "Tarnwick cardiovascular disease, invented example"
_PATIENCE = 30


@dataclass
class FullShelf(Surgery):
    """One model in use, one overdue, one waiting, one withdrawn, one refused, one held."""

    def __post_init__(self) -> None:
        super().__post_init__()
        self.fingerprints = {IN_USE: self.shelf.fingerprint}
        self.put(OVERDUE, "1.1.0", "approved until 2026-11-01")
        self.put(WAITING, "1.3.0", "installed")
        self.put(WITHDRAWN, "1.1.0", "withdrawn")
        self.put(REFUSED, "0.9.2", "approved until 2027-06-30")
        self.put(HELD, "2.0.1", "approved until 2027-06-30")
        spoilt = self.shelf.place / "models" / f"{self.fingerprints[REFUSED]}.json"
        spoilt.write_bytes(spoilt.read_bytes().replace(b"0.9.2", b"0.9.3"))
        open_library(self.machine, self.now)
        hold(self.machine, self.fingerprints[HELD], "its printer is broken", self.now)

    def put(self, title: str, version: str, state: str) -> str:
        """A version of the shipped model under another title; its fingerprint."""
        content: Any = json.loads(model_bytes()[1])
        content["model"] |= {"title": title, "version": version, "id": title.casefold().replace(" ", "-")}
        canonical = rfc8785.dumps(content)
        fingerprint = hashlib.sha256(canonical).hexdigest()
        known = self.shelf.practice
        practice = Practice(known.key, known.about_library, [], fingerprint)
        model = content["model"]
        practice.say_of_model(Installed(model["id"], version, title, "handed over on paper", ()), CLEO)
        if state.startswith("approved"):
            practice.approve(until=state.rpartition(" ")[2])
        if state == "withdrawn":
            practice.approve()
            practice.withdraw()
        folder = LibraryFolder(self.shelf.place)
        for sealed in practice.about_model:
            folder.put_record(sealed)
        folder.put_model(fingerprint, canonical)
        self.fingerprints[title] = fingerprint
        return fingerprint

    def view(self) -> LibraryView:
        """The library as this machine reads it."""
        return view_of(open_library(self.machine, self.now))


def page_of(window: MainWindow) -> ModelsPage:
    """The Models page of a window."""
    return window.others.models()


def rest(page: ModelsPage) -> None:
    """Wait until nothing is being done any more, or for half a minute."""
    until = monotonic() + _PATIENCE
    while monotonic() < until:
        QTest.qWait(20)
        if not page.errands.is_busy:
            return


def many_rows(count: int) -> tuple[ModelRow, ...]:
    """Rows of invented models in three groups, in order."""
    standings = (Standing.IN_USE, Standing.WAITING, Standing.WITHDRAWN)
    rows: list[ModelRow] = []
    for shelf, standing in zip(Shelf, standings, strict=True):
        for number in range(count // 3):
            fingerprint = hashlib.sha256(f"{shelf} {number}".encode()).hexdigest()
            title = f"Invented model of the {number // 10}th kind, form {number % 10}"
            rows.append(ModelRow(fingerprint, title, f"1.{number}.0", "", standing, shelf, f"{shelf} since", "Why."))
    return tuple(rows)


def reading_of(rows: Sequence[ModelRow], folder: Path) -> LibraryView:
    """A reading that lists these rows; where they come from is an empty library."""
    folder.mkdir(exist_ok=True)
    surgery = Surgery(folder)
    opened = open_library(surgery.machine, surgery.now)
    return LibraryView("the place", "Tarnwick Practice", "key", True, "", tuple(rows), (), Policy(), (), opened)
