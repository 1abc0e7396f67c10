"""The three columns in which every view of a result stands: label, figure, ruler."""

from collections.abc import Iterator
from dataclasses import dataclass

from clinicalc.report.ruler import RulerSize
from clinicalc.report.shapes import Anchor, Measure, Shape, Text, Tone
from clinicalc.report.typefaces import Weight

_GAP = 12.0
_BETWEEN = 7.0
_LEADING = 1.15


@dataclass(frozen=True, slots=True)
class Columns:
    """Where figures end and where the ruler's axis begins, from the left edge of the labels.

    `base` is the size of labels and figures; what stands soft beside them is as large as the figures under the axis.
    """

    ruler: RulerSize
    figures_end: float
    ruler_at: float
    base: float = 15.0

    @property
    def width(self) -> float:
        """All three columns, with what may reach beyond the axis at its right end."""
        return self.ruler_at + self.ruler.width + self.ruler.overhang


@dataclass(frozen=True, slots=True)
class RowWords:
    """What stands in the label column, `detail` soft after it, and the figure at the end of its column."""

    label: str
    figure: str
    detail: str = ""
    soft: bool = False


@dataclass(frozen=True, slots=True)
class SetRow:
    """A row's words as texts, the first baseline at nought, and how far below it the last one stands."""

    texts: tuple[Text, ...]
    deeper: float


def set_row(row: RowWords, columns: Columns, measure: Measure) -> SetRow:
    """The words in one line, or in as many as they need: nothing is cut off or made smaller."""
    small = columns.ruler.text
    weight = Weight.REGULAR if row.soft else Weight.SEMIBOLD
    tone = Tone.SOFT if row.soft else Tone.INK
    size = small if row.soft else columns.base
    room = columns.figures_end - measure(row.figure, size, weight) - _GAP * columns.ruler.part
    texts = [Text(columns.figures_end, 0.0, row.figure, size, weight, tone, Anchor.END)]
    lines = list(wrap_words(row.label, room, columns.base, measure))
    pitch = _LEADING * columns.base
    texts += [Text(0.0, pitch * place, line, columns.base) for place, line in enumerate(lines)]
    last = pitch * (len(lines) - 1)
    if not row.detail:
        return SetRow(tuple(texts), last)
    after = measure(lines[-1], columns.base) + _BETWEEN * columns.ruler.part
    if after + measure(row.detail, small) <= room:
        return SetRow((*texts, Text(after, last, row.detail, small, tone=Tone.SOFT)), last)
    for line in wrap_words(row.detail, room, small, measure):
        last += pitch
        texts.append(Text(0.0, last, line, small, tone=Tone.SOFT))
    return SetRow(tuple(texts), last)


def place_row(row: SetRow, baseline: float) -> Iterator[Shape]:
    """The texts with the first of them on a baseline."""
    return (text.moved(0.0, baseline) for text in row.texts)


def wrap_words(text: str, room: float, size: float, measure: Measure) -> Iterator[str]:
    """Lines no wider than the room; a word that is wider stands broken."""
    line = ""
    for word in text.split(" "):
        longer = f"{line} {word}" if line else word
        if measure(longer, size) <= room:
            line = longer
            continue
        if line:
            yield line
        line = word
        while measure(line, size) > room and len(line) > 1:
            fits = next(end for end in range(len(line) - 1, 0, -1) if end == 1 or measure(line[:end], size) <= room)
            yield line[:fits]
            line = line[fits:]
    yield line
