"""One machine's side of a library: where it keeps its own files, where the library lies, whose key it trusts."""

from dataclasses import dataclass
from datetime import UTC, datetime
from pathlib import Path

from clinicalc.errors import LibraryError
from clinicalc.settings import library_place, read_settings, settings_folder
from clinicalc.units.days import day_words


@dataclass(frozen=True, slots=True)
class Machine:
    """What this machine knows without looking into the library.

    `folder`: its settings folder, where its memory of each library lies too. `practice_key`: the id of the key that
    speaks for the practice, pinned here and changed by nothing that stands in a library.
    """

    folder: Path
    place: Path
    practice_key: str


def this_machine(option: str | Path | None = None) -> Machine:
    """This machine, from its settings; `option` is a library named on the command line.

    Raises LibraryError where no library is named or no practice key is pinned, UsageError where a place is no path.
    """
    reading = read_settings()
    place = library_place(reading.settings.library, option)
    problems = " ".join(reading.problems)  # a line that could not be read is why nothing is stated
    if place is None:
        raise LibraryError(
            "this machine uses no model library.",
            why=problems,
            do="Name its folder with --library, and join it with: clinicalc library join.",
        )
    if not reading.settings.practice_key:
        raise LibraryError(
            "this machine has not joined the library, so nothing in it counts here.",
            where=str(place),
            why=problems or "No key is pinned that speaks for the practice.",
            do="Run clinicalc library join, and have the practice key's id read aloud by the person who keeps it.",
        )
    return Machine(settings_folder(), place, reading.settings.practice_key)


def uses_library(option: str | Path | None = None) -> bool:
    """Whether this machine works from a library, joined or not.

    Settings that cannot be read whole do not make a machine with a memory of a library one without.
    """
    reading = read_settings()
    if library_place(reading.settings.library, option) is not None:
        return True
    return bool(reading.problems) and any(settings_folder().glob("memory-*.json"))


def spell_moment(at: datetime) -> str:
    """A time as records and memory state it: UTC to the second. Raises ValueError for a time without a zone."""
    if at.tzinfo is None:
        raise ValueError("a moment needs a time zone")
    return at.astimezone(UTC).replace(microsecond=0).isoformat().replace("+00:00", "Z")


def read_moment(text: str) -> datetime:
    """The time that `spell_moment` spelt. Raises ValueError for a day or hour that does not exist."""
    return datetime.fromisoformat(text)


def say_moment(at: datetime) -> str:
    """A time in a sentence, on this machine's own clock: "1 December 2026, 10:00"."""
    local = at.astimezone()
    return f"{day_words(local)}, {local:%H:%M}"
