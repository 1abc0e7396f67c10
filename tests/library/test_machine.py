"""This machine: what its settings say of the library, and that a broken line never makes it one without."""

from datetime import UTC, datetime
from pathlib import Path

import pytest

from clinicalc.errors import LibraryError
from clinicalc.library.machine import Machine, say_moment, this_machine, uses_library
from clinicalc.settings import FILE_NAME, LIBRARY_VARIABLE, Settings, write_settings

KEY = "0123456789abcdef" * 4


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A settings folder of the test's own, and no variable."""
    monkeypatch.setenv("CLINICALC_SETTINGS", str(tmp_path))
    monkeypatch.delenv(LIBRARY_VARIABLE, raising=False)
    return tmp_path


def test_a_machine_is_what_its_settings_say(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    place = folder / "library"
    write_settings(Settings(library=str(place), practice_key=KEY))
    assert this_machine() == Machine(folder, place, KEY)
    monkeypatch.setenv(LIBRARY_VARIABLE, str(folder / "another"))
    assert this_machine().place == folder / "another"
    assert this_machine(folder / "third").place == folder / "third"
    assert uses_library()


def test_a_moment_is_said_in_words_on_this_machines_clock() -> None:
    assert say_moment(datetime(2027, 5, 3, 9, 5).astimezone(UTC)) == "3 May 2027, 09:05"
    assert say_moment(datetime(2026, 12, 31, 23, 59).astimezone()) == "31 December 2026, 23:59"


def test_a_machine_without_a_library_says_so() -> None:
    assert not uses_library()
    with pytest.raises(LibraryError, match="this machine uses no model library"):
        this_machine()


def test_a_machine_that_has_not_joined_counts_nothing(folder: Path) -> None:
    assert uses_library(folder / "library")
    with pytest.raises(LibraryError, match="this machine has not joined the library"):
        this_machine(folder / "library")


@pytest.mark.parametrize("line", ["practice_key = 12", 'practice_key = "' + "0" * 63 + '"'])
def test_a_broken_key_is_named_and_is_no_key(folder: Path, line: str) -> None:
    (folder / FILE_NAME).write_text(f'library = "{folder / "library"}"\n{line}\n', encoding="utf-8")
    with pytest.raises(LibraryError, match=r"settings\.toml, line 2: practice_key"):
        this_machine()


def test_settings_that_cannot_be_read_do_not_make_a_machine_one_without_a_library(folder: Path) -> None:
    (folder / FILE_NAME).write_text("library = \n", encoding="utf-8")
    assert not uses_library()
    (folder / f"memory-{KEY}.json").write_text("{}", encoding="utf-8")
    assert uses_library()
    with pytest.raises(LibraryError, match=r"settings\.toml, line 1: this is not TOML"):
        this_machine()
