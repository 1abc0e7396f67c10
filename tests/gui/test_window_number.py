"""Two windows are told apart, by numbers that a crashed one gives back."""

import subprocess
import sys
from pathlib import Path

import pytest
from pytestqt.qtbot import QtBot

from clinicalc.assessment.model import Model
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.window_number import WindowNumber

pytestmark = [
    pytest.mark.gui,
    # the screenless platform says so when a menu or a window beside ours opens
    pytest.mark.qt_log_ignore("This plugin does not support raise", "This plugin does not support grabbing"),
]


def test_numbers_of_windows_are_lowest_free_ones(tmp_path: Path) -> None:
    first, second = WindowNumber(tmp_path), WindowNumber(tmp_path)
    assert (first.number, second.number) == (1, 2)
    first.let_go()
    third = WindowNumber(tmp_path)
    assert third.number == 1
    assert len(list(tmp_path.iterdir())) == 2
    second.let_go()
    third.let_go()
    assert list(tmp_path.iterdir()) == []


def test_another_process_counts_and_a_dead_one_does_not(tmp_path: Path) -> None:
    program = f"""
import sys, os
from pathlib import Path
from clinicalc.gui.window_number import WindowNumber
number = WindowNumber(Path({str(tmp_path)!r}))
print(number.number, flush=True)
sys.stdin.read()
os._exit(0)  # without letting go, as in a crash
"""
    with subprocess.Popen(
        [sys.executable, "-c", program], stdin=subprocess.PIPE, stdout=subprocess.PIPE, text=True
    ) as other:
        assert other.stdout is not None
        assert other.stdin is not None
        assert other.stdout.readline().strip() == "1"
        ours = WindowNumber(tmp_path)
        assert ours.number == 2
        other.stdin.close()
        other.wait(30)
    again = WindowNumber(tmp_path)
    assert again.number == 1
    ours.let_go()
    again.let_go()


def test_where_no_lock_can_be_made_the_window_opens_all_the_same(tmp_path: Path) -> None:
    assert WindowNumber(tmp_path / "no such folder").number == 1


def test_second_window_says_so_in_title_and_bar(qtbot: QtBot, lipids: Model) -> None:
    window = MainWindow(number=2)
    qtbot.addWidget(window)
    assert window.windowTitle() == "Patient 2"
    window.use_model(lipids)
    assert window.windowTitle() == "Patient 2: General cardiovascular disease, lipid form"
    assert window.page_bar.tabs.accessibleTabName(0) == "Patient 2, key F2"
