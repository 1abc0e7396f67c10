"""The print's typeface: which characters it has, how wide they are, and what may not be printed with it."""

import unicodedata
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from enum import StrEnum
from functools import cache
from typing import Any

from clinicalc.errors import PrintRefused
from clinicalc.report.outlines import Box, read_boxes
from clinicalc.resources import read_shipped
from clinicalc.units.quoting import quote

_DISGUISING = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})
"""Unicode categories that never show as a character of their own: control, format (bidirectional ones among them)."""


class Weight(StrEnum):
    """The two weights that are used; the value is the name under which the painter knows the font."""

    REGULAR = "SourceSans3-Regular"
    SEMIBOLD = "SourceSans3-Semibold"


X_HEIGHT = 486.0
"""Thousandths of the type size: the height of small letters in this typeface, over which its accents are drawn."""
_STACKED_GAP = 50.0
_ABOVE, _BELOW = 230, 220  # Unicode's canonical combining classes


_NO_INK = Box(0.0, 0.0, 0.0, 0.0)


@dataclass(frozen=True, slots=True)
class Piece:
    """A part of a line: `space` follows each of its characters, `rise` lifts it; in thousandths of the type size."""

    text: str
    space: float = 0.0
    rise: float = 0.0


@dataclass(frozen=True, slots=True)
class Lettering:
    """Advance widths and boxes by weight and character, in thousandths of the type size."""

    advances: Mapping[Weight, Mapping[int, float]]
    boxes: Mapping[Weight, Mapping[int, Box]]

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

    def pieces(self, text: str, weight: Weight) -> Iterator[Piece]:
        """The line in parts that are painted one after the other, each accent apart, over the middle of its letter.

        The accents of this typeface have no width and are drawn around 0; one drawn wholly to the left of 0 strikes
        through the letter before it and stands where the letter ends.
        """
        run = ""
        for letter, accents in _clusters(text):
            if not accents:
                run += letter
                continue
            if run:
                yield Piece(run)
                run = ""
            yield from self._cluster(letter, accents, weight)
        if run:
            yield Piece(run)

    def _cluster(self, letter: str, accents: str, weight: Weight) -> Iterator[Piece]:
        """A letter and its accents; the spaces after them lead from each to the next and back to the letter's end."""
        wide, under = self.advances[weight][ord(letter)], self.boxes[weight].get(ord(letter), _NO_INK)
        middle, top, bottom = under.middle if under is not _NO_INK else wide / 2, under.top, under.bottom
        boxes = [self.boxes[weight].get(ord(accent), _NO_INK) for accent in accents]
        starts = [wide if box.right < 0.0 else middle for box in boxes]
        yield Piece(letter, starts[0] - wide)
        for accent, box, start, following in zip(accents, boxes, starts, [*starts[1:], wide], strict=True):
            kind, rise = unicodedata.combining(accent), 0.0
            if kind == _ABOVE:
                rise = max(0.0, top - X_HEIGHT)
                top = max(top, X_HEIGHT) + box.top - box.bottom + _STACKED_GAP
            elif kind == _BELOW:
                rise = min(0.0, bottom)
                bottom -= box.top - box.bottom + _STACKED_GAP
            yield Piece(accent, following - start - self.advances[weight][ord(accent)], rise)

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


def _clusters(text: str) -> Iterator[tuple[str, str]]:
    """Each letter with the accents after it; an accent with nothing before it is a letter of its own."""
    start = 0
    for place in range(1, len(text) + 1):
        if place == len(text) or not unicodedata.combining(text[place]):
            yield text[start], text[start + 1 : place]
            start = place


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

    return {weight: TTFont(weight.value, BytesIO(_read_font(weight))) for weight in Weight}


@cache
def read_lettering() -> Lettering:
    """The widths of both weights; a character without a width is one the typeface lacks."""
    glyphs = {weight: font.face.charToGlyph for weight, font in read_fonts().items()}
    return Lettering(
        advances={
            weight: {code: font.face.getCharWidth(code) for code in glyphs[weight]}
            for weight, font in read_fonts().items()
        },
        boxes={weight: read_boxes(_read_font(weight), glyphs[weight]) for weight in Weight},
    )


def _read_font(weight: Weight) -> bytes:
    return read_shipped(f"resources/fonts/{weight.value}.ttf")
