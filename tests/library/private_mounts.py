"""Processes with mounts of their own, for disks that end with them."""

import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from tests.packaging.checkout import ROOT


def run_with_own_mounts(module: str, folder: Path, *words: str) -> str:
    """What `python -m module words folder` writes where it may mount what it likes; skipped where nobody may.

    On the machine that checks every change nobody may skip it.
    """
    program = shutil.which("unshare")
    allowed = program and subprocess.run([program, "-rm", "mount", "-t", "tmpfs", "tmpfs", folder]).returncode == 0
    if not program or not allowed:
        missing = "this system lets nobody have mounts of their own (unshare -rm)"
        if os.environ.get("CI") == "true":
            pytest.fail(missing)
        pytest.skip(missing)
    done = subprocess.run(
        [program, "-rm", sys.executable, "-m", module, *words, str(folder)],
        cwd=ROOT,
        capture_output=True,
        text=True,
        timeout=120,
    )
    assert done.returncode == 0, done.stderr
    return done.stdout
