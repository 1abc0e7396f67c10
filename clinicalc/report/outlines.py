"""How far the pictures of a TrueType font reach, read from its own tables (head, loca, glyf).

The PDF library paints every character where the last one ended. That puts an accent that has no letter-with-accent of
its own beside its letter; with these boxes it can be put over or under it.
"""

import struct
from collections.abc import Mapping
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Box:
    """The edges of one picture, in thousandths of the type size, the baseline at 0 and upwards counted up."""

    left: float
    bottom: float
    right: float
    top: float

    @property
    def middle(self) -> float:
        """Half way between left and right."""
        return (self.left + self.right) / 2


def read_boxes(font: bytes, glyphs: Mapping[int, int], em: float = 1000.0) -> Mapping[int, Box]:
    """The box of each character of `glyphs` (code point to glyph number); a character without ink has none.

    `em` is what the font's own size counts in the boxes.
    """
    tables = _tables(font)
    head = tables["head"]
    scale = em / struct.unpack_from(">H", font, head + 18)[0]
    long_offsets = struct.unpack_from(">h", font, head + 50)[0] == 1
    boxes = {}
    for code, glyph in glyphs.items():
        if long_offsets:
            start, end = struct.unpack_from(">2L", font, tables["loca"] + 4 * glyph)
        else:
            start, end = (2 * half for half in struct.unpack_from(">2H", font, tables["loca"] + 2 * glyph))
        if end > start:
            edges = struct.unpack_from(">4h", font, tables["glyf"] + start + 2)
            boxes[code] = Box(*(edge * scale for edge in edges))
    return boxes


def _tables(font: bytes) -> dict[str, int]:
    """Where each table of the font begins, by its four-letter name."""
    count = struct.unpack_from(">H", font, 4)[0]
    records = (struct.unpack_from(">4s3L", font, 12 + 16 * place) for place in range(count))
    return {name.decode("ascii"): start for name, _, start, _ in records}
