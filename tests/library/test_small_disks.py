"""An import that breaks off at any file or byte leaves everything as it was."""

import json
import os
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

from tests.library.small_disks import Told
from tests.packaging.checkout import ROOT


def test_an_import_is_whole_or_leaves_no_trace_wherever_it_breaks_off(tmp_path: Path) -> None:
    program = shutil.which("unshare")
    allowed = program and subprocess.run([program, "-rm", "mount", "-t", "tmpfs", "tmpfs", tmp_path]).returncode == 0
    if not program or not allowed:
        missing = "this system lets nobody have mounts of their own (unshare -rm)"
        assert os.environ.get("CI") != "true", missing
        pytest.skip(missing)
    done = subprocess.run(
        [program, "-rm", sys.executable, "-m", "tests.library.small_disks", str(tmp_path)],
        cwd=ROOT,
        capture_output=True,
        text=True,
        timeout=120,
    )
    assert done.returncode == 0, done.stderr
    told = Told(**json.loads(done.stdout))
    assert told.changed == []
    assert told.done > 10
    assert min(told.broken_off.values()) > 1, told.broken_off
    for sentence in told.said:
        assert "the bundle was not imported, and nothing was changed. There is no room left on the disk" in sentence
        assert ".clinicalc-" not in sentence
