"""Where the settings lie, on each kind of machine."""

import os
from pathlib import Path

import pytest

from clinicalc.errors import UsageError
from clinicalc.settings import read_settings, settings_folder
from clinicalc.settings.folder import VARIABLE

HOME = Path("/home/tarnwick")


@pytest.fixture(autouse=True)
def _home(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("HOME", str(HOME))
    monkeypatch.setenv("USERPROFILE", str(HOME))


@pytest.mark.parametrize(
    ("platform", "environment", "folder"),
    [
        ("linux", {}, HOME / ".config" / "clinicalc"),
        ("linux", {"XDG_CONFIG_HOME": os.path.abspath("/etc/own")}, Path("/etc/own/clinicalc")),
        # XDG Base Directory Specification 0.8 (from memory): a relative path is invalid and to be ignored
        ("linux", {"XDG_CONFIG_HOME": "own"}, HOME / ".config" / "clinicalc"),
        ("linux", {"XDG_CONFIG_HOME": ""}, HOME / ".config" / "clinicalc"),
        ("win32", {"APPDATA": "/roaming"}, Path("/roaming/clinicalc")),
        ("win32", {}, HOME / "AppData" / "Roaming" / "clinicalc"),
        ("darwin", {"XDG_CONFIG_HOME": "/own"}, HOME / "Library" / "Application Support" / "clinicalc"),
    ],
)
def test_each_system_has_its_place(platform: str, environment: dict[str, str], folder: Path) -> None:
    assert settings_folder(environment, platform) == folder.absolute()


@pytest.mark.parametrize("platform", ["linux", "win32", "darwin"])
def test_the_variable_goes_before_all_others(platform: str) -> None:
    assert settings_folder({VARIABLE: "/kept", "APPDATA": "/a", "XDG_CONFIG_HOME": "/x"}, platform) == Path("/kept")
    assert settings_folder({VARIABLE: "~/kept"}, platform) == HOME / "kept"


def test_the_environment_of_the_process_is_asked(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv(VARIABLE, str(tmp_path))
    assert settings_folder() == tmp_path


def test_without_a_home_the_variable_is_named(monkeypatch: pytest.MonkeyPatch) -> None:
    def have_none() -> Path:
        raise RuntimeError("Could not determine home directory.")  # what pathlib says then

    monkeypatch.setattr(Path, "home", have_none)
    monkeypatch.delenv(VARIABLE, raising=False)
    monkeypatch.delenv("XDG_CONFIG_HOME", raising=False)
    monkeypatch.delenv("APPDATA", raising=False)
    with pytest.raises(UsageError, match=VARIABLE):
        settings_folder()
    assert VARIABLE in read_settings().problems[0]
