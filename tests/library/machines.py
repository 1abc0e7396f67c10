"""Machines and libraries for tests: a practice's records and a real model in a folder, and machines that open it."""

import hashlib
import shutil
from dataclasses import dataclass
from datetime import UTC, datetime, timedelta
from functools import cache
from pathlib import Path

from clinicalc.coefficients.reader import read_bytes
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.library.opening import OpenedLibrary, open_library
from clinicalc.library.standing import FaultKind, ModelState, SealedRecord, Standing
from clinicalc.resources import read_shipped
from tests.library.records_kit import Practice, practice

NOW = datetime(2026, 12, 1, 12, 0, tzinfo=UTC)
"""Two hours after the records of `records_kit` were written."""
MODEL_ID = "tarnwick-cvd-10y"
MODEL_NAMES = (MODEL_ID, "1.0.0", "Tarnwick cardiovascular disease, invented example")
"""Id, version and title of the shipped invented file."""


@cache
def model_bytes() -> tuple[str, bytes]:
    """A shipped model's fingerprint and its canonical bytes."""
    read = read_bytes(read_shipped(f"example_models/{MODEL_ID}.json"), MODEL_ID)
    return hashlib.sha256(read.canonical).hexdigest(), read.canonical


@dataclass
class Shelf:
    """A library in a folder, of a practice that knows how to write records; `put` brings all of them there."""

    place: Path
    practice: Practice

    @property
    def fingerprint(self) -> str:
        """The model's."""
        return self.practice.model

    def put(self) -> None:
        """Every record and the model in the folder; what is there already stays."""
        folder = LibraryFolder(self.place)
        for sealed in (*self.practice.about_library, *self.practice.about_model):
            folder.put_record(sealed)
        folder.put_model(*model_bytes())

    def file_of(self, sealed: SealedRecord) -> Path:
        """A record's file."""
        return self.place / "records" / f"{sealed.record.about}-{sealed.digest}.json"

    @property
    def model_file(self) -> Path:
        """The model's file."""
        return self.place / "models" / f"{self.fingerprint}.json"


def make_shelf(place: Path, *, offline_hours: int = 24) -> Shelf:
    """A library with one model, installed by Cleo Fell and approved by Dr Ada Tarn until the end of June 2027."""
    from clinicalc.library.records import Policy

    made = practice(policy=Policy(offline_hours=offline_hours))
    made.model = model_bytes()[0]
    made.named = MODEL_NAMES
    made.install()
    made.approve()
    LibraryFolder(place).create(made.about_library[0])
    shelf = Shelf(place, made)
    shelf.put()
    return shelf


def machine_for(shelf: Shelf, folder: Path) -> Machine:
    """A machine that has joined the library, with a settings folder of its own."""
    folder.mkdir(exist_ok=True)
    return Machine(folder, shelf.place, shelf.practice.key.id)


def standing(opened: OpenedLibrary) -> Standing:
    """Where the one model of the library stands."""
    return only_state(opened).standing


def only_state(opened: OpenedLibrary) -> ModelState:
    """The one model of the library."""
    (state,) = opened.models
    return state


def stops(opened: OpenedLibrary) -> set[FaultKind]:
    """What stops the library or its models."""
    of_models = [fault for state in opened.models for fault in state.faults]
    return {fault.kind for fault in (*opened.faults, *of_models) if fault.stops}


def replace_folder(place: Path, copy: Path) -> None:
    """Another folder in place of the library."""
    shutil.rmtree(place)
    shutil.copytree(copy, place)


def look(machine: Machine, later: timedelta = timedelta(0)) -> OpenedLibrary:
    """The library as the machine opens it at noon, or later."""
    return open_library(machine, NOW + later)
