"""The steps of a founding without a window: what is refused before anything is made."""

from pathlib import Path

import pytest

from clinicalc.errors import FileNotWritten, KeyRefused, LibraryError, LibraryUnreachable, UsageError
from clinicalc.operations.founding_steps import (
    FoundingPlan,
    check_new_place,
    check_practice,
    found,
    keep_practice_name,
    look_at_key,
    look_at_machine,
)
from clinicalc.settings import Settings, read_settings, settings_folder, write_settings
from tests.library.keys_at_hand import key_file


@pytest.fixture(autouse=True)
def _own_settings(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setenv("CLINICALC_SETTINGS", str(tmp_path / "settings"))


@pytest.mark.parametrize("name", ["", "   ", "x" * 81, "Tarnwick\u200bNorthgate"])
def test_a_name_that_cannot_be_kept_or_printed(name: str) -> None:
    with pytest.raises(UsageError):
        check_practice(name)


def test_a_name_is_kept_without_the_spaces_at_its_ends() -> None:
    assert check_practice("  Tarnwick Northgate ") == "Tarnwick Northgate"


def test_a_new_or_an_empty_folder_will_do_and_is_left_as_it_is(tmp_path: Path) -> None:
    (tmp_path / "empty").mkdir()
    check_new_place(tmp_path / "empty")
    check_new_place(tmp_path / "new")
    assert not list((tmp_path / "empty").iterdir())
    assert [path.name for path in tmp_path.iterdir()] == ["empty"]


def test_places_that_will_not_do(tmp_path: Path) -> None:
    (tmp_path / "letter.txt").write_text("x")
    with pytest.raises(UsageError, match="not the full path"):
        check_new_place(Path("models"))
    with pytest.raises(LibraryError, match="is not empty"):
        check_new_place(tmp_path)
    with pytest.raises(LibraryUnreachable, match="not a folder"):
        check_new_place(tmp_path / "letter.txt")
    with pytest.raises(LibraryError, match="is not there"):
        check_new_place(tmp_path / "no" / "models")


def test_a_key_is_looked_at_where_it_is_to_be(tmp_path: Path) -> None:
    made = key_file(tmp_path / "osei.key")
    library = tmp_path / "library"
    assert look_at_key(tmp_path / "osei.key", library) == made
    assert look_at_key(tmp_path / "new.key", library) is None
    assert not (tmp_path / "new.key").exists()
    with pytest.raises(KeyRefused, match="never kept inside"):
        look_at_key(library / "new.key", library)
    with pytest.raises(FileNotWritten, match="no file can be written there"):
        look_at_key(tmp_path / "no" / "new.key", library)


def test_a_plan_that_is_not_whole_makes_nothing(tmp_path: Path) -> None:
    plan = FoundingPlan("Tarnwick Northgate", tmp_path / "library")
    assert not plan.is_whole
    with pytest.raises(UsageError, match="still missing"):
        found(plan, tmp_path / "practice.key", "four words nobody guesses")
    assert not list(tmp_path.iterdir())


def test_the_name_for_prints_is_taken_where_there_is_none(tmp_path: Path) -> None:
    keep_practice_name("Tarnwick Northgate")
    assert read_settings().settings.practice == "Tarnwick Northgate"
    keep_practice_name("Tarnwick Southgate")
    assert read_settings().settings.practice == "Tarnwick Northgate"


def test_settings_that_cannot_be_read_are_not_written_over() -> None:
    settings_folder().mkdir()
    (settings_folder() / "settings.toml").write_text("practice = \n")
    keep_practice_name("Tarnwick Northgate")
    assert (settings_folder() / "settings.toml").read_text() == "practice = \n"
    assert look_at_machine().problems


def test_how_far_a_machine_is(tmp_path: Path) -> None:
    assert not look_at_machine().has_joined
    write_settings(Settings(library=str(tmp_path), practice="Tarnwick Northgate"))
    stands = look_at_machine()
    assert (stands.place, stands.has_joined, stands.practice) == (tmp_path, False, "Tarnwick Northgate")
    write_settings(Settings(library=str(tmp_path), practice_key="0" * 64))
    assert look_at_machine().has_joined
