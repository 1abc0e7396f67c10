"""Starting: what is loaded, what is said when something is missing, and that Qt lives through many calls."""

import importlib.util
import os
import subprocess
import sys
from pathlib import Path

import pytest

from clinicalc.gui import preflight

pytestmark = pytest.mark.gui

HEAVY = ("pandas", "scipy", "statsmodels", "reportlab")


def run_python(program: str, **variables: str) -> subprocess.CompletedProcess[str]:
    environment = os.environ | {"QT_QPA_PLATFORM": "offscreen"} | variables
    return subprocess.run(
        [sys.executable, "-c", program], capture_output=True, text=True, env=environment, timeout=120, check=False
    )


def test_bedside_start_loads_nothing_heavy() -> None:
    rooms = ["clinicalc.gui.application", "clinicalc.gui.main_window", "clinicalc.operations.bedside"]
    rooms += [room for room in ("clinicalc.cli",) if importlib.util.find_spec(room)]
    program = f"import sys, {', '.join(rooms)}; print([m for m in {HEAVY!r} if m in sys.modules])"
    done = run_python(program)
    assert (done.stdout.strip(), done.stderr, done.returncode) == ("[]", "", 0)


def test_window_with_a_number_loads_nothing_heavy() -> None:
    program = f"""
import sys
from PySide6.QtWidgets import QApplication
from clinicalc.gui.application import dress
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.bedside import open_example
from clinicalc.assessment.entry import entry_from_texts
application = QApplication([])
dress(application)
window = MainWindow()
texts = dict(sex="female", age="61", total_cholesterol="180", hdl_cholesterol="47", systolic_bp="124",
             bp_treated="no", smoker="yes", diabetes="no", prior_cvd="no")
window.use_model(open_example("general-cvd-2008-lipids.json"), entry_from_texts(texts))
print(window.sheet.number.figure, [m for m in {HEAVY!r} if m in sys.modules])
"""
    assert run_python(program).stdout.strip() == "10.5 []"


def test_window_opens_on_a_patient_and_closes(tmp_path: Path) -> None:
    program = """
import sys
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
from clinicalc.gui.application import run_window
from clinicalc.gui.main_window import MainWindow
from clinicalc.operations.demonstration import demo_case
application = QApplication([])
def look():
    QTimer.singleShot(0, application.quit)
    window = next(w for w in application.topLevelWidgets() if isinstance(w, MainWindow) and w.isVisible())
    print(window.windowTitle(), "|", window.sheet.number.figure != "", type(sys.excepthook).__name__)
QTimer.singleShot(100, look)
case = demo_case()
print(run_window(case.model, case.entry))
"""
    # a runtime folder of its own: another window open on this machine would make this one the second
    done = run_python(program, XDG_RUNTIME_DIR=str(tmp_path), CLINICALC_SETTINGS=str(tmp_path))
    title, _, rest = done.stdout.partition("|")
    assert title.startswith("Patient: ")
    assert rest.split() == ["True", "ExceptionHook", "0"]


def test_garbage_is_collected_from_the_first_picture_on(tmp_path: Path) -> None:
    """Nothing is while the window is made, and what was made for it is never looked at again."""
    program = """
import gc
import clinicalc.__main__ as start
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
from clinicalc.gui import application
class Watched(application.MainWindow):
    def __init__(self, *words, **names):
        print(gc.isenabled())
        super().__init__(*words, **names)
        QTimer.singleShot(100, self.look)
    def look(self):
        print(gc.isenabled(), gc.get_freeze_count() > 10_000)
        QApplication.quit()
application.MainWindow = Watched
print(start._open_window())
"""
    done = run_python(program, XDG_RUNTIME_DIR=str(tmp_path), CLINICALC_SETTINGS=str(tmp_path))
    assert done.stdout.split() == ["False", "True", "True", "0"]


def test_style_is_the_same_on_every_desktop() -> None:
    program = """
from clinicalc.gui.text_size import start_application
application = start_application(["clinicalc"])
print(application.style().objectName(), application.arguments())
"""
    assert run_python(program, QT_STYLE_OVERRIDE="windows").stdout.strip() == "fusion ['clinicalc']"


def test_preflight_loads_without_qt() -> None:
    """Where PySide6 is not installed the module still loads and says so."""
    program = """
import sys
sys.modules["PySide6"] = None
from clinicalc.gui import preflight
print(preflight.check_platform())
"""
    done = run_python(program)
    assert "PySide6, which is not installed" in done.stdout
    assert done.stderr == ""


@pytest.mark.parametrize(
    ("variables", "seen"),
    [
        ({}, False),
        ({"DISPLAY": ":0"}, True),
        ({"WAYLAND_DISPLAY": "wayland-0"}, True),
        ({"DISPLAY": ":0", "QT_QPA_PLATFORM": "offscreen"}, False),
        ({"DISPLAY": ":0", "QT_QPA_PLATFORM": "minimal"}, False),
        ({"QT_QPA_PLATFORM": "xcb"}, False),
        ({"DISPLAY": ":0", "QT_QPA_PLATFORM": "xcb"}, True),
        ({"QT_QPA_PLATFORM": "linuxfb"}, True),
    ],
)
@pytest.mark.skipif(not sys.platform.startswith("linux"), reason="other systems always have a screen")
def test_a_screen_is_seen(monkeypatch: pytest.MonkeyPatch, variables: dict[str, str], seen: bool) -> None:
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    for name, value in variables.items():
        monkeypatch.setenv(name, value)
    assert preflight.has_screen() is seen


def test_missing_libraries_are_named_with_what_to_type(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("QT_QPA_PLATFORM", "offscreen")
    sentence = preflight.explain_import(ImportError("libEGL.so.1: cannot open shared object file"), "linux")
    assert "libEGL.so.1" in sentence
    assert sentence.endswith(
        "sudo apt-get install libglib2.0-0 libgl1 libegl1 libxkbcommon0 libdbus-1-3 libfontconfig1"
    )


def test_missing_plugin_libraries_are_found_without_starting_qt() -> None:
    libraries = {"libc.so.6": "libc6", "libno-such-thing.so.9": "libno-such-thing9"}
    assert preflight.missing_packages(libraries) == ("libno-such-thing9",)


def test_no_screen_is_said_in_words(monkeypatch: pytest.MonkeyPatch) -> None:
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    if sys.platform.startswith("linux"):
        assert "no screen" in (preflight.check_platform() or "")


def test_offscreen_is_fine(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("QT_QPA_PLATFORM", "offscreen")
    assert preflight.check_platform() is None
