"""The settings file: read kindly, written whole or not at all, and never lost."""

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from enum import StrEnum
from pathlib import Path
from typing import TypeVar

from clinicalc.errors import ClinicalcError, FileNotWritten, UsageError
from clinicalc.replacement import replace_file
from clinicalc.settings.folder import settings_folder
from clinicalc.settings.points import MOST_POINTS, PracticePoint
from clinicalc.settings.points_table import spell_points, take_point
from clinicalc.settings.settings import Paper, Settings, ThemeChoice
from clinicalc.settings.toml_text import quote_toml, shown_text

FILE_NAME = "settings.toml"
_MOST_BYTES = 1 << 20
_HEAD = "# Settings of clinicalc for this user on this machine. Nothing about a patient belongs here.\n"
_DEFAULTS = "The defaults are used, and the file is left as it is."
_POINTS = "decision_points"
"""The one key that stands over tables; each of them is taken or left out by itself."""
_Choice = TypeVar("_Choice", bound=StrEnum)


@dataclass(frozen=True, slots=True)
class SettingsReading:
    """The settings to use, and one sentence for each thing in the file that could not be taken."""

    settings: Settings
    problems: tuple[str, ...] = ()


def read_settings() -> SettingsReading:
    """The settings of this user; the defaults where there is no file. Never raises: what is wrong is a sentence.

    A setting that cannot be taken leaves its default; a file that is no TOML leaves all of them.
    """
    try:
        path = settings_folder() / FILE_NAME
    except UsageError as fault:
        return SettingsReading(Settings(), (str(fault),))
    return _read(path)


def write_settings(settings: Settings) -> None:
    """Put the settings in place of the file, whole or not at all.

    A file that could not be taken whole is first copied beside it ("settings-1.toml"), so that no hand edit is lost.
    Raises FileNotWritten, and UsageError where there is no folder for settings.
    """
    path = settings_folder() / FILE_NAME
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        path = path.resolve()  # where the file is a link, what it leads to is replaced and the link stays
        if _read(path).problems:
            _keep_copy(path)
        replace_file(path, _spell(settings).encode("utf-8"))
    except (OSError, RuntimeError) as fault:
        raise FileNotWritten(
            "the settings could not be written.",
            where=str(path),
            why=f"The computer says: {getattr(fault, 'strerror', None) or fault}.",
            do="They hold until the program is closed. Make room there, or ask who looks after this computer.",
        ) from None


def write_choices(settings: Settings) -> None:
    """The same for what was chosen in a window: library and practice key stay as the file has them now.

    A machine may have joined a library since the window read its settings. Raises what `write_settings` raises.
    """
    reading = read_settings()
    if not reading.problems:
        now = reading.settings
        settings = replace(settings, library=now.library, practice_key=now.practice_key)
    write_settings(settings)


def _read(path: Path) -> SettingsReading:
    try:
        if path.exists() and not path.is_file():  # a pipe would be waited for
            return SettingsReading(Settings(), (f"{path}: this is not a file. {_DEFAULTS}",))
        with path.open("rb") as file:
            data = file.read(_MOST_BYTES + 1)
    except FileNotFoundError:
        return SettingsReading(Settings())
    except (OSError, ValueError) as fault:
        said = getattr(fault, "strerror", None) or "its name cannot be a file name"
        return SettingsReading(Settings(), (f"{path}: the settings could not be read ({said}). {_DEFAULTS}",))
    if len(data) > _MOST_BYTES:
        return SettingsReading(Settings(), (f"{path}: this is larger than 1 MB, so not settings. {_DEFAULTS}",))
    return _take(path.name, data)


def _take(name: str, data: bytes) -> SettingsReading:
    import tomllib  # here, as with all that only some starts or none need

    try:
        text = data.decode("utf-8-sig").replace("\r\n", "\n")
        table = tomllib.loads(text)
    except UnicodeDecodeError as fault:
        line = data.count(b"\n", 0, fault.start) + 1
        return SettingsReading(Settings(), (f"{name}, line {line}: this is not UTF-8 text. {_DEFAULTS}",))
    except tomllib.TOMLDecodeError as fault:
        return SettingsReading(Settings(), (f"{name}{_place_in(str(fault), text)}: this is not TOML. {_DEFAULTS}",))
    except (RecursionError, ValueError):  # brackets in brackets, or whole numbers of thousands of digits
        return SettingsReading(Settings(), (f"{name}: this is not a settings file. {_DEFAULTS}",))
    settings, problems = Settings(), list[str]()
    for key, value in table.items():
        if key == _POINTS:
            points, faults = _take_points(value, text)
            settings = replace(settings, decision_points=points)
            problems += [f"{name}{fault}" for fault in faults]
            continue
        try:
            settings = _taken(settings, key, value)
        except ClinicalcError as fault:
            problems.append(f"{name}{_line_of(key, text)}: {fault}")
    return SettingsReading(settings, tuple(problems))


