"""An id that one person reads aloud and another types: how far it agrees, group by group and never digit by digit.

A verdict on every digit could be tried out at the keyboard, sixteen tries a digit, and would then prove nothing about
whoever reads it aloud. A group of four takes 65 536 tries.
"""

from dataclasses import dataclass, field

from clinicalc.library.cards import GROUP, ID_DIGITS, compare_id, plain_digits
from clinicalc.units.quoting import quote

GROUPS = ID_DIGITS // GROUP
_DIGITS = frozenset("0123456789abcdef")


@dataclass(frozen=True, slots=True)
class Heard:
    """What is typed so far: a sentence for the person who types, and whether all 64 digits agree."""

    says: str
    whole: bool = False
    differs_in: int = 0
    """The group, from 1, that was typed whole and differs; 0 while none does."""


@dataclass(frozen=True, slots=True)
class KeyToHear:
    """A key whose id is to be read aloud by the person who keeps it; it compares and shows nothing of the id."""

    _id: str = field(repr=False)

    def judge(self, typed: str) -> Heard:
        """The verdict on what is typed; spaces, hyphens and capital letters do not matter."""
        letters = plain_digits(typed)
        if not letters:
            return Heard("")
        strange = next((letter for letter in letters if letter not in _DIGITS), "")
        if strange:
            return Heard(f"{quote(strange)} is no digit of an id: they are 0 to 9 and a to f.")
        agreement = compare_id(letters, self._id)
        if agreement.whole:
            return Heard(f"All {ID_DIGITS} digits agree.", whole=True)
        groups = min(len(letters), ID_DIGITS) // GROUP
        agreed = min(agreement.digits // GROUP, groups)
        if agreed < groups:
            return Heard(f"The {_place(agreed + 1)} group differs. Have it read aloud again.", differs_in=agreed + 1)
        if len(letters) > ID_DIGITS:
            return Heard(f"{len(letters)} digits are typed, and an id has {ID_DIGITS}. Take away what is too much.")
        if not agreed:
            return Heard(f"0 of {GROUPS} groups so far.")
        return Heard(f"{agreed} of {GROUPS} groups {'agrees' if agreed == 1 else 'agree'} so far.")


def _place(number: int) -> str:
    ending = {1: "st", 2: "nd", 3: "rd"}.get(number, "th")
    return f"{number}{ending}"
