"""The print's typeface: which characters it has, how wide they are, and what may not be printed with it."""

import unicodedata
from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum
from functools import cache
from typing import Any

from clinicalc.errors import PrintRefused
from clinicalc.resources import read_shipped
from clinicalc.units.quoting import quote

_DISGUISING = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})
"""Unicode categories that never show as a character of their own: control, format (bidirectional ones among them)."""


class Weight(StrEnum):
    """The two weights that are used; the value is the name under which the painter knows the font."""

    REGULAR = "SourceSans3-Regular"
    SEMIBOLD = "SourceSans3-Semibold"


@dataclass(frozen=True, slots=True)
class Lettering:
    """Advance widths by character and weight, in thousandths of the type size."""

    advances: Mapping[Weight, Mapping[int, float]]

    def width(self, text: str, size: float, weight: Weight = Weight.REGULAR) -> float:
        """The width of a line of text in points; no kerning, as it is painted."""
        advances = self.advances[weight]
        return sum(advances[ord(character)] for character in text) * size / 1000.0

    def wrap(self, text: str, width: float, size: float, weight: Weight = Weight.REGULAR) -> tuple[str, ...]:
        """The text in lines no wider than `width` points; a word wider than a line is broken anywhere."""
        lines: list[str] = []
        line = ""
        for place, word in enumerate(unicodedata.normalize("NFC", text).split(" ")):
            longer = word if place == 0 else f"{line} {word}"
            if self.width(longer, size, weight) <= width:
                line = longer
                continue
            if line:
                lines.append(line.rstrip(" "))
            while self.width(word, size, weight) > width:
                fits = self._fitting(word, width, size, weight)
                lines.append(word[:fits])
                word = word[fits:]
            line = word
        return (*lines, line)

    def lacks(self, character: str) -> bool:
        """Whether one of the weights has no picture of the character."""
        return any(ord(character) not in advances for advances in self.advances.values())

    def _fitting(self, word: str, width: float, size: float, weight: Weight) -> int:
        """How many characters of the word go into a line, at least one; a mark stays with its letter."""
        used, fits = 0.0, 0
        for place, character in enumerate(word):
            used += self.width(character, size, weight)
            if used > width:
                break
            fits = place + 1
        while fits > 1 and fits < len(word) and unicodedata.combining(word[fits]):
            fits -= 1
        return max(fits, 1)


def check_text(lettering: Lettering, text: str, what: str) -> None:
    """Raises PrintRefused when the print could only show `text` wrongly; `what` names it in the sentence."""
    for character in unicodedata.normalize("NFC", text):
        hidden = unicodedata.category(character) in _DISGUISING
        if hidden or lettering.lacks(character):
            named = f"U+{ord(character):04X}"
            name = unicodedata.name(character, "")
            why = (
                "a hidden control character, which can make a text look like another."
                if hidden
                else "and the typeface of the print has no such character. It has Latin, Greek and Cyrillic letters."
            )
            raise PrintRefused(
                f"{what} {quote(text)} cannot be printed as it stands: it holds {named}{f' ({name})' if name else ''},",
                why=why,
                do="Write it without this character. Nothing was printed.",
            )


@cache
def read_fonts() -> Mapping[Weight, Any]:
    """The fonts as the PDF library's objects, by weight, read once from the shipped files."""
    from io import BytesIO

    from reportlab.pdfbase.ttfonts import TTFont

    return {weight: TTFont(weight.value, BytesIO(read_shipped(f"resources/fonts/{weight.value}.ttf"))) for weight in Weight}


@cache
def read_lettering() -> Lettering:
    """The widths of both weights; a character without a width is one the typeface lacks."""
    fonts = read_fonts()
    return Lettering(
        {
            weight: {code: font.face.getCharWidth(code) for code in font.face.charToGlyph}
            for weight, font in fonts.items()
        }
    )
