"""Typed text to a reading: a number, then unit, mean and date if they are stated; or a sentence why not.

Comma and point are both decimal marks and never group digits. What can be read in two ways is asked about.
"""

import re
from dataclasses import dataclass
from datetime import date
from enum import StrEnum
from unicodedata import category

from clinicalc.units.averaged import Averaged, split_averaged
from clinicalc.units.quoting import quote
from clinicalc.units.unit import find_close_spellings, find_unit

_LONGEST_NUMBER = 32
_LONGEST_TEXT = 200

_NUMBER = re.compile(r"([-+−]?)([0-9]+)(?:([.,])([0-9]+))?")
_DATE_AFTER = re.compile(r"(?:^|\s)on(?:\s(?P<date>.*))?$", re.IGNORECASE)
_DATE = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")
_LINE_ENDS = "\n\r\v\f\x85\u2028\u2029"
_LIMIT_SIGNS = "<>≤≥~≈≲≳="
_WORDS_FOR_NO_NUMBER = frozenset({"nan", "inf", "infinity", "na", "n/a", "none", "null", "unknown", "∞"})
# patterns of refusals stay strings: a readable text never needs them, and compiling them would slow every start
_EXPONENT = r"[eE][-+−]?[0-9]|\s*(?:[x×*·]\s*)?10\s*(?:\^|\*\*)|\s*[x×*·]\s*10"
_GROUPED = r"[-+−]?[0-9]{1,3}(?:[.,'’ ][0-9]{3})+(?![0-9])"
_NUMBERLESS_MARK = r"[-+−]?[.,][0-9]+"


class UnreadableReason(StrEnum):
    """Why a typed text is no value."""

    EMPTY = "empty"
    CONTROL = "control"
    TOO_LONG = "too_long"
    LIMIT_SIGN = "limit_sign"
    EXPONENT = "exponent"
    GROUPING = "grouping"
    OTHER_DIGITS = "other_digits"
    NOT_A_NUMBER = "not_a_number"
    UNKNOWN_UNIT = "unknown_unit"
    BAD_MEAN = "bad_mean"
    BAD_DATE = "bad_date"


@dataclass(frozen=True, slots=True)
class Reading:
    """A typed value. `text` is what was typed, trimmed; `decimals` counts the digits typed after the mark.

    `digits` is the number as typed, every digit kept, with a decimal point and "-" for a minus.
    `unit` is the UCUM code of the unit typed after the number, None when there was none; `dated` the day it holds for;
    `averaged` what it is the mean of, None when that is not stated.
    """

    text: str
    digits: str
    number: float
    decimals: int
    unit: str | None
    dated: date | None
    averaged: Averaged | None = None


@dataclass(frozen=True, slots=True)
class Unreadable:
    """A typed text that is no value: the text, trimmed, and a sentence that says why and what to type instead.

    The text is the person's own and may hold anything; only `message` is safe to show.
    """

    text: str
    reason: UnreadableReason
    message: str


class _Refusal(Exception):
    """Leaves the reading of one text early; never leaves this module."""

    def __init__(self, reason: UnreadableReason, message: str) -> None:
        super().__init__(message)
        self.reason = reason
        self.message = message


def read_value(text: str, *, ask_about_comma: bool = True) -> Reading | Unreadable:
    """The reading of a typed text such as "5.2", "5,2 mmol/l" or "110 mg/dL of 2 visits on 2026-10-02"; never raises.

    A comma followed by exactly three digits ("1,234") is asked about, unless `ask_about_comma` is False (bare numbers)
    or the digits before it rule grouping out ("0,123").
    """
    trimmed = text.strip()
    try:
        return _read(trimmed, ask_about_comma)
    except _Refusal as refusal:
        return Unreadable(trimmed, refusal.reason, refusal.message)


def _read(text: str, ask_about_comma: bool) -> Reading:
    if not text:
        raise _Refusal(UnreadableReason.EMPTY, "Nothing is typed here: type a number, such as 5.2.")
    _refuse_control(text)
    if len(text) > _LONGEST_TEXT:
        raise _Refusal(
            UnreadableReason.TOO_LONG,
            f"{quote(text)} has {len(text)} characters: type one number of at most {_LONGEST_NUMBER} characters.",
        )
    before, dated = _split_date(text)
    head, averaged = _split_mean(before)
    number = _NUMBER.match(head)
    if number is None:
        raise _explain_no_number(head)
    rest = head[number.end() :]
    code = _read_rest(head, rest)
    if number.end() > _LONGEST_NUMBER:
        raise _Refusal(
            UnreadableReason.TOO_LONG,
            f"{quote(number[0])} has {number.end()} characters; a number may have {_LONGEST_NUMBER}: "
            "type it with fewer digits.",
        )
    sign, whole, mark, decimals = number[1], number[2], number[3], number[4] or ""
    if ask_about_comma and mark == "," and len(decimals) == 3 and len(whole) <= 3 and whole[0] != "0":
        raise _Refusal(
            UnreadableReason.GROUPING,
            f"{quote(number[0])} can be read in two ways: "
            f"type {sign}{whole}.{decimals} or {sign}{whole}{decimals}, whichever is meant.",
        )
    digits = f"{'-' if sign in ('-', '−') else ''}{whole}{f'.{decimals}' if decimals else ''}"
    # adding zero turns a typed -0 into 0
    return Reading(text, digits, float(digits) + 0.0, len(decimals), code, dated, averaged)


