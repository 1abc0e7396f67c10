"""The guide's page on the library, run as it stands."""

import os
import re
import shlex
import shutil
from pathlib import Path

import pytest

from clinicalc.library.choices import MOST_YEARS
from clinicalc.library.finding import LEAST_DIGITS
from clinicalc.operations.guide import read_page_source
from clinicalc.resources import find_shipped
from tests.cli.calling import call

PAGE = read_page_source("library")


def _commands(kind: str) -> list[list[str]]:
    blocks = re.findall(rf"^```{kind}\n(.*?)^```", PAGE, re.MULTILINE | re.DOTALL)
    lines = "\n".join(blocks).replace("\\\n", " ").split("\n")
    return [words for words in map(shlex.split, lines) if words]


def test_the_commands_run_in_their_order(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    shutil.copytree(str(find_shipped("example_models")), tmp_path / "example_models")
    monkeypatch.chdir(tmp_path)
    monkeypatch.setenv("CLINICALC_SETTINGS", os.fspath(tmp_path / "settings"))
    monkeypatch.setenv("CLINICALC_PASSPHRASE", "four words nobody guesses")
    monkeypatch.delenv("CLINICALC_LIBRARY", raising=False)
    for words in _commands("sh"):
        ended = call(*words[1:])
        assert (ended.status, bool(ended.out)) == (0, True), (words, ended.err)

    (file,) = (tmp_path / "library" / "models").iterdir()
    told = {words[2]: words[1:] for words in _commands("text") if words[1] == "library"}
    (approve, hold, release, withdraw) = (told[verb] for verb in ("approve", "hold", "release", "withdraw"))
    typed = [file.stem if word.startswith("5f0c") else word for word in approve]
    assert typed != approve
    for words in (typed, hold, release, withdraw):
        ended = call(*words)
        assert (ended.status, ended.err) == (0, ""), words


def test_the_page_says_the_limits_there_are() -> None:
    assert MOST_YEARS == 5
    assert "at most five years ahead" in PAGE
    assert f"the first {LEAST_DIGITS} digits of its fingerprint" in PAGE
