"""Shares as a walk on the ruler: from the reference person, step by step, the largest first, to this patient.

Steps are lengths on the link scale, on which shares add up. Filled steps raise, open steps lower; no colour judges.
"""

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from clinicalc.assessment.numerals import MINUS, percent, plain
from clinicalc.assessment.shares import Share, Shares
from clinicalc.prediction.links import Link, probability
from clinicalc.report.columns import Columns, RowWords, SetRow, place_row, set_row
from clinicalc.report.ruler import RulerSize, draw_axis_figures, draw_body
from clinicalc.report.scale import Scale, choose_scale, on_link
from clinicalc.report.shapes import Anchor, Dot, Figure, Line, Measure, Rect, Shape, Text, Tone, pointer

SHARES_MEANING = "Each step is a share on the model’s link scale; open steps lower."
"""Stands over the figure, or under it in print."""

_ROW = 22.0
_BAR, _OPEN_LINE, _DOT = 12.0, 1.6, 4.5
_SMALLEST = 0.005
"""Shares below this would be written as 0.00; they get another digit."""


@dataclass(frozen=True, slots=True)
class Walk:
    """What is drawn: the shares of a number, with what the first and the last row are called in a few words.

    `reference` is such as "woman of 55", `patient` such as "matching age 75" where that was asked for, else "".
    `also` are the probabilities that the sheet's ruler holds, so that both have the same scale; `caption` is the unit
    of the axis: "% within 10 years". `shown` is the number as it is written elsewhere, "" for one decimal.
    """

    link: Link
    shares: Shares
    probability: float
    complement: float
    reference: str = ""
    patient: str = ""
    caption: str = ""
    also: tuple[float, ...] = ()
    shown: str = ""

    @property
    def figure(self) -> str:
        """The number in figures."""
        return self.shown or percent(self.probability, self.complement)


def draw_shares(walk: Walk, columns: Columns, measure: Measure) -> Figure:
    """The walk with its labels and figures; its `baseline` is that of the figures under the axis."""
    size, shares = columns.ruler, walk.shares
    etas = _way(shares)
    reached = (float(at) for at in probability(walk.link, np.array(etas)))
    scale = choose_scale(walk.link, size.width, walk.probability, *reached, *walk.also, left=columns.ruler_at)
    rows = [set_row(words, columns, measure) for words in _words(walk)]
    tops = _tops(rows, size)
    axis = tops[-1] + 8.0 * size.part
    baseline = axis + 1.3 * size.text
    middles = [top + 0.5 * _ROW * size.part for top in tops[:-1]]
    shapes: list[Shape] = [*draw_body(scale, 0.0, axis, size)]
    shapes += _hairline(scale, etas[-1], middles[-1], axis, size)
    shapes += _steps(scale, etas, middles, size)
    for row, middle in zip(rows, middles, strict=True):
        shapes += place_row(row, middle + 0.34 * columns.base)
    shapes += draw_axis_figures(scale, baseline, size, measure)
    shapes.append(Text(columns.figures_end, baseline, walk.caption, size.text, tone=Tone.SOFT, anchor=Anchor.END))
    return Figure(
        width=columns.width,
        height=baseline + (1.6 if scale.wide else 0.3) * size.text,
        shapes=tuple(shapes),
        sentence=_sentence(walk),
        table=_table(walk),
        baseline=baseline,
    )


def share_words(amount: float) -> str:
    """A share with its sign and two decimals, more where they would be nought: "+0.58", "−0.19", "+0.003"."""
    size = plain(abs(amount), 1) if abs(amount) < _SMALLEST else f"{abs(amount):.2f}"
    return f"{MINUS if amount < 0 else '+'}{size}"


def _way(shares: Shares) -> list[float]:
    """The linear predictor at the reference person and after every step."""
    etas = [shares.reference_eta]
    for step in shares.steps:
        etas.append(etas[-1] + step.amount)
    return etas


def _words(walk: Walk) -> Iterator[RowWords]:
    shares = walk.shares
    yield RowWords("Reference person", percent(shares.reference_probability), walk.reference)
    for step in shares.steps:
        yield RowWords(step.label, share_words(step.amount), step.own)
    yield RowWords("This patient", walk.figure, walk.patient)


def _tops(rows: list[SetRow], size: RulerSize) -> list[float]:
    """Where each row begins, and after them where the last one ends."""
    tops = [0.0]
    for row in rows:
        tops.append(tops[-1] + _ROW * size.part + row.deeper)
    return tops


