"""Nothing about a patient is on disk after a session in which nothing was saved."""

import os
import subprocess
import sys
from pathlib import Path

import pytest

pytestmark = pytest.mark.gui

LABEL = "Zebedee Quillfeather"
VALUES = {"age": "61.731", "total_cholesterol": "187.419", "hdl_cholesterol": "47.853", "systolic_bp": "124.597"}
CHANGE = "113.827"
FOLDERS = ("HOME", "XDG_CONFIG_HOME", "XDG_CACHE_HOME", "XDG_DATA_HOME", "XDG_STATE_HOME", "XDG_RUNTIME_DIR", "TMPDIR")
SESSION = f"""
import sys
from pathlib import Path
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QApplication
from clinicalc.gui.application import run_window
from clinicalc.gui.main_window import MainWindow
from tests.gui.bedside_hands import ANSWERS_2008, answer, click, number_row, retype_number, type_number, type_text

application = QApplication(["clinicalc"])

def session():
    try:
        type_a_patient()
    finally:
        application.quit()

def type_a_patient():
    window = next(w for w in application.topLevelWidgets() if isinstance(w, MainWindow) and w.isVisible())
    window.open_path(Path(sys.argv[1]))
    for id, text in {VALUES!r}.items():
        type_number(window, id, text)
    for id, option in ANSWERS_2008.items():
        answer(window, id, option)
    type_text(window.values.label_row.edit, {LABEL!r})
    window.sheet.views.open(window.sheet.views.comparison)
    type_text(number_row(window, "systolic_bp").change.edit, {CHANGE!r})
    assert window.sheet.views.comparison.figure is not None
    type_text(number_row(window, "total_cholesterol").dated.edit, "2026-02-03")
    assert window.sheet.number.figure, window.sheet.sentence.text()
    assert window.state.entry.label == {LABEL!r}
    if len(sys.argv) > 2:
        from PySide6.QtWidgets import QFileDialog, QLineEdit
        folder = Path(sys.argv[2])
        dialogs = []
        def answer_dialog():
            shown = [w for w in application.topLevelWidgets() if isinstance(w, QFileDialog) and w.isVisible()]
            if not shown:  # on a busy machine it takes its time
                QTimer.singleShot(20, answer_dialog)
                return
            dialog = shown[0]
            dialogs.append(dialog.directory().absolutePath())
            dialog.setDirectory(str(folder))
            dialog.findChild(QLineEdit).setText("print.pdf")
            dialog.accept()
        for _ in range(2):
            QTimer.singleShot(20, answer_dialog)
            click(window.foot.save_pdf)
            assert window.foot.message.text() == "Saved as print.pdf.", window.foot.message.text()
            (folder / "print.pdf").unlink()
        assert len(dialogs) == 2 and not any({LABEL!r} in place for place in dialogs), dialogs
        click(window.foot.new_patient)
    print("typed", flush=True)

QTimer.singleShot(100, session)
sys.exit(run_window())
"""


def run_session(tmp_path: Path, *more: str) -> list[Path]:
    """Type a whole patient in a process of its own; returns every file it left in the folders it was given."""
    model = tmp_path / "model.json"
    model.write_bytes((Path(__file__).parents[2] / "example_models/general-cvd-2008-lipids.json").read_bytes())
    ours = {name: tmp_path / name for name in FOLDERS}
    for folder in ours.values():
        folder.mkdir(mode=0o700)
    environment = {name: value for name, value in os.environ.items() if name != "CLINICALC_SETTINGS"}
    environment |= {name: str(folder) for name, folder in ours.items()}
    environment |= {"QT_QPA_PLATFORM": "offscreen", "APPDATA": str(ours["HOME"]), "TEMP": str(ours["TMPDIR"])}
    done = subprocess.run(
        [sys.executable, "-c", SESSION, str(model), *more],
        capture_output=True,
        text=True,
        env=environment,
        timeout=120,
        check=False,
        cwd=Path(__file__).parents[2],
    )
    assert (done.stdout.strip(), done.returncode) == ("typed", 0), done.stderr
    return [path for folder in ours.values() for path in folder.rglob("*") if path.is_file()]


def words_of_the_patient() -> list[bytes]:
    """The label, its parts and every value, in the encodings that programs keep text in."""
    words = [LABEL, *LABEL.split(), *VALUES.values(), CHANGE, "2026-02-03"]
    return [word.encode(code) for word in words for code in ("utf-8", "utf-16-le", "utf-16-be")]


def assert_clean(tmp_path: Path, left: list[Path]) -> None:
    for path in left:
        content = path.read_bytes()
        place = str(path.relative_to(tmp_path))
        assert [w for w in words_of_the_patient() if w in content or w in place.encode()] == [], place


def test_session_leaves_nothing_of_the_patient_behind(tmp_path: Path) -> None:
    left = run_session(tmp_path)
    # the settings name the coefficient file that was opened: the walk does see what is written
    assert any(b"model.json" in path.read_bytes() for path in left)
    assert_clean(tmp_path, left)


def test_saved_print_leaves_no_trace_of_where_it_was_saved(tmp_path: Path) -> None:
    folder = tmp_path / LABEL
    folder.mkdir()
    left = run_session(tmp_path, str(folder))
    assert any(b"model.json" in path.read_bytes() for path in left)
    assert_clean(tmp_path, left)
