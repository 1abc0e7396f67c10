"""The computer's clock itself is moved, with Debian's faketime, and the command line is asked."""

import json
import os
import shutil
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from clinicalc.settings import Settings, write_settings
from tests.library.machines import Shelf, make_shelf

pytestmark = pytest.mark.skipif(
    shutil.which("faketime") is None and os.environ.get("CI") != "true",  # on the CI it fails
    reason="Debian’s faketime is not installed here",
)


@pytest.fixture
def shelf(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Shelf:
    """A library with one model in use, pinned in the settings of a machine of the test's own."""
    shelf = make_shelf(tmp_path / "library")
    monkeypatch.setenv("CLINICALC_SETTINGS", str(tmp_path / "machine"))
    write_settings(Settings(library=str(shelf.place), practice_key=shelf.practice.key.id))
    return shelf


def list_at(moment: str) -> Any:
    """What `clinicalc library list --json` says when the computer believes that it is `moment` (UTC)."""
    done = subprocess.run(
        ["faketime", moment, sys.executable, "-m", "clinicalc", "library", "list", "--json"],
        env={**os.environ, "TZ": "UTC"},
        capture_output=True,
        text=True,
        timeout=120,
    )
    assert not done.stderr, done.stderr
    return json.loads(done.stdout)


def standing_at(moment: str) -> str:
    """Where the one model stands."""
    (model,) = list_at(moment)["models"]
    return str(model["standing"])


def test_a_clock_set_back_a_year_gives_no_number(shelf: Shelf) -> None:
    assert standing_at("2026-12-01 12:00:00") == "in_use"
    assert standing_at("2025-12-01 12:00:00") == "refused"
    assert "the library was last opened on this machine at 1 December 2026, 12:00" in json.dumps(
        list_at("2025-12-01 12:00:00"), ensure_ascii=False
    )
    assert standing_at("2026-12-01 12:05:00") == "in_use"


def test_a_clock_set_back_does_not_stretch_a_review_date(shelf: Shelf) -> None:
    assert standing_at("2027-06-30 23:50:00") == "in_use"
    assert standing_at("2027-07-01 00:05:00") == "review_overdue"
    assert standing_at("2027-06-30 12:00:00") != "in_use"


def test_the_hours_without_the_library_run_by_the_clock(shelf: Shelf) -> None:
    assert standing_at("2026-12-01 12:00:00") == "in_use"
    shelf.place.rename(shelf.place.with_name("elsewhere"))
    assert standing_at("2026-12-02 11:58:00") == "in_use"
    assert standing_at("2026-12-02 12:02:00") == "refused"
    assert standing_at("2026-12-02 11:50:00") == "refused"
