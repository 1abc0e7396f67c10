"""Opening a library of 500 models and 5,000 records, of which 20 are in use: what a window waits for at its start, and
what one command waits for that names an approved model.

Run with `--benchmark-only`. Nothing is asserted about time.
"""

import hashlib
import json
from collections.abc import Callable
from pathlib import Path

import pytest
import rfc8785
from pytest_benchmark.fixture import BenchmarkFixture

from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.library.opening import OpenedLibrary, open_for_bedside, open_library
from clinicalc.operations.approved import open_approved
from clinicalc.settings import Settings, write_settings
from tests.library.machines import MODEL_ID, MODEL_NAMES, NOW, model_bytes
from tests.library.records_kit import Practice, practice

MODELS, REMARKS, IN_USE = 500, 7, 20
AIM = 0.150
"""Seconds."""


@pytest.fixture(scope="module")
def machine(tmp_path_factory: pytest.TempPathFactory) -> Machine:
    """A machine that has opened the library once."""
    folder = tmp_path_factory.mktemp("many")
    made = practice()
    LibraryFolder(folder / "library").create(made.about_library[0])
    _write(folder / "library", made)
    tree = json.loads(model_bytes()[1])
    for number in range(MODELS):
        tree["model"]["version"] = f"1.{number}.0"
        content = rfc8785.dumps(tree)
        one = Practice(made.key, made.about_library, [], hashlib.sha256(content).hexdigest())
        one.named = (MODEL_ID, f"1.{number}.0", MODEL_NAMES[2])
        one.install()
        one.approve()
        for _ in range(REMARKS):
            one.remark()
        if number < IN_USE:
            one.approve(until="2027-07-30")
        else:
            one.withdraw()
        (folder / "library" / "models" / f"{one.model}.json").write_bytes(content)
        _write(folder / "library", one)
    machine = Machine(folder / "machine", folder / "library", made.key.id)
    open_library(machine, NOW)
    return machine


def _write(place: Path, made: Practice) -> None:
    """Put the records there without waiting for the disk each time."""
    for sealed in (*made.about_library, *made.about_model):
        (place / "records" / f"{sealed.record.about}-{sealed.digest}.json").write_bytes(sealed.content)


@pytest.mark.parametrize("opening", [open_for_bedside, open_library])
def test_an_opening_after_the_first(
    benchmark: BenchmarkFixture, machine: Machine, opening: Callable[..., OpenedLibrary]
) -> None:
    opened = benchmark(lambda: opening(machine, NOW))
    assert len(opened.in_use()) == IN_USE
    benchmark.extra_info["aim in seconds"] = AIM


def test_one_model_by_name(benchmark: BenchmarkFixture, machine: Machine, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("CLINICALC_SETTINGS", str(machine.folder))
    write_settings(Settings(library=str(machine.place), practice_key=machine.practice_key))
    fingerprint = open_for_bedside(machine, NOW).in_use()[0].fingerprint
    approved = benchmark(lambda: open_approved(fingerprint, now=NOW))
    assert approved.model.fingerprint == fingerprint
    benchmark.extra_info["aim in seconds"] = AIM
