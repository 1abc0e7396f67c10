"""Writes lines of text as operators of a PDF page (ISO 32000-1, 9.4); the PDF library keeps and embeds the fonts.

The library numbers the characters of a font as they are first used in a document. Each number is asked for once, and
the lines are put together from them here: the library would take every line apart, letter by letter.
"""

from typing import Any, cast
from unicodedata import combining

from clinicalc.report.fonts import Lettering, Piece
from clinicalc.report.shapes import Anchor, Text
from clinicalc.report.typefaces import Font, make_known

_ESCAPED = frozenset(b"()\\")


class _Letters:
    """The letters of one font in one document: each as it is written, and in which part of the font it stands."""

    def __init__(self, document: Any, name: str) -> None:
        from reportlab.pdfbase import pdfmetrics

        make_known(name)
        self._document, self._font = document, cast("Any", pdfmetrics.getFont(name))
        self._parts: dict[str, tuple[int, str]] = {}
        self.first: dict[str, str] = {}
        """The letters of the first part, which holds all that most documents use; none that are accents."""

    def learn(self, text: str) -> None:
        """Have every letter of the text numbered."""
        for letter in text:
            if letter not in self._parts:
                ((part, code),) = self._font.splitString(letter, self._document)
                self._parts[letter] = part, _written(code[0])
                if part == 0 and not combining(letter):
                    self.first[letter] = _written(code[0])

    def runs(self, text: str) -> list[tuple[int, str]]:
        """The text by parts of the font, in order."""
        self.learn(text)
        found: list[tuple[int, str]] = []
        for part, letters in map(self._parts.__getitem__, text):
            if found and found[-1][0] == part:
                letters = found.pop()[1] + letters
            found.append((part, letters))
        return found

    def name_of(self, part: int) -> str:
        """What the pages call a part of the font."""
        return str(self._font.getSubsetInternalName(part, self._document))


class Letterer:
    """Writes the lines of one document, page after page."""

    def __init__(self, document: Any, lettering: Lettering) -> None:
        self._document, self._lettering = document, lettering
        self._fonts: dict[str, _Letters] = {}
        self._now = ""

    def begin_page(self) -> None:
        """A page begins without a font."""
        self._now = ""

    def write(self, text: Text, height: float) -> str:
        """The operators of a line, measured from the top of a page that is `height` high; "" for no text.

        One text object, so that it is read back as one.
        """
        if not text.text:
            return ""
        x = text.x
        if text.anchor is not Anchor.START:
            x = text.left(self._lettering.width(text.text, text.size, text.weight))
        shown = self._show_plain(text) or self._show_pieces(text)
        return f"BT 1 0 0 1 {x:.3f} {height - text.y:.3f} Tm {shown} ET"

    def _show_plain(self, text: Text) -> str:
        """A line that the first typeface has whole, without accents that stand apart; "" for another."""
        font = self._lettering.first[text.weight]
        known = self._known(font)
        if not known.first.keys() >= set(text.text):
            if not font.has(text.text):
                return ""
            known.learn(text.text)
            if not known.first.keys() >= set(text.text):
                return ""
        letters = "".join(map(known.first.__getitem__, text.text))
        return f"{self._use(known, 0, text.size * font.scale)}({letters}) Tj"

    def _show_pieces(self, text: Text) -> str:
        """A line piece by piece; accents are set over their letters."""
        parts: list[str] = []
        space = rise = 0.0
        for piece in self._lettering.pieces(text.text, text.weight):
            if piece.space != space:
                parts.append(f"{piece.space * text.size / 1000.0:.3f} Tc")
            if piece.rise != rise:
                parts.append(f"{piece.rise * text.size / 1000.0:.3f} Ts")
            space, rise = piece.space, piece.rise
            parts += self._show_piece(piece, text.size)
        parts += [*(["0 Tc"] if space else []), *(["0 Ts"] if rise else [])]  # both would hold for the next text
        return " ".join(parts)

    def _show_piece(self, piece: Piece, size: float) -> list[str]:
        known = self._known(piece.font)
        scale = size * piece.font.scale
        return [f"{self._use(known, part, scale)}({letters}) Tj" for part, letters in known.runs(piece.text)]

    def _use(self, letters: _Letters, part: int, size: float) -> str:
        """The operator that changes the font, where it is not in use already."""
        wanted = f"{letters.name_of(part)} {size:.3f} Tf "
        if wanted == self._now:
            return ""
        self._now = wanted
        return wanted

    def _known(self, font: Font) -> _Letters:
        if font.name not in self._fonts:
            self._fonts[font.name] = _Letters(self._document, font.name)
        return self._fonts[font.name]


def _written(code: int) -> str:
    """One byte of a string of the page: itself where it is a plain letter, else in octal digits."""
    if code in _ESCAPED:
        return f"\\{chr(code)}"
    return chr(code) if 32 <= code < 127 else f"\\{code:03o}"