def _place(scale: Scale, eta: float) -> float:
    """The x of a linear predictor; one beyond an end stands at that end."""
    start, stop = (on_link(scale.link, end) for end in scale.ends)
    return scale.left + scale.width * (min(max(eta, start), stop) - start) / (stop - start)


def _steps(scale: Scale, etas: list[float], middles: list[float], size: RulerSize) -> Iterator[Shape]:
    """Open dot, bars and filled dot, joined by thin lines from row to row."""
    xs = [_place(scale, eta) for eta in etas]
    radius, half, line = _DOT * size.part, 0.5 * _BAR * size.part, size.line
    reach = [radius, *(half for _ in etas[1:]), radius]
    for place, x in enumerate(xs):
        upper, lower = middles[place] + reach[place], middles[place + 1] - reach[place + 1]
        yield Line(x, upper, x, lower, line, Tone.INK)
    for place, middle in enumerate(middles[1:-1]):
        yield from _bar(xs[place], xs[place + 1], middle, size, raises=etas[place + 1] > etas[place])
    yield Dot(xs[0], middles[0], radius, fill=Tone.SHEET, outline=Tone.INK, line=_OPEN_LINE * line)
    yield Dot(xs[-1], middles[-1], radius + 0.8 * line, fill=Tone.ACCENT)
    start, stop = (on_link(scale.link, end) for end in scale.ends)
    for eta, middle in ((etas[0], middles[0]), (etas[-1], middles[-1])):
        if eta < start:
            yield pointer(scale.left - 9.0 * size.part, middle, -6.0 * size.part, Tone.INK)
        elif eta > stop:
            yield pointer(scale.left + scale.width + 9.0 * size.part, middle, 6.0 * size.part, Tone.INK)


def _bar(start: float, stop: float, middle: float, size: RulerSize, *, raises: bool) -> Iterator[Shape]:
    """A filled or an open box; too narrow for one it is a stroke, and an open stroke has a gap in its middle."""
    half, line = 0.5 * _BAR * size.part, _OPEN_LINE * size.line
    left, wide = min(start, stop), abs(stop - start)
    top, height = middle - half, 2 * half
    if raises and wide >= 2 * size.line:
        yield Rect(left, top, wide, height, fill=Tone.ACCENT)
    elif not raises and wide >= 3 * line:
        inner = line / 2
        yield Rect(left + inner, top + inner, wide - line, height - line, Tone.SHEET, Tone.ACCENT, line)
    else:
        x, gap = left + wide / 2, 0.0 if raises else 0.4 * half
        yield Line(x, top, x, middle - gap, 2 * size.line, Tone.ACCENT)
        yield Line(x, middle + gap, x, top + height, 2 * size.line, Tone.ACCENT)


def _hairline(scale: Scale, eta: float, last: float, axis: float, size: RulerSize) -> Iterator[Shape]:
    """This patient on the axis, thinner than on the sheet's ruler: the smallest steps end at it and must be seen."""
    start, stop = (on_link(scale.link, end) for end in scale.ends)
    x, top = _place(scale, eta), 0.0 if start <= eta <= stop else last
    yield Line(x, top, x, axis, size.line, Tone.ACCENT)


def _said(step: Share) -> str:
    return f"{step.label} {step.own}, reference {step.reference}"


def _sentence(walk: Walk) -> str:
    """The walk in words for a screen reader."""
    begin, end = percent(walk.shares.reference_probability), walk.figure
    who = f" ({walk.reference})" if walk.reference else ""
    opening = f"From {begin} for the reference person{who} to {end} for this patient"
    if not walk.shares.steps:
        return f"{opening}: no value differs"
    steps = "; ".join(f"{_said(step)}: {share_words(step.amount)}" for step in walk.shares.steps)
    return f"{opening}, shares on the link scale. {steps}"


def _table(walk: Walk) -> tuple[tuple[str, ...], ...]:
    """Name and figure of every row, with the reference person's value beside the patient's."""
    first = f"Reference person, {walk.reference}" if walk.reference else "Reference person"
    last = f"This patient, {walk.patient}" if walk.patient else "This patient"
    return (
        (first, percent(walk.shares.reference_probability)),
        *((_said(step), share_words(step.amount)) for step in walk.shares.steps),
        (last, walk.figure),
    )
