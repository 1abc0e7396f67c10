"""A few figures in a row: what each is, the figure large, its limits under it, thin lines between them."""

from collections.abc import Iterator
from dataclasses import dataclass

from clinicalc.report.columns import wrap_words
from clinicalc.report.plot_frame import LEADING, PlotSize
from clinicalc.report.shapes import Figure, Line, Measure, Shape, Text, Tone

_LARGE = 32.0 / 13.0
"""A key figure by the text beside it."""
_UNIT = 17.0 / 13.0
_PAD = 16.0


@dataclass(frozen=True, slots=True)
class KeyFigure:
    """What it is, the figure ("–" for none), a unit after it, and under it limits, or why there are none."""

    name: str
    figure: str
    unit: str = ""
    under: str = ""


@dataclass(frozen=True, slots=True)
class KeyFigures:
    """All of a row, from the left."""

    figures: tuple[KeyFigure, ...]


def draw_key_figures(shown: KeyFigures, size: PlotSize, measure: Measure) -> Figure:
    """The row, as high as its longest words need."""
    pad = _PAD * size.part
    pitch = (size.width + pad) / max(1, len(shown.figures))
    heads = [list(wrap_words(one.name, pitch - 2 * pad, size.text, measure)) for one in shown.figures]
    top = LEADING * size.text * max(map(len, heads), default=1)
    shapes: list[Shape] = []
    lowest = top
    for place, (one, head) in enumerate(zip(shown.figures, heads, strict=True)):
        left = place * pitch
        texts = list(_one(one, head, left, pitch - 2 * pad, top, size, measure))
        lowest = max([lowest, *(text.y for text in texts)])
        shapes += texts
    height = lowest + 0.35 * size.text
    for place in range(1, len(shown.figures)):
        x = place * pitch - pad
        shapes.append(Line(x, 0.0, x, height, size.line, Tone.RULE))
    table = tuple(
        (one.name, " ".join(part for part in (one.figure, one.unit, one.under) if part)) for one in shown.figures
    )
    sentence = "; ".join(f"{name}: {words}" for name, words in table)
    return Figure(size.width, height, tuple(shapes), sentence, (("Figure", "value"), *table))


def _one(
    one: KeyFigure, head: list[str], left: float, room: float, top: float, size: PlotSize, measure: Measure
) -> Iterator[Text]:
    for place, line in enumerate(head):
        yield Text(left, size.text + LEADING * size.text * place, line, size.text, tone=Tone.SOFT)
    large = _LARGE * size.text
    baseline = top + 1.05 * large
    yield Text(left, baseline, one.figure, large)
    if one.unit:
        beside = left + measure(f"{one.figure} ", large)
        yield Text(beside, baseline, one.unit, _UNIT * size.text)
    for place, line in enumerate(wrap_words(one.under, room, size.text, measure) if one.under else []):
        yield Text(left, baseline + (1.6 + LEADING * place) * size.text, line, size.text, tone=Tone.SOFT)
