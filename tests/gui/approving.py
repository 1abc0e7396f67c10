"""A practice's library behind a window: models approved, a machine that joined, a clock that the test sets."""

import hashlib
import json
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import Path
from typing import Any

import rfc8785

from clinicalc.assessment.entry import entry_from_texts
from clinicalc.coefficients.reader import read_bytes
from clinicalc.coefficients.schema import DecisionPoint
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.file_dialogs import ChooseSave
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.library.records import Installed
from clinicalc.resources import read_shipped
from tests.library.machines import NOW, Shelf, machine_for, make_shelf, model_bytes
from tests.library.records_kit import CLEO, Practice


@dataclass
class Surgery:
    """A library with one approved model, a machine that has joined it, and what time it is there."""

    folder: Path
    now: datetime = NOW
    shelf: Shelf = field(init=False)
    machine: Machine = field(init=False)

    def __post_init__(self) -> None:
        self.shelf = make_shelf(self.folder / "library", offline_hours=24)
        self.machine = machine_for(self.shelf, self.folder / "machine")

    def open(
        self,
        choose_save: ChooseSave = lambda *_: None,
        why: str | None = None,
        start: Callable[[ModelLibrary], None] = ModelLibrary.start,
    ) -> MainWindow:
        """A window that has read the library, or as `start` does it; `why` is answered when a model is to be held."""
        state = EntryState()
        library = ModelLibrary(state, lambda: self.machine, lambda: self.now)
        window = MainWindow(
            state, library=library, choose_open=lambda _: None, choose_save=choose_save, ask_why=lambda *_: why
        )
        start(library)
        return window

    def add_version(self, version: str, title: str = "") -> str:
        """Another version of the model, installed and approved; its fingerprint."""
        content: Any = json.loads(model_bytes()[1])
        content["model"]["version"] = version
        content["model"]["title"] = title.strip(" ,") or content["model"]["title"]
        return self._add(rfc8785.dumps(content))

    def add_model(self, name: str, recalibration: str | None = None, points: tuple[DecisionPoint, ...] = ()) -> str:
        """A shipped model, approved with these choices; its fingerprint."""
        return self._add(read_bytes(read_shipped(f"example_models/{name}"), name).canonical, recalibration, points)

    def _add(self, canonical: bytes, recalibration: str | None = None, points: tuple[DecisionPoint, ...] = ()) -> str:
        fingerprint = hashlib.sha256(canonical).hexdigest()
        model = json.loads(canonical)["model"]
        practice = Practice(self.shelf.practice.key, self.shelf.practice.about_library, [], fingerprint)
        came = Installed(model["id"], model["version"], model["title"], "handed over on paper", ())
        practice.say_of_model(came, CLEO)
        practice.approve(recalibration=recalibration, points=points)
        folder = LibraryFolder(self.shelf.place)
        for sealed in practice.about_model:
            folder.put_record(sealed)
        folder.put_model(fingerprint, canonical)
        return fingerprint

    def withdraw(self) -> None:
        """Dr Ben Wick withdraws the model."""
        self.shelf.practice.withdraw()
        self.shelf.put()

    def lose(self) -> None:
        """The library's folder cannot be reached any more."""
        self.shelf.place.rename(self.folder / "elsewhere")

    def find_again(self) -> None:
        """And it is back."""
        (self.folder / "elsewhere").rename(self.shelf.place)


def fill(window: MainWindow, texts: Mapping[str, str]) -> None:
    """Everything typed about a patient at once."""
    for id, typed in entry_from_texts(dict(texts)).typed.items():
        window.state.type_value(id, typed)
