"""Where the settings lie on this machine."""

import os
import sys
from collections.abc import Mapping
from pathlib import Path

from clinicalc.errors import UsageError

VARIABLE = "CLINICALC_SETTINGS"
"""Environment variable that names the folder outright."""
_NAME = "clinicalc"


def settings_folder(environment: Mapping[str, str] | None = None, platform: str = sys.platform) -> Path:
    """The folder of the settings file, absolute; it need not exist yet.

    CLINICALC_SETTINGS where it is set; else APPDATA on Windows, Library/Application Support on a Mac, and elsewhere
    XDG_CONFIG_HOME or ~/.config (XDG Base Directory Specification 0.8: a relative path there is ignored).
    Raises UsageError where none of these is known.
    """
    given = os.environ if environment is None else environment
    if given.get(VARIABLE):
        return Path(given[VARIABLE]).expanduser().absolute()
    if platform == "win32":
        roaming = given.get("APPDATA")
        return (Path(roaming) if roaming else _home() / "AppData" / "Roaming").absolute() / _NAME
    if platform == "darwin":
        return _home() / "Library" / "Application Support" / _NAME
    stated = Path(given.get("XDG_CONFIG_HOME", ""))
    return (stated if stated.is_absolute() else _home() / ".config") / _NAME


def _home() -> Path:
    try:
        return Path.home().absolute()
    except RuntimeError:
        raise UsageError(
            "there is no place for settings.",
            why="This user has no home folder that the computer knows of.",
            do=f"Name a folder in the environment variable {VARIABLE}.",
        ) from None
