"""The two typefaces of a print, as measured: Source Sans 3, and DejaVu Sans for the letters that it lacks.

The second is read only when a text needs it, and set so much smaller that the small letters of both are equally high.
"""

import unicodedata
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from enum import StrEnum
from functools import cache, partial

from clinicalc.report.outlines import Box, read_boxes
from clinicalc.resources import read_shipped


class Weight(StrEnum):
    """The two weights that are used; the value is the name under which the painter knows the first typeface."""

    REGULAR = "SourceSans3-Regular"
    SEMIBOLD = "SourceSans3-Semibold"


X_HEIGHT = 486.0
"""Thousandths of the type size: the height of small letters in both typefaces, over which their accents are drawn."""
_SECOND = {Weight.REGULAR: "DejaVuSans", Weight.SEMIBOLD: "DejaVuSans-Bold"}
_SECOND_SCALE = X_HEIGHT / 546.875  # 1120 of its 2048 units: the top of its x
_SECOND_ACCENTS = -250.0
_SCRIPTS = ("LATIN ", "GREEK ", "CYRILLIC ", "MODIFIER LETTER ", "COMBINING ")


@dataclass(frozen=True, slots=True, eq=False)
class Font:
    """One weight of a typeface; every measure in thousandths of the type size that a text asks for.

    A character without an advance is one that the font lacks. `scale` is the font's own size by the size asked for.
    Its accents have no width and are drawn around `accents`, measured from the point where they are put.
    """

    name: str
    scale: float
    accents: float
    advances: Mapping[int, float]
    boxes: Mapping[int, Box]

    def has(self, text: str) -> bool:
        """Whether the font has every character of the text."""
        return self.advances.keys() >= set(map(ord, text))

    def width(self, text: str) -> float:
        """How wide the text runs, without kerning."""
        return sum(self.advances[ord(character)] for character in text)


@cache
def read_first() -> Mapping[Weight, Font]:
    """Source Sans 3, read once from the shipped files."""
    return {weight: _read_font(weight.value, 1.0, 0.0, lambda code: True) for weight in Weight}


@cache
def read_second() -> Mapping[Weight, Font]:
    """DejaVu Sans, read once from the shipped files: what the first typeface has too, and more letters of its scripts.

    It has other scripts as well. They are left out: some of them run from right to left or join their letters, which
    this print cannot do.
    """
    accents = _SECOND_ACCENTS * _SECOND_SCALE
    fonts = {}
    for weight, name in _SECOND.items():
        had = read_first()[weight].advances
        fonts[weight] = _read_font(name, _SECOND_SCALE, accents, partial(_is_offered, had))
    return fonts


def _is_offered(had: Mapping[int, float], code: int) -> bool:
    return code in had or is_lettering(chr(code))


def is_lettering(character: str) -> bool:
    """Whether it is a letter or an accent of the Latin, Greek or Cyrillic script."""
    category = unicodedata.category(character)
    return (category[0] == "L" or category == "Mn") and unicodedata.name(character, "").startswith(_SCRIPTS)


def _read_font(name: str, scale: float, accents: float, offered: Callable[[int], bool]) -> Font:
    """A shipped font, made known to the PDF library under its name; without the characters that leave no mark."""
    from io import BytesIO

    from reportlab.pdfbase import pdfmetrics
    from reportlab.pdfbase.ttfonts import TTFont

    content = read_shipped(f"resources/fonts/{name}.ttf")
    font = TTFont(name, BytesIO(content))
    pdfmetrics.registerFont(font)
    glyphs = {code: glyph for code, glyph in font.face.charToGlyph.items() if offered(code)}
    boxes = read_boxes(content, glyphs, 1000.0 * scale)
    shown = [code for code in glyphs if code in boxes or unicodedata.category(chr(code)) == "Zs"]
    return Font(name, scale, accents, {code: font.face.getCharWidth(code) * scale for code in shown}, boxes)
