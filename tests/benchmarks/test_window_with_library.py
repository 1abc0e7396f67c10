"""The window's opening with 500 installed files and 5,000 records, against one file, in the same run.

Run with `--benchmark-only`. Nothing is asserted about time: the ratios are written down, a slow machine breaks nothing.
Offscreen, each start is a process of its own, timed from its start to the first painting and on to the moment at which
the library has been read and its models can be chosen. Each machine has opened its library once before, as every
machine has that joined it; the first reading ever is written down besides.
"""

import hashlib
import json
import os
import subprocess
import sys
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from statistics import median
from time import perf_counter

import pytest
import rfc8785
from pytest_benchmark.fixture import BenchmarkFixture

from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.library.opening import open_library
from clinicalc.settings import Settings, write_settings
from tests.library.machines import MODEL_ID, MODEL_NAMES, NOW, model_bytes
from tests.library.records_kit import Practice, practice

MANY, REMARKS, IN_USE = 500, 7, 20
ROUNDS = 7
AIM = 1.3
"""Times the opening with one file."""
ROOT = Path(__file__).parents[2]

PROGRAM = f"""
import sys
import clinicalc.__main__ as start
from datetime import datetime
from clinicalc.gui import application
from PySide6.QtCore import QTimer

class Watched(application.MainWindow):
    def paintEvent(self, event):
        if not hasattr(self, "said"):
            self.said = True
            QTimer.singleShot(0, lambda: print("painted", flush=True))

class Read(application.ModelLibrary):
    def __init__(self, state, *words, **names):
        super().__init__(state, clock=lambda: datetime.fromisoformat("{NOW.isoformat()}"), *words, **names)

    def _take_in(self, answer):
        super()._take_in(answer)
        print(len(self.in_use), flush=True)  # before the only one is chosen, which the other window does not do

application.MainWindow, application.ModelLibrary = Watched, Read
start._open_window()
"""


@dataclass(frozen=True, slots=True)
class Opening:
    """One process: seconds until it said that it was painted, and until its models could be chosen."""

    painted: float
    offered: float


def open_window(machine: Path, in_use: int) -> Opening:
    """Start the program on a machine whose library has so many models in use."""
    environment: Mapping[str, str] = os.environ | {
        "QT_QPA_PLATFORM": "offscreen",
        "CLINICALC_SETTINGS": str(machine),
        "XDG_RUNTIME_DIR": str(machine),
        # compiled modules are kept from the first start on, as where a program is installed
        "PYTHONDONTWRITEBYTECODE": "",
        "PYTHONPYCACHEPREFIX": str(machine.parent.parent / "compiled"),
    }
    begin = perf_counter()
    with subprocess.Popen(
        [sys.executable, "-c", PROGRAM], cwd=ROOT, env=environment, stdout=subprocess.PIPE, text=True
    ) as process:
        assert process.stdout is not None
        first = process.stdout.readline().strip()
        painted = perf_counter() - begin
        second = process.stdout.readline().strip()
        offered = perf_counter() - begin
        process.kill()
    assert (first, second) == ("painted", str(in_use))
    return Opening(painted, offered)


def make_machine(folder: Path, models: int, in_use: int) -> Path:
    """The settings folder of a machine that has joined a library of so many models, and never opened it."""
    made = practice()
    place = folder / "library"
    LibraryFolder(place).create(made.about_library[0])
    _write(place, made)
    tree = json.loads(model_bytes()[1])
    for number in range(models):
        tree["model"]["version"] = f"1.{number}.0"
        content = rfc8785.dumps(tree)
        one = Practice(made.key, made.about_library, [], hashlib.sha256(content).hexdigest())
        one.named = (MODEL_ID, f"1.{number}.0", MODEL_NAMES[2])
        one.install()
        one.approve()
        for _ in range(REMARKS):
            one.remark()
        if number < in_use:
            one.approve(until="2027-07-30")
        else:
            one.withdraw()
        (place / "models" / f"{one.model}.json").write_bytes(content)
        _write(place, one)
    machine = folder / "machine"
    machine.mkdir(mode=0o700)
    with pytest.MonkeyPatch.context() as patch:
        patch.setenv("CLINICALC_SETTINGS", str(machine))
        write_settings(Settings(library=str(place), practice_key=made.key.id))
    return machine


def _write(place: Path, made: Practice) -> None:
    """Put the records there without waiting for the disk each time."""
    for sealed in (*made.about_library, *made.about_model):
        (place / "records" / f"{sealed.record.about}-{sealed.digest}.json").write_bytes(sealed.content)


def test_the_windows_opening(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    for name in ("one", "many"):
        (tmp_path / name).mkdir()
    one, many = make_machine(tmp_path / "one", 1, 1), make_machine(tmp_path / "many", MANY, IN_USE)
    open_window(one, 1)  # and everything is compiled
    first_ever = open_window(many, IN_USE)

    def open_both() -> tuple[Opening, Opening]:
        # turn about, so that a busy spell of the machine hits both
        return open_window(one, 1), open_window(many, IN_USE)

    rounds = [open_both() for _ in range(ROUNDS)]
    with_one = Opening(*(median(times) for times in zip(*((r[0].painted, r[0].offered) for r in rounds), strict=True)))
    with_many = Opening(*(median(times) for times in zip(*((r[1].painted, r[1].offered) for r in rounds), strict=True)))
    benchmark.extra_info |= {
        "one_painted_seconds": with_one.painted,
        "one_offered_seconds": with_one.offered,
        "many_painted_seconds": with_many.painted,
        "many_offered_seconds": with_many.offered,
        "first_ever_painted_seconds": first_ever.painted,
        "first_ever_offered_seconds": first_ever.offered,
        "ratio_painted": with_many.painted / with_one.painted,
        "ratio_offered": with_many.offered / with_one.offered,
        "aim": AIM,
    }
    with capsys.disabled():
        sys.stdout.write(
            f"\nfirst painting {with_many.painted:.3f} s with {MANY} files, {with_one.painted:.3f} s with one:"
            f" {with_many.painted / with_one.painted:.2f} times; models offered {with_many.offered:.3f} s and"
            f" {with_one.offered:.3f} s: {with_many.offered / with_one.offered:.2f} times (aim {AIM}); the first"
            f" reading ever {first_ever.offered:.3f} s, painted after {first_ever.painted:.3f} s\n"
        )
    benchmark(open_window, many, IN_USE)


def test_the_library_is_the_one_that_is_meant(tmp_path: Path) -> None:
    machine = make_machine(tmp_path, 3, 2)
    opened = open_library(Machine(machine, tmp_path / "library", practice().key.id), NOW)
    assert (len(opened.models), len(opened.in_use())) == (3, 2)
    assert sum(len(state.records) for state in opened.models) == 3 * (REMARKS + 3)
