"""The text of a settings file taken setting by setting: what cannot be taken is a sentence with its line."""

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from enum import StrEnum
from typing import TypeVar

from clinicalc.errors import ClinicalcError, UsageError
from clinicalc.settings.points import MOST_POINTS, PracticePoint
from clinicalc.settings.points_table import take_point
from clinicalc.settings.preferred_units import take_preferred_unit
from clinicalc.settings.settings import Paper, Settings, ThemeChoice
from clinicalc.settings.toml_text import quote_toml, shown_text

DEFAULTS = "The defaults are used, and the file is left as it is."
_POINTS, _UNITS = "decision_points", "units"
"""The keys that stand over tables, of which each part is taken or left out by itself."""
_Choice = TypeVar("_Choice", bound=StrEnum)


@dataclass(frozen=True, slots=True)
class SettingsReading:
    """The settings to use, and one sentence for each thing in the file that could not be taken."""

    settings: Settings
    problems: tuple[str, ...] = ()


def take_text(name: str, data: bytes) -> SettingsReading:
    """The settings that the bytes of the file called `name` state."""
    import tomllib  # here, as with all that only some starts or none need

    try:
        text = data.decode("utf-8-sig").replace("\r\n", "\n")
        table = tomllib.loads(text)
    except UnicodeDecodeError as fault:
        line = data.count(b"\n", 0, fault.start) + 1
        return SettingsReading(Settings(), (f"{name}, line {line}: this is not UTF-8 text. {DEFAULTS}",))
    except tomllib.TOMLDecodeError as fault:
        return SettingsReading(Settings(), (f"{name}{_place_in(str(fault), text)}: this is not TOML. {DEFAULTS}",))
    except (RecursionError, ValueError):  # brackets in brackets, or whole numbers of thousands of digits
        return SettingsReading(Settings(), (f"{name}: this is not a settings file. {DEFAULTS}",))
    settings, problems = Settings(), list[str]()
    for key, value in table.items():
        if key == _POINTS:
            points, faults = _take_points(value, text)
            settings = replace(settings, decision_points=points)
            problems += [f"{name}{fault}" for fault in faults]
            continue
        if key == _UNITS:
            settings, faults = _take_units(settings, value, text)
            problems += [f"{name}{fault}" for fault in faults]
            continue
        try:
            settings = _taken(settings, key, value)
        except ClinicalcError as fault:
            problems.append(f"{name}{line_of(key, text)}: {fault}")
    return SettingsReading(settings, tuple(problems))


def _taken(settings: Settings, key: str, value: object) -> Settings:
    """The settings with one more of them. Raises UsageError where the key or its value cannot be taken."""
    take = _TAKERS.get(key)
    if take is None:
        known = ", ".join((*_TAKERS, _UNITS, _POINTS))
        raise UsageError(f"{shown_text(key)} is not a setting; there are {known}.", do="It is left out.")
    try:
        return take(settings, value)
    except UsageError as fault:
        raise UsageError(fault.what, do=f"{_used_instead(key)} Mend the line or delete it.") from None


def _used_instead(key: str) -> str:
    """The sentence that says what is used where a setting could not be taken."""
    default: object = getattr(Settings(), key)
    if default in ("", ()):
        return "It is left out: none is used."
    return f"The default is used: {quote_toml(default) if isinstance(default, str) else default}."


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


def _take_letterhead(settings: Settings, value: object) -> Settings:
    if not isinstance(value, list) or not all(isinstance(line, str) for line in value):
        raise UsageError('letterhead is a list of lines between quotation marks, such as ["one line", "another"].')
    return replace(settings, letterhead=tuple(value))


def _take_units(settings: Settings, value: object, text: str) -> tuple[Settings, list[str]]:
    """The settings with the preferred units that can be taken, and for each other one its line and a sentence."""
    if not isinstance(value, dict):
        fault = "units is a table; it begins with a line [units], and each line under it is quantity = unit."
        return settings, [f"{line_of(_UNITS, text)}: {fault} It is left out. Mend it or delete it."]
    faults = list[str]()
    begins = re.search(r"^[ \t]*\[[ \t]*units[ \t]*\]", text, re.MULTILINE)
    for key, unit in value.items():
        try:
            one = take_preferred_unit(key, unit)
            settings = settings.with_unit(one.quantity, one.unit)
        except UsageError as fault:
            line = line_of(key, text, after=0 if begins is None else begins.end()) or line_of(_UNITS, text)
            faults.append(f"{line}: {fault.what} The unit of each file is used. Mend the line or delete it.")
    return settings, faults


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
            line = line_of(_POINTS, text, place)
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
    "letterhead": _take_letterhead,
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


def line_of(key: str, text: str, place: int = 0, *, after: int = 0) -> str:
    """Where the key stands (the `place`-th time, where it heads several tables), looked for `after` so many letters.

    Nothing where it is written in a way that a plain look does not find.
    """
    found = list(re.finditer(rf"^[ \t]*\[*[ \t]*[\"']?{re.escape(key)}\b", text, re.MULTILINE))
    found = [one for one in found if one.start() >= after]
    if not found:
        return ""
    at = found[place] if place < len(found) else found[0]
    return f", line {text.count(chr(10), 0, at.start()) + 1}"
