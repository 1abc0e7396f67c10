"""The settings as one value, and what each of them may be."""

import os
from dataclasses import dataclass, replace
from enum import StrEnum
from pathlib import Path

from clinicalc.errors import UsageError
from clinicalc.settings.faults import fault_of_unseen
from clinicalc.settings.letterhead import fault_of_letterhead
from clinicalc.settings.library_place import fault_of_library, fault_of_practice_key
from clinicalc.settings.points import MOST_POINTS, PracticePoint
from clinicalc.settings.preferred_units import PreferredUnit

MOST_RECENT = 8
"""How many files opened lately are remembered."""
LONGEST_PRACTICE = 80
LOWEST_LEVEL, HIGHEST_LEVEL = 0.5, 0.999
"""Levels of which a band is made; the same limits as everywhere a level is asked for."""


class ThemeChoice(StrEnum):
    """Which colours: those the system asks for, or always the same."""

    SYSTEM = "system"
    LIGHT = "light"
    DARK = "dark"


class Paper(StrEnum):
    """What the practice prints on."""

    A4 = "A4"
    LETTER = "Letter"


@dataclass(frozen=True, slots=True)
class Settings:
    """What was chosen on this machine. Raises UsageError, naming the setting, where a value cannot be one.

    `recent_files`: paths of coefficient files, newest first; never of prints. `level`: of the band, 0.5 to 0.999.
    `letterhead`: up to four lines that stand over a print in place of the practice's name, none of them empty.
    `decision_points`: probabilities at which this practice acts, eight at most, each with who says so.
    `units`: the unit in which an empty field of a quantity begins, at most one for each.
    `library`: the full path of the practice's model library, "" for none. `practice_key`: the id of the key that speaks
    for the practice, 64 hexadecimal digits, pinned when this machine joined; "" for none.
    """

    theme: ThemeChoice = ThemeChoice.SYSTEM
    recent_files: tuple[str, ...] = ()
    practice: str = ""
    paper: Paper = Paper.A4
    level: float = 0.95
    decision_points: tuple[PracticePoint, ...] = ()
    library: str = ""
    practice_key: str = ""
    letterhead: tuple[str, ...] = ()
    units: tuple[PreferredUnit, ...] = ()

    def __post_init__(self) -> None:
        for fault in (
            _fault_of_recent(self.recent_files),
            _fault_of_practice(self.practice),
            _fault_of(self.level),
            fault_of_library(self.library),
            fault_of_practice_key(self.practice_key),
            fault_of_letterhead(self.letterhead),
            _fault_of_units(self.units),
        ):
            if fault:
                raise UsageError(fault)
        if len(self.decision_points) > MOST_POINTS:
            given = len(self.decision_points)
            raise UsageError(f"decision_points holds {given} tables, and at most {MOST_POINTS} are kept.")

    def unit_of(self, quantity: str) -> str:
        """The UCUM code in which an empty field of this quantity begins, "" for the file's own."""
        return next((one.unit for one in self.units if one.quantity == quantity), "")

    def with_unit(self, quantity: str, unit: str) -> "Settings":
        """The settings with this unit preferred, "" for none. Raises UsageError where it is none of the quantity's."""
        units = {one.quantity: one for one in self.units}
        if unit:
            units[quantity] = PreferredUnit(quantity, unit)  # where there was one, in its place
        else:
            units.pop(quantity, None)
        return replace(self, units=tuple(units.values()))

    def with_recent(self, path: Path) -> "Settings":
        """The settings with this coefficient file as the newest; the oldest leaves when there are too many.

        The same settings where the path has bytes that are no text, since TOML could not hold it.
        """
        newest = os.path.abspath(path)  # not resolved: a link is remembered under the name it was opened by
        if _fault_of_recent((newest,)):
            return self
        others = (other for other in self.recent_files if other != newest)
        return replace(self, recent_files=(newest, *others)[:MOST_RECENT])


def _fault_of_recent(paths: tuple[str, ...]) -> str:
    if len(paths) > MOST_RECENT:
        return f"recent_files holds {len(paths)} paths, and at most {MOST_RECENT} are kept."
    if any(not path or "\0" in path or not _is_text(path) for path in paths):
        return "recent_files holds something that is not the path of a file."
    return ""


def _fault_of_practice(practice: str) -> str:
    if len(practice) > LONGEST_PRACTICE:
        return f"practice has {len(practice)} characters, and at most {LONGEST_PRACTICE} fit on a print."
    unseen = fault_of_unseen(practice)
    return f"practice holds {unseen}" if unseen else ""


def _fault_of_units(units: tuple[PreferredUnit, ...]) -> str:
    named = [one.quantity for one in units]
    twice = next((name for name in named if named.count(name) > 1), "")
    return f"units names {twice} twice." if twice else ""


def _fault_of(level: float) -> str:
    if LOWEST_LEVEL <= level <= HIGHEST_LEVEL:
        return ""
    slip = f" {level:g}\N{NARROW NO-BREAK SPACE}% is written {level / 100:g}." if 50 <= level <= 99.9 else ""
    return f"level {level:g} lies outside {LOWEST_LEVEL:g} to {HIGHEST_LEVEL:g}.{slip}"


def _is_text(path: str) -> bool:
    return not any("\ud800" <= character <= "\udfff" for character in path)
