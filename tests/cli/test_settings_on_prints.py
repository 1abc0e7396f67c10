"""What of the settings a command uses: name and letterhead on its print. Preferred units are the window's alone."""

from pathlib import Path

import pytest

from clinicalc.settings import PreferredUnit, Settings, write_settings
from clinicalc.settings.folder import VARIABLE
from tests.cli.calling import LIPIDS, WOMAN_61, call
from tests.report.printing import pages_of

LINES = ("Tarnwick Northgate Practice", "3 Quay Lane, Tarnwick")


@pytest.fixture(autouse=True)
def _own_settings(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv(VARIABLE, str(tmp_path / "settings"))


def test_a_print_bears_the_letterhead_and_is_checked_after_it_has_changed(tmp_path: Path) -> None:
    write_settings(Settings(practice="Tarnwick Northgate", letterhead=LINES))
    pdf = tmp_path / "print.pdf"
    assert call("report", LIPIDS, *WOMAN_61, "--out", str(pdf)).status == 0
    pages = pages_of(pdf.read_bytes())
    # the page between them, with what the rebuilt band assumes, bears the patient label as ever
    assert [page.startswith(" ".join(LINES)) for page in pages] == [True, False, True]
    write_settings(Settings(practice="Another", letterhead=("Elsewhere",)))
    ended = call("report", "--check", str(pdf), "--model", LIPIDS)
    assert ended.status == 0, ended.out


def test_a_print_bears_the_name_where_there_is_no_letterhead(tmp_path: Path) -> None:
    write_settings(Settings(practice="Tarnwick Northgate"))
    pdf = tmp_path / "print.pdf"
    assert call("report", LIPIDS, *WOMAN_61, "--out", str(pdf)).status == 0
    first, _, last = pages_of(pdf.read_bytes())
    assert first.startswith("Tarnwick Northgate For the clinician")
    assert last.startswith("Tarnwick Northgate For the patient")


def test_a_preferred_unit_changes_no_command() -> None:
    """A number without a unit is in the file's unit, whatever a window would begin with."""
    bare = [word.replace(" mg/dL", "") for word in WOMAN_61]
    before = call("assess", LIPIDS, *bare, "--json").record
    write_settings(Settings(units=(PreferredUnit("total_cholesterol", "mmol/L"),)))
    after = call("assess", LIPIDS, *bare, "--json").record
    assert before == after
    assert before["probability"] is not None
