"""R on this machine, for tests that ask it; they are skipped where it or its package survival is not there."""

import os
import shutil
import subprocess
from functools import cache
from pathlib import Path

import pytest

SAY = 'say <- function(numbers) cat(formatC(numbers, digits = 17, format = "g"), sep = "\\n")\n'
_MARK = "-- figures --"


@cache
def has_survival() -> bool:
    """Whether R and its package survival are here."""
    program = shutil.which("Rscript")
    return (
        program is not None
        and subprocess.run([program, "-e", "library(survival)"], capture_output=True).returncode == 0
    )


needs_r = pytest.mark.skipif(not has_survival(), reason="R with its package survival is not on this machine")


def run_r(folder: Path, lines: str, asked: str = "") -> list[float]:
    """Run R's lines in a folder, and what is asked after them; the numbers that `asked` says with say()."""
    script = folder / "lines.R"
    script.write_text(f'{lines}\ncat("\\n{_MARK}\\n")\n{SAY}{asked}', encoding="utf-8")
    done = subprocess.run(
        ["Rscript", "--vanilla", script.name],
        cwd=folder,
        capture_output=True,
        text=True,
        env=os.environ | {"LC_ALL": "C"},
    )
    assert done.returncode == 0, done.stderr
    return [float(line) for line in done.stdout.partition(f"{_MARK}\n")[2].split()]
