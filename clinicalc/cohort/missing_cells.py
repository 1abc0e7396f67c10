"""Which cells say that nothing was measured: empty ones, NA, NaN, a lone point, and what the dictionary names."""

from collections.abc import Iterable

import numpy as np

from clinicalc.cohort.cells import read_number
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Mask

ALWAYS_MISSING = frozenset({"na", "nan", "."})
"""Texts that mean "not measured" in every column, without regard to capitals; answers of their own go before them."""

MISSING_WORDS = frozenset({"missing", "unknown", "not measured", "none", "nk", "n/a", "-", "?", "null", "unk", "nd"})
"""Texts that are often written for it; they are asked about, or proposed, and never taken so unasked."""

MISSING_CODES = (-9.0, -1.0, -99.0, -999.0, -9999.0, -8.0, -7.0, 9.0, 99.0, 999.0, 9999.0, 99999.0, 888.0, 8888.0)
"""Numbers that are written for "not measured", where they are no possible value."""

_FAR = 5.0


def find_missing(raw: RawColumn, missing: Iterable[str] = (), answers: Iterable[str] = ()) -> Mask:
    """The cells without a value. `answers` are texts that mean something here, such as NA for a region."""
    stated = {text.strip().casefold() for text in missing}
    kept = {text.strip() for text in answers}
    absent = raw.empty()
    if raw.codes is not None:
        silent = [_is_silent(text, stated, kept) for text in raw.levels]
        if any(silent):
            # the last place stands for -1: no text
            absent |= np.array([*silent, False])[raw.codes]
    for number in {read_number(text, exactly=False) for text in stated} - {None}:
        absent |= raw.numbers == number
    return absent


def _is_silent(text: str, stated: set[str], kept: set[str]) -> bool:
    folded = text.casefold()
    return folded in stated or (folded in ALWAYS_MISSING and text not in kept)


def stray_codes(numbers: Numbers) -> tuple[float, ...]:
    """Codes among `numbers` (no NaN): below nought where nothing else is, or from 99 on and far above all others."""
    rest = numbers[~np.isin(numbers, MISSING_CODES)]
    if not len(rest):
        return ()
    low, high = float(rest.min()), float(rest.max())
    strays = (one for one in MISSING_CODES if (one < 0 <= low) or (one >= 99 and one > _FAR * high))
    return tuple(one for one in strays if (numbers == one).any())
