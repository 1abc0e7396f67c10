"""The number as the largest text there is, or the empty seats of its digits."""

from clinicalc.report.shapes import Dot, Figure, Line, Measure, Shape, Text, Tone

SIZE = 76.0
SIGN_PART = 32.0 / 76.0
"""Size of the percent sign by that of the digits."""
_SEATS = (0.0, 44.0, 96.0)
_SEAT_WIDTH, _POINT_AT, _SIGN_AT = 36.0, 88.0, 142.0
_RISE, _FALL = 0.72, 0.26
"""How far digits and sign reach above and below the baseline, in sizes."""


def draw_number(percentage: str, measure: Measure, *, vetted: bool, size: float = SIZE) -> Figure:
    """A percentage such as "12.2 %" or "<0.1 %", digits and sign on one baseline.

    In accent, or in soft ink for a file that is not vetted. The text after it begins at the figure's width.
    """
    digits = percentage.removesuffix("%").strip()
    tone = Tone.ACCENT if vetted else Tone.SOFT
    baseline, sign = _RISE * size, SIGN_PART * size
    sign_at = measure(digits, size) + 0.08 * size
    shapes = (Text(0, baseline, digits, size, tone=tone), Text(sign_at, baseline, "%", sign, tone=tone))
    return Figure(
        width=sign_at + measure("%", sign),
        height=baseline + _FALL * size,
        shapes=shapes,
        sentence=percentage if vetted else f"{percentage}, from a file that is not vetted",
        table=(("Probability", percentage),),
        baseline=baseline,
    )


def draw_seats(measure: Measure, *, size: float = SIZE) -> Figure:
    """Four empty seats (two digits, the point, a digit) and the sign: there is no number, and none is hinted at."""
    part, baseline = size / SIZE, _RISE * size
    line = 2.0 * max(1.0, part)
    sign = SIGN_PART * size
    shapes: list[Shape] = [
        Line(x * part, baseline - 1, (x + _SEAT_WIDTH) * part, baseline - 1, line, Tone.EDGE) for x in _SEATS
    ]
    shapes.append(Dot(_POINT_AT * part, baseline - 2 * part, 2.5 * part, fill=Tone.EDGE))
    shapes.append(Text(_SIGN_AT * part, baseline, "%", sign, tone=Tone.EDGE))
    return Figure(
        width=_SIGN_AT * part + measure("%", sign),
        height=baseline + _FALL * size,
        shapes=tuple(shapes),
        sentence="No number",
        table=(("Probability", "no number"),),
        baseline=baseline,
    )