def _taken(settings: Settings, key: str, value: object) -> Settings:
    """The settings with one more of them. Raises UsageError where the key or its value cannot be taken."""
    take = _TAKERS.get(key)
    if take is None:
        known = ", ".join((*_TAKERS, _POINTS))
        raise UsageError(f"{shown_text(key)} is not a setting; there are {known}.", do="It is left out.")
    try:
        return take(settings, value)
    except UsageError as fault:
        raise UsageError(fault.what, do="The default is used. Mend the line or delete it.") from None


def _take_theme(settings: Settings, value: object) -> Settings:
    return replace(settings, theme=_one_of(ThemeChoice, "theme", value))


def _take_recent(settings: Settings, value: object) -> Settings:
    if not isinstance(value, list) or not all(isinstance(path, str) for path in value):
        raise UsageError('recent_files is a list of paths between quotation marks, such as ["one.json", "two.json"].')
    return replace(settings, recent_files=tuple(value))


def _take_practice(settings: Settings, value: object) -> Settings:
    if not isinstance(value, str):
        raise UsageError("practice is a name between quotation marks.")
    return replace(settings, practice=value)


def _take_paper(settings: Settings, value: object) -> Settings:
    return replace(settings, paper=_one_of(Paper, "paper", value))


def _take_level(settings: Settings, value: object) -> Settings:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise UsageError("level is a number without quotation marks, such as 0.95.")
    try:
        return replace(settings, level=float(value))
    except OverflowError:
        raise UsageError("level is a number from 0.5 to 0.999.") from None


def _take_library(settings: Settings, value: object) -> Settings:
    if not isinstance(value, str):
        raise UsageError("library is the full path of a folder between quotation marks.")
    return replace(settings, library=value)


def _take_practice_key(settings: Settings, value: object) -> Settings:
    if not isinstance(value, str):
        raise UsageError("practice_key is a key's id between quotation marks: 64 digits from 0 to 9 and a to f.")
    return replace(settings, practice_key=value)


def _take_points(value: object, text: str) -> tuple[tuple[PracticePoint, ...], list[str]]:
    """The decision points that can be taken, and for each other one its line and a sentence.

    One bad point leaves out itself and none of the others.
    """
    tables = value if isinstance(value, list) else [value]
    points, faults = list[PracticePoint](), list[str]()
    for place, table in enumerate(tables):
        try:
            if len(points) == MOST_POINTS:
                raise UsageError(f"it is one more than the {MOST_POINTS} that are kept.")
            points.append(take_point(table))
        except UsageError as fault:
            line = _line_of(_POINTS, text, place)
            faults.append(f"{line}: decision point {place + 1}: {fault.what} It is left out. Mend it or delete it.")
    return tuple(points), faults


_TAKERS: Mapping[str, Callable[[Settings, object], Settings]] = {
    "theme": _take_theme,
    "recent_files": _take_recent,
    "practice": _take_practice,
    "paper": _take_paper,
    "level": _take_level,
    "library": _take_library,
    "practice_key": _take_practice_key,
}


def _one_of(kind: type[_Choice], key: str, value: object) -> _Choice:
    for choice in kind:
        if isinstance(value, str) and choice.value == value:
            return choice
    stands = f" {shown_text(value)}" if isinstance(value, str) else ""
    raise UsageError(f"{key}{stands} is none of " + ", ".join(f'"{choice}"' for choice in kind) + ".")


def _place_in(said: str, text: str) -> str:
    """Where tomllib met the fault, from its message: it names the line, or says that the text ended."""
    found = re.search(r"at line (\d+)", said)
    return f", line {found[1] if found else text.rstrip().count(chr(10)) + 1}"


def _line_of(key: str, text: str, place: int = 0) -> str:
    """Where the key stands (the `place`-th time, where it heads several tables).

    Nothing where it is written in a way that a plain look does not find.
    """
    found = list(re.finditer(rf"^[ \t]*\[*[ \t]*[\"']?{re.escape(key)}\b", text, re.MULTILINE))
    if not found:
        return ""
    at = found[place] if place < len(found) else found[0]
    return f", line {text.count(chr(10), 0, at.start()) + 1}"


def _spell(settings: Settings) -> str:
    """The file's text: every setting on its own line, the files one below the other, then the tables."""
    files = "".join(f"    {quote_toml(path)},\n" for path in settings.recent_files)
    return (
        f"{_HEAD}theme = {quote_toml(settings.theme)}\n"
        f"practice = {quote_toml(settings.practice)}\n"
        f"paper = {quote_toml(settings.paper)}\n"
        f"level = {settings.level!r}\n"
        f"library = {quote_toml(settings.library)}\n"
        f"practice_key = {quote_toml(settings.practice_key)}\n"
        + (f"recent_files = [\n{files}]\n" if files else "recent_files = []\n")
        + spell_points(settings.decision_points)
    )


def _keep_copy(path: Path) -> None:
    """Copy the file to the first of settings-1.toml, settings-2.toml, … that is free."""
    import shutil

    if not path.is_file():
        return
    number = 1
    while (kept := path.with_name(f"{path.stem}-{number}{path.suffix}")).exists():
        number += 1
    shutil.copyfile(path, kept)
