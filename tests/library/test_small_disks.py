"""An import that breaks off at any file or byte leaves everything as it was."""

import json
from pathlib import Path

from tests.library.private_mounts import run_with_own_mounts
from tests.library.small_disks import Told


def test_an_import_is_whole_or_leaves_no_trace_wherever_it_breaks_off(tmp_path: Path) -> None:
    told = Told(**json.loads(run_with_own_mounts("tests.library.small_disks", tmp_path)))
    assert told.changed == []
    assert told.done > 10
    assert min(told.broken_off.values()) > 1, told.broken_off
    for sentence in told.said:
        assert "the bundle was not imported, and nothing was changed. There is no room left on the disk" in sentence
        assert ".clinicalc-" not in sentence