def _refuse_control(text: str) -> None:
    for character in text:
        if character in _LINE_ENDS:
            raise _Refusal(
                UnreadableReason.CONTROL, "The text runs over more than one line: type one number on one line."
            )
        if not character.isprintable() and character != "\t" and category(character) != "Zs":
            raise _Refusal(
                UnreadableReason.CONTROL,
                f"The text holds the invisible character U+{ord(character):04X}: delete it and type the number again.",
            )


def _split_date(text: str) -> tuple[str, date | None]:
    found = _DATE_AFTER.search(text)
    if found is None:
        return text, None
    typed = (found["date"] or "").strip()
    try:
        day = date.fromisoformat(typed) if _DATE.fullmatch(typed) else None
    except ValueError:
        day = None
    if day is None:
        if re.match(r"[0-9]{4}-[0-9]{2}-[0-9]{2}\s+of\s", typed, re.IGNORECASE):
            raise _Refusal(
                UnreadableReason.BAD_DATE,
                "The date stands last: type what it is the mean of before it, such as “of 2 visits on 2026-10-02”.",
            )
        named = f"{quote(typed)} is not a date" if typed else "No date follows “on”"
        raise _Refusal(UnreadableReason.BAD_DATE, f"{named}: type year, month and day, such as “on 2026-10-02”.")
    return text[: found.start()].rstrip(), day


def _split_mean(text: str) -> tuple[str, Averaged | None]:
    parted = split_averaged(text)
    if isinstance(parted, str):
        raise _Refusal(UnreadableReason.BAD_MEAN, parted)
    head, averaged = parted
    if averaged is not None and not head:
        raise _not_a_number("Only visits or readings are counted here: type the number first, as in “124 of 2 visits”.")
    return head, averaged


def _explain_no_number(head: str) -> _Refusal:
    bare = head.lstrip("-+−")
    if not head:
        return _not_a_number("Only a date is typed here: type the number before it, such as “110 on 2026-10-02”.")
    if head[0] in _LIMIT_SIGNS:
        return _Refusal(
            UnreadableReason.LIMIT_SIGN,
            f"{quote(head)} is a limit, not a value: type a number without the sign if you know one.",
        )
    if bare[:1] and bare[0].isnumeric() and not bare[0].isascii():
        return _other_digits(head)
    if bare.casefold() in _WORDS_FOR_NO_NUMBER:
        return _not_a_number(f"{quote(head)} says that there is no number: leave the field empty or type a number.")
    if re.match(_NUMBERLESS_MARK, head):
        return _not_a_number(f"{quote(head)} has no digit before its decimal mark: type 0 there, such as 0.5.")
    if len(head) - len(bare) > 1:
        return _not_a_number(f"{quote(head)} has more than one sign: type one number, with one sign at most.")
    if any(character in "0123456789" for character in head):
        return _not_a_number(f"{quote(head)} does not begin with a number: type the number first, such as 5.2 mmol/L.")
    return _not_a_number(f"{quote(head)} is not a number: type digits, such as 5.2.")


def _read_rest(head: str, rest: str) -> str | None:
    """The UCUM code of what follows the number, None when nothing does."""
    typed = rest.strip()
    if not typed:
        return None
    # digits alone are never a unit, though "1" is a UCUM code
    found = None if typed.isdecimal() else find_unit(typed)
    if found is not None:
        return found.code
    if typed[0].isnumeric() and not typed[0].isascii():
        raise _other_digits(head)
    if re.match(_EXPONENT, rest):
        raise _Refusal(
            UnreadableReason.EXPONENT, f"{quote(head)} is written with a power of ten: type all digits, such as 1000."
        )
    if re.match(_GROUPED, " ".join(head.split())):
        raise _Refusal(
            UnreadableReason.GROUPING,
            f"{quote(head)} groups its digits: type the number without spaces or marks between thousands, "
            "with one decimal mark at most, such as 1234.5.",
        )
    if rest[0] in ".,":
        raise _not_a_number(
            f"{quote(head)} has a decimal mark that is not between two digits of one number: type it once, such as 5.2."
        )
    if re.match(r"\s*[-+−–/:;'’ ]?\s*[0-9]", rest):
        raise _not_a_number(f"{quote(head)} holds more than one number: type one number in one field.")
    close = find_close_spellings(typed)
    meant = f"did you mean {' or '.join(close)}?" if close else "type the number alone or with its unit."
    raise _Refusal(UnreadableReason.UNKNOWN_UNIT, f"{quote(typed)} is not a unit known here: {meant}")


def _not_a_number(message: str) -> _Refusal:
    return _Refusal(UnreadableReason.NOT_A_NUMBER, message)


def _other_digits(head: str) -> _Refusal:
    return _Refusal(
        UnreadableReason.OTHER_DIGITS, f"{quote(head)} is not written with the digits 0 to 9: type it with these."
    )
