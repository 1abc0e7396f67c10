"""Which characters a TrueType font has, how wide they run and how far their pictures reach, read from its own tables.

The tables are cmap, hhea, hmtx, head, loca and glyf of the OpenType specification 1.9. Read here and not by the PDF
library, which a window that only measures text would otherwise have to load.

The PDF library paints every character where the last one ended. That puts an accent that has no letter-with-accent of
its own beside its letter; with these boxes it can be put over or under it.
"""

import struct
from collections.abc import Iterator, Mapping
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


class Boxes(Mapping[int, Box]):
    """The box of each character of `glyphs` (code point to glyph number); a character without ink has none.

    `em` is what the font's own size counts in the boxes. A box is read when it is asked for, since a window asks for
    none and a print for those of its accents.
    """

    def __init__(self, font: bytes, glyphs: Mapping[int, int], em: float = 1000.0) -> None:
        tables = _tables(font)
        self._font, self._em = font, em
        self._units: int = struct.unpack_from(">H", font, tables["head"] + 18)[0]
        long_offsets = struct.unpack_from(">h", font, tables["head"] + 50)[0] == 1
        count: int = struct.unpack_from(">H", font, tables["maxp"] + 4)[0] + 1  # where each picture begins, and the end
        if long_offsets:
            places = struct.unpack_from(f">{count}L", font, tables["loca"])
        else:
            places = tuple(2 * half for half in struct.unpack_from(f">{count}H", font, tables["loca"]))
        start = tables["glyf"]
        self._starts = {code: start + places[at] for code, at in glyphs.items() if places[at + 1] > places[at]}

    def __getitem__(self, code: int) -> Box:
        scale = self._em / self._units
        return Box(*(edge * scale for edge in struct.unpack_from(">4h", self._font, self._starts[code] + 2)))

    def __iter__(self) -> Iterator[int]:
        return iter(self._starts)

    def __len__(self) -> int:
        return len(self._starts)

    def __contains__(self, code: object) -> bool:
        return code in self._starts


def read_glyphs(font: bytes) -> Mapping[int, int]:
    """The glyph number of each character (by code point) of a font with a Unicode character map of format 4 or 12."""
    start = _tables(font)["cmap"]
    count = struct.unpack_from(">H", font, start + 2)[0]
    records = (struct.unpack_from(">2HL", font, start + 4 + 8 * place) for place in range(count))
    wanted = [offset for *kind, offset in records if tuple(kind) in ((0, 3), (0, 4), (3, 1), (3, 10))]
    glyphs: dict[int, int] = {}
    for offset in dict.fromkeys(wanted):  # most maps are listed twice, for two platforms
        glyphs |= _read_map(font, start + offset)
    return glyphs


def read_advances(font: bytes, glyphs: Mapping[int, int], em: float = 1000.0) -> Mapping[int, float]:
    """The advance width of each character of `glyphs`; `em` is what the font's own size counts in them."""
    tables = _tables(font)
    scale = em / struct.unpack_from(">H", font, tables["head"] + 18)[0]
    count = struct.unpack_from(">H", font, tables["hhea"] + 34)[0]
    # after the last full entry every glyph is as wide as that one
    widths = struct.unpack_from(">" + "Hh" * count, font, tables["hmtx"])[::2]
    return {code: widths[min(glyph, count - 1)] * scale for code, glyph in glyphs.items()}


def _read_map(font: bytes, start: int) -> dict[int, int]:
    kind = struct.unpack_from(">H", font, start)[0]
    if kind == 12:
        groups = struct.unpack_from(">L", font, start + 12)[0]
        glyphs: dict[int, int] = {}
        for place in range(groups):
            first, last, glyph = struct.unpack_from(">3L", font, start + 16 + 12 * place)
            glyphs |= {code: glyph + code - first for code in range(first, last + 1)}
        return glyphs
    return _read_segments(font, start) if kind == 4 else {}


def _read_segments(font: bytes, start: int) -> dict[int, int]:
    """Format 4: runs of code points, each with an offset to its glyphs or a place in a list of them."""
    count = struct.unpack_from(">H", font, start + 6)[0] // 2
    ends = struct.unpack_from(f">{count}H", font, start + 14)
    starts = struct.unpack_from(f">{count}H", font, start + 16 + 2 * count)
    deltas = struct.unpack_from(f">{count}H", font, start + 16 + 4 * count)
    base = start + 16 + 6 * count
    offsets = struct.unpack_from(f">{count}H", font, base)
    glyphs = {}
    for place, (first, last, delta, offset) in enumerate(zip(starts, ends, deltas, offsets, strict=True)):
        for code in range(first, min(last, 0xFFFE) + 1):
            glyph = code
            if offset:
                glyph = struct.unpack_from(">H", font, base + 2 * place + offset + 2 * (code - first))[0]
                if not glyph:
                    continue
            glyphs[code] = (glyph + delta) & 0xFFFF
    return {code: glyph for code, glyph in glyphs.items() if glyph}


def _tables(font: bytes) -> dict[str, int]:
    """Where each table of the font begins, by its four-letter name."""
    count = struct.unpack_from(">H", font, 4)[0]
    records = (struct.unpack_from(">4s3L", font, 12 + 16 * place) for place in range(count))
    return {name.decode("ascii"): start for name, _, start, _ in records}
