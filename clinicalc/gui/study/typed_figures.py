"""Figures typed into a form of a study: whole numbers within limits, and a number above nought."""

from math import isfinite

from clinicalc.assessment.numerals import EN_DASH
from clinicalc.errors import UsageError
from clinicalc.gui.form_deed import refuse_at
from clinicalc.gui.form_fields import TextField

LARGEST_SEED = 2**53
"""A whole number that every reader of a file takes for what it is."""


def read_whole(field: TextField, what: str, least: int, most: int) -> int:
    """The whole number in a field; what is none, or outside the limits, is refused at the field.

    `what` is what is counted, as it stands in a sentence: "the sets".
    """
    text = field.text
    do = f"Write a whole number from {least:,} to {most:,}." if most < LARGEST_SEED else "Write such as 1."
    if not text:
        refuse_at(UsageError(f"a number is missing for {what}.", do=do), field.edit)
    if not (text.isascii() and text.isdigit() and len(text) <= _LONGEST):
        refuse_at(UsageError(f"“{text}” is no whole number for {what}.", do=do), field.edit)
    number = int(text)
    if not least <= number <= most:
        limits = f"{least:,}{EN_DASH}{most:,}"
        refuse_at(UsageError(f"{number:,} is outside {limits} for {what}.", do=do), field.edit)
    return number


def read_positive(field: TextField, what: str, do: str) -> float | int:
    """The number above nought in a field; what is none is refused at the field, with what to do instead."""
    text = field.text
    try:
        number = float(text)
    except ValueError:
        slip = " With a point, not a comma." if "," in text else ""
        refuse_at(UsageError(f"“{text}” is no number for {what}.{slip}", do=do), field.edit)
    if not (isfinite(number) and number > 0):
        refuse_at(UsageError(f"{what} lies above 0, and “{text}” does not.", do=do), field.edit)
    return int(number) if number.is_integer() else number


_LONGEST = 16
"""Digits; more are no number of anything here."""
