"""Reading a library of 1,000 models for the list of the Models page, and one card: how long the window waits.

Run with `--benchmark-only`. Nothing is asserted about time. Measured here: 0.2 s a reading once the window has read it
before, 0.6 s the first time in a process (every signature is verified then), 10 ms a card.
"""

import hashlib
import json
from pathlib import Path

import pytest
import rfc8785
from pytest_benchmark.fixture import BenchmarkFixture

from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.operations.course import Course
from clinicalc.operations.vetting_desk import VettingDesk
from tests.library.machines import MODEL_ID, MODEL_NAMES, NOW, model_bytes
from tests.library.records_kit import Practice, practice

MODELS, IN_USE = 1000, 20


@pytest.fixture(scope="module")
def desk(tmp_path_factory: pytest.TempPathFactory) -> VettingDesk:
    """The verbs over a library of installed, approved and (but for some) withdrawn models."""
    folder = tmp_path_factory.mktemp("thousand")
    place, made = folder / "library", practice()
    LibraryFolder(place).create(made.about_library[0])
    tree = json.loads(model_bytes()[1])
    _write(place, made)
    for number in range(MODELS):
        tree["model"]["version"] = f"1.{number}.0"
        content = rfc8785.dumps(tree)
        one = Practice(made.key, made.about_library, [], hashlib.sha256(content).hexdigest())
        one.named = (MODEL_ID, f"1.{number}.0", MODEL_NAMES[2])
        one.install()
        one.approve()
        if number >= IN_USE:
            one.withdraw()
        (place / "models" / f"{one.model}.json").write_bytes(content)
        _write(place, one)
    machine = Machine(folder / "machine", place, made.key.id)
    return VettingDesk(lambda: machine, lambda: NOW)


def _write(place: Path, made: Practice) -> None:
    """Put the records there without waiting for the disk each time."""
    for sealed in (*made.about_library, *made.about_model):
        (place / "records" / f"{sealed.record.about}-{sealed.digest}.json").write_bytes(sealed.content)


def test_the_list(benchmark: BenchmarkFixture, desk: VettingDesk) -> None:
    desk.read(Course())  # the very first reading ever copies every record to this machine
    view = benchmark(lambda: desk.read(Course()))
    assert len(view.rows) == MODELS


def test_one_card(benchmark: BenchmarkFixture, desk: VettingDesk) -> None:
    view = desk.read(Course())
    card = benchmark(lambda: desk.card(view, view.rows[0].fingerprint, Course()))
    assert card.checks
