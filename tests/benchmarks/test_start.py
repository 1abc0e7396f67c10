"""From starting the process to the first paint on which a value can be typed, against bare windows, in one run.

Run with `--benchmark-only`. Nothing is asserted about time: the ratios are written down, a slow machine breaks nothing.
Offscreen, each start is a process of its own. The time ends when the process says that its window has been painted,
so it holds the start of the interpreter as well.
"""

import json
import os
import subprocess
import sys
from collections.abc import Mapping, Sequence
from pathlib import Path
from statistics import median
from time import perf_counter

import pytest
from pytest_benchmark.fixture import BenchmarkFixture

ROUNDS = 9
AIM_BARE, AIM_IMPORTS = 2.2, 1.2
"""Times a bare window's start, and times that of a bare window which imports what the program imports."""
ROOT = Path(__file__).parents[2]
LOADED_BY_QT = ("shibokensupport", "signature_bootstrap")
"""PySide6 loads these in a way of its own; they come with it."""

SAY_WHEN_PAINTED = """
import sys
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication, QWidget

def say_once(window, words):
    if not hasattr(window, "said"):
        window.said = True
        # after this round of painting, and so with everything inside the window
        QTimer.singleShot(0, lambda: print(words(), flush=True))
"""

BARE = f"""{SAY_WHEN_PAINTED}
class Bare(QWidget):
    def paintEvent(self, event):
        say_once(self, lambda: "painted")

application = QApplication([])
window = Bare()
window.resize(1280, 800)
window.show()
application.exec()
"""

WITH_IMPORTS = f"""
import json, sys
from importlib import import_module
import clinicalc.__main__
for name in json.loads(sys.argv[1]):
    import_module(name)
{BARE}
"""

PROGRAM = f"""
import clinicalc.__main__ as start
from clinicalc.assessment.entry import PatientEntry
from clinicalc.operations.bedside import open_example
from clinicalc.operations.demonstration import DEMO_FILE, DemoCase
case = DemoCase(open_example(DEMO_FILE), PatientEntry())
from clinicalc.gui import application
{SAY_WHEN_PAINTED}
class Watched(application.MainWindow):
    def paintEvent(self, event):
        say_once(self, self.describe)

    def describe(self):
        import json
        loaded = [name for name, module in sys.modules.items() if getattr(module, "__spec__", None)]
        QTimer.singleShot(0, self.type)
        focus = self.values.isAncestorOf(self.focusWidget())
        return json.dumps({{"field_has_focus": focus, "fingerprint": self.state.model.fingerprint, "loaded": loaded}})

    def type(self):
        from PySide6.QtTest import QTest
        age = self.values.rows["age"].edit
        QTest.keyClicks(age, "61")
        print(self.state.entry.typed["age"].text, flush=True)

application.MainWindow = Watched
start._open_window(case)
"""


class Start:
    """One process, timed from its start to the first line that it writes."""

    def __init__(self, program: str, *words: str, folder: Path, last_line: bool = False) -> None:
        environment: Mapping[str, str] = os.environ | {
            "QT_QPA_PLATFORM": "offscreen",
            "CLINICALC_SETTINGS": str(folder),
            # compiled modules are kept from the first start on, as where a program is installed
            "PYTHONDONTWRITEBYTECODE": "",
            "PYTHONPYCACHEPREFIX": str(folder / "compiled"),
        }
        begin = perf_counter()
        with subprocess.Popen(
            [sys.executable, "-c", program, *words], cwd=ROOT, env=environment, stdout=subprocess.PIPE, text=True
        ) as process:
            assert process.stdout is not None
            self.line = process.stdout.readline()
            self.seconds = perf_counter() - begin
            self.after = process.stdout.readline() if last_line else ""
            process.kill()
        assert self.line, "the process ended without a window"


def loaded_by_program(folder: Path) -> Sequence[str]:
    """Every module that the program has imported when its window is painted, in order; proves that typing works."""
    start = Start(PROGRAM, folder=folder, last_line=True)
    said = json.loads(start.line)
    assert said["field_has_focus"]
    assert len(said["fingerprint"]) == 64
    assert start.after.strip() == "61"
    loaded: list[str] = said["loaded"]
    assert "clinicalc.gui.main_window" in loaded
    assert "PySide6.QtTest" not in loaded
    return [name for name in loaded if not name.startswith(LOADED_BY_QT)]


def test_start(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str], tmp_path: Path) -> None:
    modules = json.dumps(loaded_by_program(tmp_path))

    def start_all() -> tuple[float, float, float]:
        # turn about, so that a busy spell of the machine hits all three
        bare = Start(BARE, folder=tmp_path)
        imports = Start(WITH_IMPORTS, modules, folder=tmp_path)
        whole = Start(PROGRAM, folder=tmp_path)
        assert bare.line.strip() == imports.line.strip() == "painted"
        return bare.seconds, imports.seconds, whole.seconds

    start_all()
    rounds = [start_all() for _ in range(ROUNDS)]
    bare, imports, whole = (median(times) for times in zip(*rounds, strict=True))
    fastest = [min(times) for times in zip(*rounds, strict=True)]
    benchmark.extra_info |= {
        "bare_seconds": bare,
        "imports_seconds": imports,
        "whole_seconds": whole,
        "ratio_to_bare": whole / bare,
        "ratio_to_imports": whole / imports,
        "ratio_of_fastest_to_bare": fastest[2] / fastest[0],
        "ratio_of_fastest_to_imports": fastest[2] / fastest[1],
        "aim_to_bare": AIM_BARE,
        "aim_to_imports": AIM_IMPORTS,
    }
    with capsys.disabled():
        sys.stdout.write(
            f"\nstart to typing {whole:.3f} s: {whole / bare:.2f} times a bare window ({bare:.3f} s, aim {AIM_BARE}),"
            f" {whole / imports:.2f} times one with the same imports ({imports:.3f} s, aim {AIM_IMPORTS})\n"
        )
    benchmark(Start, PROGRAM, folder=tmp_path)
