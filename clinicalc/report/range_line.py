"""The remark beside a value: the range of the people a model was made from, and where this value lies in it."""

from dataclasses import dataclass

from clinicalc.report.shapes import Anchor, Figure, Line, Measure, Shape, Text, Tone, pointer
from clinicalc.report.typefaces import Weight

WIDTH, HEIGHT = 128.0, 20.0
_LOW_ENDS, _LINE_STARTS, _LINE_WIDTH = 26.0, 34.0, 56.0
_GAP, _POINTER, _POINTER_GAP = 7.0, 6.0, 3.0
_TICK, _MARK = 4.0, 7.0
"""Half the height of the ends and of the value's tick."""


@dataclass(frozen=True, slots=True)
class RangeOfValues:
    """Both limits in the unit on screen, with their texts; a side that is open is None and ""."""

    low: float | None
    high: float | None
    low_text: str = ""
    high_text: str = ""


def draw_range(
    span: RangeOfValues, value: float | None, measure: Measure, *, inside: bool, size: float = 13.0
) -> Figure:
    """The range as a line with its ends and a tick at the value; outside, that end in semibold and a pointer beyond.

    `inside` is what the assessment found, so that figure and finding never disagree over the last digit; it is of no
    account where `value` is None. Columns of such lines stand under each other; a wide figure moves its line.
    """
    part = size / 13.0
    middle, baseline = HEIGHT * part / 2, HEIGHT * part / 2 + 0.33 * size
    side = 0 if value is None or inside else _side(span, value)
    weights = [Weight.SEMIBOLD if side == end else Weight.REGULAR for end in (-1, 1)]
    tones = [Tone.INK if side == end else Tone.SOFT for end in (-1, 1)]
    low_width = measure(span.low_text, size, weights[0])
    high_width = measure(span.high_text, size, weights[1])
    beyond = (_POINTER + _POINTER_GAP) * part
    low_end = max(_LOW_ENDS * part, low_width + beyond if span.low_text else 0.0)
    start = low_end + (_LINE_STARTS - _LOW_ENDS) * part
    line = min(_LINE_WIDTH * part, max(24.0 * part, WIDTH * part - start - _GAP * part - high_width - beyond))
    end = start + line
    shapes: list[Shape] = [
        Line(start, middle, end, middle, 1, Tone.EDGE),
        *(Line(x, middle - _TICK * part, x, middle + _TICK * part, 1, Tone.EDGE) for x in _closed(span, start, end)),
    ]
    if span.low_text:
        shapes.append(Text(low_end, baseline, span.low_text, size, weights[0], tones[0], Anchor.END))
    if span.high_text:
        shapes.append(Text(end + _GAP * part, baseline, span.high_text, size, weights[1], tones[1]))
    if side < 0:
        shapes.append(pointer(low_end - low_width - beyond, middle, -_POINTER * part, Tone.INK))
    elif side > 0:
        shapes.append(pointer(end + _GAP * part + high_width + beyond, middle, _POINTER * part, Tone.INK))
    elif value is not None and span.low is not None and span.high is not None:
        reach = span.high - span.low
        x = start + line * (min(max((value - span.low) / reach, 0.0), 1.0) if reach > 0 else 0.5)
        shapes.append(Line(x, middle - _MARK * part, x, middle + _MARK * part, 2, Tone.ACCENT))
    words = _words(span)
    sentence = f"Derivation range {words}{('', ', the value lies above it', ', the value lies below it')[side]}"
    width = max(WIDTH * part, end + _GAP * part + high_width + beyond)
    return Figure(width, HEIGHT * part, tuple(shapes), sentence, (("Derivation range", words),), baseline)


def _side(span: RangeOfValues, value: float) -> int:
    """On which side of the range a value lies that is not inside."""
    if span.low is None:
        return 1
    if span.high is None:
        return -1
    return -1 if abs(value - span.low) < abs(value - span.high) else 1


def _closed(span: RangeOfValues, start: float, end: float) -> list[float]:
    """Where the line is closed by an end."""
    return [x for x, limit in ((start, span.low), (end, span.high)) if limit is not None]


def _words(span: RangeOfValues) -> str:
    if span.low is None:
        return f"up to {span.high_text}" if span.high is not None else "open"
    return f"{span.low_text} to {span.high_text}" if span.high is not None else f"{span.low_text} and above"
