"""A value that is the mean of several readings: how that is typed after a number, and how it is said."""

import re
from dataclasses import dataclass
from functools import cache

from clinicalc.units.quoting import quote
from clinicalc.units.unit import all_units

MOST_AVERAGED = 30
"""So many visits, and so many readings of one visit, may be stated: a longer series is no bedside mean."""

_OF = re.compile(r"(?:^|\s)of(?=\s|$)", re.IGNORECASE)
_COUNTS = re.compile(
    r"(?P<visits>[0-9]+)\s+visits?(?:\s+of\s+(?P<each>[0-9]+)\s+readings?)?|(?P<readings>[0-9]+)\s+readings?",
    re.IGNORECASE,
)
# patterns of refusals stay strings, as in `reading`: a readable text never needs them
_TURNED = r"([0-9]+)\s+readings?\s+of\s+([0-9]+)\s+visits?"
_EACH = r"(\S+)\s+(visits?|readings?)(?=\s+of\s|$)"
_EXAMPLES = "“of 2 visits”, “of 3 readings” or “of 2 visits of 3 readings”"


@dataclass(frozen=True, slots=True)
class Averaged:
    """How many visits a mean was made from, and how many readings of each visit; both count from 1."""

    visits: int = 1
    readings: int = 1

    @property
    def is_single(self) -> bool:
        """Whether it is one reading of one visit, which is no mean and as good as nothing stated."""
        return self.visits == 1 and self.readings == 1

    @property
    def total(self) -> int:
        """How many readings there were in all."""
        return self.visits * self.readings

    @property
    def typed(self) -> str:
        """What stands after a number to be typed again: "of 2 visits of 3 readings", "of 3 readings"."""
        if self.readings == 1:
            return f"of {_count(self.visits, 'visit')}"
        visits = "" if self.visits == 1 else f"of {_count(self.visits, 'visit')} "
        return f"{visits}of {_count(self.readings, 'reading')}"

    @property
    def words(self) -> str:
        """The same for people: "mean of 2 visits, 3 readings each"; "" for one reading of one visit."""
        if self.is_single:
            return ""
        if self.visits == 1:
            return f"mean of {_count(self.readings, 'reading')} of one visit"
        each = "" if self.readings == 1 else f", {_count(self.readings, 'reading')} each"
        return f"mean of {_count(self.visits, 'visit')}{each}"


def split_averaged(text: str) -> tuple[str, Averaged | None] | str:
    """A typed text without its date, parted into what stands before “of” and the mean stated after it (None: none).

    Where what follows “of” is not clear, a sentence that says why and what to type instead.
    """
    found = next((place for place in _OF.finditer(text) if not _is_in_unit(text[place.end() :])), None)
    if found is None:
        return text, None
    typed = " ".join(text[found.end() :].split())
    counts = _COUNTS.fullmatch(typed) if typed.isascii() else None
    if counts is None:
        return _explain(typed)
    visits, readings = int(counts["visits"] or 1), int(counts["each"] or counts["readings"] or 1)
    for count, noun in ((visits, "visit"), (readings, "reading")):
        if count < 1:
            return f"“of 0 {noun}s” is no mean: leave it out, or type how many {noun}s there were."
        if count > MOST_AVERAGED:
            return (
                f"{quote(f'of {typed}')} counts more than {MOST_AVERAGED} {noun}s, more than a mean may be made of:"
                f" type how many {noun}s there were, from 1 to {MOST_AVERAGED}."
            )
    return text[: found.start()].rstrip(), Averaged(visits, readings)


def _is_in_unit(after: str) -> bool:
    """Whether an “of” belongs to the name of a unit, as in mm of mercury."""
    return after.lstrip().casefold().startswith(_after_of_in_units())


@cache
def _after_of_in_units() -> tuple[str, ...]:
    names = (name.casefold() for known in all_units() for name in known.typed_as)
    return tuple({after for _, of, after in (name.partition(" of ") for name in names) if of})


def _explain(typed: str) -> str:
    if not typed:
        return f"No count follows “of”: type how many, such as {_EXAMPLES}."
    turned = re.fullmatch(_TURNED, typed, re.IGNORECASE)
    if turned is not None:
        return (
            f"{quote(f'of {typed}')} can be read in two ways: type the visits first, then the readings of each visit,"
            " as in “of 2 visits of 3 readings”."
        )
    if re.fullmatch(r"(?:visits?|readings?)(?:\s.*)?", typed, re.IGNORECASE):
        return f"{quote(f'of {typed}')} does not say how many: type the count, such as {_EXAMPLES}."
    for count, noun in re.findall(_EACH, typed, re.IGNORECASE):
        if not (count.isascii() and count.isdecimal()):
            return f"{quote(count)} is no count of {noun.lower()}: type a whole number from 1 to {MOST_AVERAGED}."
    return f"{quote(f'of {typed}')} is no count of visits or readings: type {_EXAMPLES}, or leave it out."


def _count(count: int, noun: str) -> str:
    return f"{count} {noun}{'' if count == 1 else 's'}"
