"""The value itself: defaults, what each setting may be, and the list of files opened lately."""

import os
from dataclasses import replace
from pathlib import Path

import pytest

from clinicalc.errors import UsageError
from clinicalc.settings import MOST_RECENT, Paper, Settings, ThemeChoice


def test_the_defaults() -> None:
    assert Settings() == Settings(ThemeChoice.SYSTEM, (), "", Paper.A4, 0.95)


@pytest.mark.parametrize("level", [0.5, 0.9, 0.999])
def test_levels_of_which_a_band_is_made_are_taken(level: float) -> None:
    assert Settings(level=level).level == level


@pytest.mark.parametrize("level", [0.0, 0.4999, 0.9991, 1.0, 95.0, float("nan"), float("inf"), -0.95])
def test_other_levels_are_refused(level: float) -> None:
    with pytest.raises(UsageError, match=r"level \S+ lies outside 0\.5 to 0\.999\."):
        Settings(level=level)


def test_a_level_in_per_cent_is_answered_with_the_likely_slip() -> None:
    with pytest.raises(UsageError, match=r"95\u202f% is written 0\.95\.$"):
        Settings(level=95)


@pytest.mark.parametrize("character", ["\n", "\x00", "\x7f", "\u202e", "\u200b", "\u2028", "\ud800"])
def test_a_practice_with_what_is_not_seen_is_refused(character: str) -> None:
    with pytest.raises(UsageError, match=f"practice holds U\\+{ord(character):04X}"):
        Settings(practice=f"Tarnwick {character}Northgate")


def test_a_practice_has_80_characters_at_most() -> None:
    assert Settings(practice="x" * 80)
    with pytest.raises(UsageError, match="practice has 81 characters, and at most 80"):
        Settings(practice="x" * 81)


@pytest.mark.parametrize("path", ["", "a\0b", "\udcff.json"])
def test_what_cannot_be_a_path_is_refused(path: str) -> None:
    with pytest.raises(UsageError, match="recent_files"):
        Settings(recent_files=(path,))


def test_the_newest_file_comes_first_and_once() -> None:
    settings = Settings()
    for name in ("one", "two", "three", "one"):
        settings = settings.with_recent(Path("/models") / name)
    assert settings.recent_files == tuple(os.path.abspath(f"/models/{name}") for name in ("one", "three", "two"))


def test_the_oldest_of_too_many_files_leaves() -> None:
    settings = Settings()
    for number in range(MOST_RECENT + 2):
        settings = settings.with_recent(Path(f"/models/{number}.json"))
    assert [Path(path).stem for path in settings.recent_files] == ["9", "8", "7", "6", "5", "4", "3", "2"]
    with pytest.raises(UsageError, match="recent_files holds 9 paths, and at most 8"):
        replace(settings, recent_files=(*settings.recent_files, "one more"))


def test_a_relative_path_is_remembered_whole(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    assert Settings().with_recent(Path("model.json")).recent_files == (str(tmp_path / "model.json"),)


def test_a_path_that_is_no_text_is_left_out() -> None:
    settings = Settings(practice="Tarnwick Northgate")
    assert settings.with_recent(Path("/models/\udcff.json")) == settings
