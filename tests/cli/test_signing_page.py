"""The guide's page on keys and signatures, run as it stands."""

import os
import re
import shlex
import shutil
from pathlib import Path

import pytest

from clinicalc.library.key_files import COST, read_card
from clinicalc.library.passphrases import SHORTEST
from clinicalc.operations.guide import read_page_source
from clinicalc.resources import find_shipped
from tests.cli.calling import call

PAGE = read_page_source("signing")


@pytest.fixture
def here(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A folder with the shipped files, settings of its own, and a passphrase for scripts."""
    shutil.copytree(str(find_shipped("example_models")), tmp_path / "example_models")
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
    monkeypatch.setenv("CLINICALC_PASSPHRASE", "four words nobody guesses")
    monkeypatch.setenv("CLINICALC_NEW_PASSPHRASE", "five words that nobody guesses")
    return tmp_path


def test_the_commands_run_in_their_order(here: Path) -> None:
    fenced = re.findall(r"^```sh\n(.*?)^```", PAGE, re.MULTILINE | re.DOTALL)
    lines = [line for block in fenced for line in block.splitlines()]
    assert len(lines) == 5
    for line in lines:
        ended = call(*shlex.split(line)[1:])
        assert (ended.status, bool(ended.out)) == (0, True), line

    id = read_card(here / "press.key").id
    add, revoke = re.findall(r"^clinicalc (trust (?:add|revoke) .+)$", PAGE, re.MULTILINE)
    assert call(*shlex.split(re.sub('--id ".*"', f"--id {id}", add))).status == 0
    assert call(*shlex.split(re.sub("[0-9a-f]{12}", id[:12], revoke))).status == 0
    (change,) = re.findall(r"`clinicalc (trust change-passphrase [^`]+)`", PAGE)
    assert call(*shlex.split(change)).status == 0


def test_the_page_says_the_limits_there_are() -> None:
    assert f"at least {SHORTEST} characters" in PAGE
    assert f"{128 * COST * 8 // 2**20} MB" in PAGE  # RFC 7914, section 2: 128 * r * N bytes
    assert "that is final" in PAGE
