"""Which sign separates the fields of a text table, and which one stands before decimals."""

import csv
import re
from collections import Counter
from collections.abc import Iterator, Sequence
from contextlib import suppress
from dataclasses import dataclass, replace

_SEPARATORS = (",", ";", "\t", "|")
_COMMA = re.compile(r"[+-]?\d*,\d+")
_POINT = re.compile(r"[+-]?\d*\.\d+")
_STATED = re.compile(r'"?sep=([,;\t|])"?\s*')
_WORDS = {",": "commas", ";": "semicolons", "\t": "tabs", "|": "upright strokes"}


@dataclass(frozen=True, slots=True)
class TextForm:
    """How a text table is written."""

    separator: str
    decimal: str
    lines_before: int = 0
    """Lines above the names: 1 where the first only says "sep=;"."""

    @property
    def words(self) -> str:
        """The form in a sentence."""
        return f"fields separated by {_WORDS[self.separator]}, decimal {'comma' if self.decimal == ',' else 'point'}"


def tell_form(sample: Sequence[str]) -> TextForm:
    """The form of a table, from its first lines: the separator that gives most lines the same, largest width.

    A comma is taken for a decimal only where it does not separate, and where more cells have it so than a point.
    """
    stated = _STATED.fullmatch(sample[0]) if sample else None
    if stated:
        return replace(tell_form(sample[1:]), separator=stated[1], lines_before=1)
    separator = max(_SEPARATORS, key=lambda sign: _agreement(sample, sign))
    cells = [cell.strip() for row in _rows(sample, separator) for cell in row]
    commas = sum(_COMMA.fullmatch(cell) is not None for cell in cells)
    points = sum(_POINT.fullmatch(cell) is not None for cell in cells)
    return TextForm(separator, "," if separator != "," and commas > points else ".")


def _agreement(sample: Sequence[str], separator: str) -> tuple[float, int]:
    """How well a separator explains the lines: the share that has the header's width, and that width."""
    widths = [len(row) for row in _rows(sample, separator) if row]
    if not widths or widths[0] < 2:
        return 0.0, 0
    return Counter(widths)[widths[0]] / len(widths), widths[0]


def _rows(sample: Sequence[str], separator: str) -> Iterator[list[str]]:
    """The rows as far as they can be read; the reading itself will say where they cannot."""
    with suppress(csv.Error):
        yield from csv.reader(sample, delimiter=separator)
