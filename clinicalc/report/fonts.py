"""The lettering of a print: which typeface a line is set in, how wide it is, and what may not be printed at all."""

import re
import unicodedata
from collections.abc import Callable, Collection, Iterator, Mapping
from dataclasses import dataclass
from functools import cache

from clinicalc.errors import PrintRefused
from clinicalc.report.outlines import Box
from clinicalc.report.typefaces import X_HEIGHT, Font, Weight, is_lettering, read_first, read_second
from clinicalc.units.quoting import quote

_DISGUISING = frozenset({"Cc", "Cf", "Cs", "Co", "Cn", "Zl", "Zp"})
"""Unicode categories that never show as a character of their own: control, format (bidirectional ones among them)."""

_STACKED_GAP = 50.0
_ACROSS, _ABOVE, _BELOW = 1, 230, 220  # Unicode's canonical combining classes
_AT_THE_END = frozenset({216, 232, 233, 234})
"""The classes of a horn, of marks at the upper right, and of marks that reach over to the next letter."""
_NO_INK = Box(0.0, 0.0, 0.0, 0.0)


@dataclass(frozen=True, slots=True)
class Piece:
    """A part of a line: `space` follows each of its characters, `rise` lifts it; in thousandths of the type size."""

    text: str
    font: Font
    space: float = 0.0
    rise: float = 0.0


@dataclass(frozen=True, slots=True)
class Lettering:
    """Both typefaces by weight; the second is called for only by a text that the first cannot set."""

    first: Mapping[Weight, Font]
    second: Callable[[], Mapping[Weight, Font]]

    def width(self, text: str, size: float, weight: Weight = Weight.REGULAR) -> float:
        """The width of a line of text in points; no kerning, as it is painted."""
        first = self.first[weight]
        try:
            return first.width(text) * size / 1000.0
        except KeyError:
            return sum(font.width(part) for font, part in self.runs(text, weight)) * size / 1000.0

    def runs(self, text: str, weight: Weight) -> Iterator[tuple[Font, str]]:
        """The line in runs of one font, each in a typeface that has the whole of it.

        In regular both typefaces look alike, and a word changes alone. In semibold, in which names stand, the second is
        much the heavier, and the whole line changes.
        """
        if self.first[weight].has(text):
            yield self.first[weight], text
            return
        parts = [text] if weight is Weight.SEMIBOLD else re.findall("[^ ]+ *| +", text)
        for part in parts:
            whole = self._font_for(part, weight)
            if whole is not None:
                yield whole, part
                continue
            for letter, accents in _clusters(part):
                yield self._font_for(letter + accents, weight) or self.first[weight], letter + accents

    def _font_for(self, text: str, weight: Weight) -> Font | None:
        """The first font that has all of the text; None where neither has."""
        if self.first[weight].has(text):
            return self.first[weight]
        return second if (second := self.second()[weight]).has(text) else None

    def wrap(self, text: str, width: float, size: float, weight: Weight = Weight.REGULAR) -> tuple[str, ...]:
        """The text in lines no wider than `width` points; a word wider than a line is broken anywhere."""
        composed = unicodedata.normalize("NFC", text)
        if self.width(composed, size, weight) <= width:
            return (composed,)
        first = self.first[weight]
        if first.has(composed):
            lines = _broken(first, composed, 1000.0 * width / size)
            if lines:
                return lines
        return self._wrap_by_lines(composed, width, size, weight)

    def _wrap_by_lines(self, text: str, width: float, size: float, weight: Weight) -> tuple[str, ...]:
        """Each line measured whole, since its letters may come from two typefaces; words wider than a line broken."""
        lines: list[str] = []
        line = ""
        for place, word in enumerate(text.split(" ")):
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
        """The line in parts that are painted one after the other, each accent apart, over the middle of its letter."""
        for font, part in self.runs(text, weight):
            if part.isascii() or not any(map(unicodedata.combining, part)):  # without accents that stand apart
                yield Piece(part, font)
                continue
            plain = ""
            for letter, accents in _clusters(part):
                if not accents:
                    plain += letter
                    continue
                if plain:
                    yield Piece(plain, font)
                    plain = ""
                yield from _composed(font, letter, accents)
            if plain:
                yield Piece(plain, font)

    def lacks(self, text: str) -> bool:
        """Whether, in one of the weights, neither typeface has all of this text, such as a letter with its accents."""
        short = [weight for weight, font in self.first.items() if not font.has(text)]
        if not short:
            return False
        if not any(is_lettering(character) for character in text):
            return True  # nothing that the second typeface could add
        return not all(self.second()[weight].has(text) for weight in short)

    def _fitting(self, word: str, width: float, size: float, weight: Weight) -> int:
        """How many characters of the word go into a line, at least one; a mark stays with its letter."""
        fits = 0
        while fits < len(word) and self.width(word[: fits + 1], size, weight) <= width:
            fits += 1
        while fits > 1 and fits < len(word) and unicodedata.combining(word[fits]):
            fits -= 1
        return max(fits, 1)


