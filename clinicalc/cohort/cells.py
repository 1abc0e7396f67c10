"""From the texts of cells to numbers and levels, block by block, so that a long file never stands in memory."""

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

import numpy as np

from clinicalc.cohort.raw import Numbers, Places, RawColumn

_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?")
_BEGINNINGS = frozenset("0123456789+-−.,")
_KEPT_AS_TEXT = re.compile(r"(?m)^[+-]?(?:0\d|\d{16,}$)")
"""Whole numbers that would change as floats: "007" is no 7, and 16 digits do not fit."""
_NOT_PLAIN = re.compile(r"[^0-9eE+\-.\n]")


def read_number(text: str, decimal: str = ".", *, exactly: bool = True) -> float | None:
    """The number a trimmed text is, None where it is none or not finite; `exactly`: or would change by being one."""
    if text[:1] not in _BEGINNINGS:
        return None
    text = text.replace("−", "-")
    if decimal == ",":
        text = text.replace(".", "_").replace(",", ".")
    if _NUMBER.fullmatch(text) is None or (exactly and _KEPT_AS_TEXT.search(text)):
        return None
    number = float(text)
    return number if abs(number) < float("inf") else None


@dataclass(slots=True)
class CellGathering:
    """The cells of one column as they come in, block by block."""

    name: str
    decimal: str = "."
    _numbers: list[Numbers] = field(default_factory=list)
    _codes: list[Places | None] = field(default_factory=list)
    _places: dict[str, int] = field(default_factory=dict)

    def add(self, cells: Sequence[str]) -> None:
        """Take the texts of the next block of rows."""
        plain = self._read_plain(cells)
        if plain is not None:
            self._numbers.append(plain)
            self._codes.append(None)
            return
        known = {text: self._weigh(text.strip()) for text in dict.fromkeys(cells)}
        self._numbers.append(np.fromiter((known[text][0] for text in cells), np.float64, len(cells)))
        self._codes.append(np.fromiter((known[text][1] for text in cells), np.int32, len(cells)))

    def add_weighed(self, numbers: Numbers, texts: Iterable[str | None] | None = None) -> None:
        """Take cells that are numbers already; `texts` has None where a cell is no text."""
        self._numbers.append(numbers)
        if texts is None:
            self._codes.append(None)
            return
        places = (-1 if text is None else self._places.setdefault(text, len(self._places)) for text in texts)
        self._codes.append(np.fromiter(places, np.int32, len(numbers)))

    def column(self) -> RawColumn:
        """The whole column; what was gathered is let go."""
        numbers = np.concatenate(self._numbers) if self._numbers else np.empty(0)
        codes = self._join_codes() if self._places else None
        levels = tuple(self._places)
        self._numbers, self._codes, self._places = [], [], {}
        return RawColumn(self.name, numbers, codes, levels)

    def _read_plain(self, cells: Sequence[str]) -> Numbers | None:
        """A block of nothing but plain numbers and empty cells, by the quick way."""
        joined = "\n".join(cells)
        if self.decimal == ",":
            if "." in joined:
                return None
            joined = joined.replace(",", ".")
        if _NOT_PLAIN.search(joined) or _KEPT_AS_TEXT.search(joined):
            return None
        parts = joined.split("\n")
        if len(parts) != len(cells):
            return None
        if "" in parts:
            parts = [part or "nan" for part in parts]
        try:
            numbers = np.fromiter(map(float, parts), np.float64, len(parts))
        except ValueError:
            return None
        return None if np.isinf(numbers).any() else numbers

    def _weigh(self, text: str) -> tuple[float, int]:
        if not text:
            return np.nan, -1
        number = read_number(text, self.decimal)
        if number is not None:
            return number, -1
        return np.nan, self._places.setdefault(text, len(self._places))

    def _join_codes(self) -> Places:
        blocks = (
            np.full(len(numbers), -1, np.int32) if codes is None else codes
            for numbers, codes in zip(self._numbers, self._codes, strict=True)
        )
        return np.concatenate(list(blocks))
