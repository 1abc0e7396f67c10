"""The two typefaces of a print, as measured: Source Sans 3, and DejaVu Sans for the letters that it lacks.

The second is read only when a text needs it, and set so much smaller that the small letters of both are equally high.
"""

import unicodedata
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from enum import StrEnum
from functools import cache, partial

from clinicalc.report.outlines import Box, Boxes, read_advances, read_glyphs
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
        return sum(map(self.advances.__getitem__, map(ord, text)))


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
    """A shipped font, without the characters that leave no mark."""
    content = read_shipped(_file(name))
    glyphs = {code: glyph for code, glyph in read_glyphs(content).items() if offered(code)}
    boxes = Boxes(content, glyphs, 1000.0 * scale)
    shown = {code: glyph for code, glyph in glyphs.items() if code in boxes or unicodedata.category(chr(code)) == "Zs"}
    return Font(name, scale, accents, read_advances(content, shown, 1000.0 * scale), boxes)


@cache
def make_known(name: str) -> None:
    """Make a font known to the PDF library under its name; to be called before a print uses it."""
    from io import BytesIO

    from reportlab.pdfbase import pdfmetrics
    from reportlab.pdfbase.ttfonts import TTFont

    pdfmetrics.registerFont(TTFont(name, BytesIO(read_shipped(_file(name)))))


def _file(name: str) -> str:
    return f"resources/fonts/{name}.ttf"
