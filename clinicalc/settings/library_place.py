"""Where the practice's model library lies, and what its place and the pinned key may be."""

import os
import re
from collections.abc import Mapping
from pathlib import Path

from clinicalc.errors import UsageError
from clinicalc.settings.faults import fault_of_unseen

LIBRARY_VARIABLE = "CLINICALC_LIBRARY"
"""Environment variable that names the library folder in place of the setting."""
_LONGEST_PLACE = 1000
_KEY_ID = re.compile(r"[0-9a-f]{64}")


def library_place(
    stated: str, option: str | Path | None = None, environment: Mapping[str, str] | None = None
) -> Path | None:
    """The library folder, absolute: the option, else CLINICALC_LIBRARY, else the setting; None where nothing says it.

    Option and variable may be relative to the current folder. Raises UsageError where the one that decides is no path.
    """
    given = os.environ if environment is None else environment
    for name, text in (("--library", option), (LIBRARY_VARIABLE, given.get(LIBRARY_VARIABLE)), ("library", stated)):
        if text is None or (text == "" and name != "--library"):
            continue
        if not os.fspath(text) or (unseen := fault_of_unseen(os.fspath(text))):
            raise UsageError(f"{name} holds {unseen}" if os.fspath(text) else f"{name} names no folder.")
        try:
            return Path(text).expanduser().absolute()
        except RuntimeError:
            raise UsageError(f"{name}: the computer knows no home folder for {os.fspath(text)}.") from None
    return None


def fault_of_library(place: str) -> str:
    """Why the text cannot be the setting `library`, or ""."""
    if len(place) > _LONGEST_PLACE:
        return f"library has {len(place)} characters, and at most {_LONGEST_PLACE} are taken."
    unseen = fault_of_unseen(place)
    if unseen:
        return f"library holds {unseen}"
    if place and not Path(place).is_absolute():
        # a relative place would be another folder for every folder that the program is started in
        return f"library {place[:40]} is not the full path of a folder; a full path begins at the drive or the root."
    return ""


def fault_of_practice_key(key: str) -> str:
    """Why the text cannot be the setting `practice_key`, or ""."""
    if not key or _KEY_ID.fullmatch(key):
        return ""
    if _KEY_ID.fullmatch("".join(key.split()).lower()):
        return "practice_key is written without spaces and in small letters."
    return f"practice_key has 64 digits from 0 to 9 and a to f, and this has {len(key)} characters that are not that."