def _broken(font: Font, text: str, width: float) -> tuple[str, ...]:
    """The text in lines no wider than `width`, in thousandths of the type size; () where a word is wider than that."""
    space = font.advances[ord(" ")]
    lines: list[str] = []
    line: list[str] = []
    reach = 0.0
    for word in text.split(" "):
        wide = font.width(word)
        if wide > width:
            return ()
        if line and reach + space + wide > width:
            lines.append(" ".join(line).rstrip(" "))
            line, reach = [word], wide
            continue
        reach += (space if line else 0.0) + wide
        line.append(word)
    return (*lines, " ".join(line))


def _composed(font: Font, letter: str, accents: str) -> Iterator[Piece]:
    """A letter and its accents; the spaces after them lead from each to the next and back to the letter's end."""
    wide, under = font.advances[ord(letter)], font.boxes.get(ord(letter), _NO_INK)
    middle, top, bottom = under.middle if under is not _NO_INK else wide / 2, under.top, under.bottom
    boxes = [font.boxes.get(ord(accent), _NO_INK) for accent in accents]
    kinds = [unicodedata.combining(accent) for accent in accents]
    starts = [
        wide if _stands_at_the_end(kind, box) else middle - font.accents for kind, box in zip(kinds, boxes, strict=True)
    ]
    yield Piece(letter, font, starts[0] - wide)
    for accent, kind, box, start, following in zip(accents, kinds, boxes, starts, [*starts[1:], wide], strict=True):
        rise = 0.0
        if kind == _ABOVE:
            rise = max(0.0, top - X_HEIGHT)
            top = max(top, X_HEIGHT) + box.top - box.bottom + _STACKED_GAP
        elif kind == _BELOW:
            rise = min(0.0, bottom)
            bottom -= box.top - box.bottom + _STACKED_GAP
        yield Piece(accent, font, following - start - font.advances[ord(accent)], rise)


def _stands_at_the_end(kind: int, box: Box) -> bool:
    """Whether an accent is drawn from the end of its letter; a stroke drawn to the left strikes back through it."""
    return kind in _AT_THE_END or (kind == _ACROSS and box.right < 0.0)


def _clusters(text: str) -> Iterator[tuple[str, str]]:
    """Each letter with the accents after it; an accent with nothing before it is a letter of its own."""
    start = 0
    for place in range(1, len(text) + 1):
        if place == len(text) or not unicodedata.combining(text[place]):
            yield text[start], text[start + 1 : place]
            start = place


def check_text(lettering: Lettering, text: str, what: str) -> None:
    """Raises PrintRefused when the print could only show `text` wrongly; `what` names it in the sentence."""
    composed = unicodedata.normalize("NFC", text)
    if not any(map(_is_hidden, composed)) and not lettering.lacks(composed):
        return
    for letter, accents in _clusters(composed):
        cluster = letter + accents
        for end, character in enumerate(cluster, 1):
            if _is_hidden(character) or lettering.lacks(cluster[:end]):
                raise _refused(text, what, character)


def check_texts(lettering: Lettering, texts: Collection[str], what: str) -> None:
    """Raises PrintRefused as `check_text` does for each; their letters are looked at once, all texts together."""
    letters = frozenset(unicodedata.normalize("NFC", " ".join(texts)))
    codes = set(map(ord, letters))
    if all(font.advances.keys() >= codes for font in lettering.first.values()) and not any(map(_is_hidden, letters)):
        return
    for text in texts:
        check_text(lettering, text, what)


@cache
def _is_hidden(character: str) -> bool:
    return unicodedata.category(character) in _DISGUISING


def _refused(text: str, what: str, character: str) -> PrintRefused:
    name = unicodedata.name(character, "")
    why = (
        "a hidden control character, which can make a text look like another."
        if _is_hidden(character)
        else "and the typefaces of the print have no such character. They have Latin, Greek and Cyrillic letters."
    )
    return PrintRefused(
        f"{what} {quote(text)} cannot be printed as it stands: it holds U+{ord(character):04X}"
        f"{f' ({name})' if name else ''},",
        why=why,
        do="Write it without this character. Nothing was printed.",
    )


def read_lettering() -> Lettering:
    """The lettering of the shipped typefaces; the second is not read yet."""
    return Lettering(read_first(), read_second)
