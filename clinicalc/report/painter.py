"""Paints shapes into a PDF: the only place that talks to the PDF library's canvas about drawing.

Lines, boxes, dots and outlines are written as operators of the page (ISO 32000-1, 8.5), each colour and line width only
where it changes; `letterer` writes the texts.
"""

from collections.abc import Iterable, Iterator, Sequence
from functools import cache, lru_cache
from itertools import groupby
from typing import Any, assert_never

from clinicalc.report.fonts import Lettering
from clinicalc.report.letterer import Letterer
from clinicalc.report.pages import Page
from clinicalc.report.palette import PAPER
from clinicalc.report.shapes import Dot, Line, Poly, Rect, Shape, Text, Tone

_ROUND = 0.5522847498
"""How far the handles of a curve stand from its ends so that four of them make a circle, in radii: 4/3 (√2 - 1)."""


def paint_pages(canvas: Any, lettering: Lettering, pages: Sequence[Page]) -> None:
    """Every page, in order, shapes in the order in which they are to be read."""
    letterer = Letterer(canvas._doc, lettering)
    for page in pages:
        canvas.setPageSize((page.width, page.height))
        _paint_all(canvas, letterer, page.shapes, page.height)
        canvas.showPage()


def paint_shapes(canvas: Any, lettering: Lettering, shapes: Iterable[Shape], height: float) -> None:
    """Shapes measured in points from the top left corner of a page that is `height` points high."""
    _paint_all(canvas, Letterer(canvas._doc, lettering), shapes, height)


def _paint_all(canvas: Any, letterer: Letterer, shapes: Iterable[Shape], height: float) -> None:
    inks = _Inks(canvas)
    letterer.begin_page()
    for style, run in groupby(shapes, key=_style):
        if style is not None:
            _paint_alike(canvas, inks, list(run), height)
            continue
        for shape in run:
            match shape:
                case Text():
                    inks.fill(shape.tone)
                    canvas.addLiteral(letterer.write(shape, height))
                case Rect():
                    _paint(canvas, inks, shape, _box(shape, height))
                case Poly():
                    _paint(canvas, inks, shape, _corners(shape, height))
                case Line() | Dot():
                    _paint_alike(canvas, inks, [shape], height)
                case _:
                    assert_never(shape)


class _Inks:
    """The colours and the line width that the page has now."""

    def __init__(self, canvas: Any) -> None:
        self._canvas = canvas
        self._now: dict[str, str] = {}

    def fill(self, tone: Tone) -> None:
        """Areas and letters in this ink from here on."""
        self._set("rg", _colour(tone))

    def stroke(self, tone: Tone, width: float) -> None:
        """Lines in this ink and width from here on."""
        self._set("RG", _colour(tone))
        self._set("w", f"{width:.3f}")

    def _set(self, operator: str, operands: str) -> None:
        if self._now.get(operator) != operands:
            self._now[operator] = operands
            self._canvas.addLiteral(f"{operands} {operator}")


def _style(shape: Shape) -> tuple[object, ...] | None:
    """What lines or dots have in common that are painted in one go; None for anything else."""
    if isinstance(shape, Line):
        return shape.tone, shape.width, shape.dash
    return (shape.radius, shape.fill, shape.outline, shape.line) if isinstance(shape, Dot) else None


def _paint_alike(canvas: Any, inks: _Inks, shapes: Sequence[Shape], height: float) -> None:
    """Lines or dots of one style."""
    if isinstance(shapes[0], Line):
        _stroke(canvas, inks, shapes, height)
    elif isinstance(shapes[0], Dot):
        _dot(canvas, inks, shapes[0], [shape for shape in shapes if isinstance(shape, Dot)], height)


def _stroke(canvas: Any, inks: _Inks, lines: Sequence[Shape], height: float) -> None:
    """Lines of one style as one path."""
    plain = [line for line in lines if isinstance(line, Line)]
    inks.stroke(plain[0].tone, plain[0].width)
    dash = plain[0].dash
    path = " ".join(
        f"{line.x:.3f} {height - line.y:.3f} m {line.to_x:.3f} {height - line.to_y:.3f} l" for line in plain
    )
    before, after = (f"[{dash:.3f} {dash:.3f}] 0 d ", " [] 0 d") if dash else ("", "")  # it would hold for the next
    canvas.addLiteral(f"{before}{path} S{after}")


def _paint(canvas: Any, inks: _Inks, shape: Rect | Dot | Poly, path: str) -> None:
    """Fills the path, strokes it, or both."""
    _ink(inks, shape)
    canvas.addLiteral(f"{path} {_operator(shape)}")


def _ink(inks: _Inks, shape: Rect | Dot | Poly) -> None:
    """The colours and the line width of a shape from here on."""
    if shape.fill is not None:
        inks.fill(shape.fill)
    if shape.outline is not None:
        inks.stroke(shape.outline, shape.line)


def _operator(shape: Rect | Dot | Poly) -> str:
    """What is done with the path of a shape."""
    operators = {(True, True): "B", (True, False): "f", (False, True): "S", (False, False): "n"}
    return operators[shape.fill is not None, shape.outline is not None]


def _box(rect: Rect, height: float) -> str:
    bottom = height - rect.y - rect.height
    if not rect.radius:
        return f"{rect.x:.3f} {bottom:.3f} {rect.width:.3f} {rect.height:.3f} re"
    left, right, top, radius = rect.x, rect.x + rect.width, bottom + rect.height, rect.radius
    corners = (
        (right - radius, bottom + radius, 0, -1),
        (right - radius, top - radius, 1, 0),
        (left + radius, top - radius, 0, 1),
        (left + radius, bottom + radius, -1, 0),
    )
    return _rounded(corners, radius)


def _dot(canvas: Any, inks: _Inks, like: Dot, dots: Sequence[Dot], height: float) -> None:
    """Circles of one style: the same path again and again, its origin moved from each to the next."""
    _ink(inks, like)
    path = f"{_circle(like.radius)} {_operator(like)}"
    parts, x, y = ["q"], 0.0, 0.0
    for dot in dots:
        to_x, to_y = round(dot.x, 3), round(height - dot.y, 3)  # so that what is cut off does not add up
        parts.append(f"1 0 0 1 {to_x - x:.3f} {to_y - y:.3f} cm {path}")
        x, y = to_x, to_y
    canvas.addLiteral(" ".join([*parts, "Q"]))


@lru_cache(maxsize=16)
def _circle(radius: float) -> str:
    """A circle round the origin."""
    return _rounded(((0.0, 0.0, 0, -1), (0.0, 0.0, 1, 0), (0.0, 0.0, 0, 1), (0.0, 0.0, -1, 0)), radius)


def _rounded(corners: Iterable[tuple[float, float, int, int]], radius: float) -> str:
    """Quarters of circles, anticlockwise, joined by straight lines; each by its middle and the direction it begins."""
    return " ".join(_quarters(corners, radius)) + " h"


def _quarters(corners: Iterable[tuple[float, float, int, int]], radius: float) -> Iterator[str]:
    handle = radius * _ROUND
    for place, (x, y, dx, dy) in enumerate(corners):
        # from (dx, dy) a quarter further on to (-dy, dx)
        start_x, start_y, end_x, end_y = x + radius * dx, y + radius * dy, x - radius * dy, y + radius * dx
        yield f"{start_x:.3f} {start_y:.3f} {'l' if place else 'm'}"
        yield (
            f"{start_x - handle * dy:.3f} {start_y + handle * dx:.3f} {end_x + handle * dx:.3f}"
            f" {end_y + handle * dy:.3f} {end_x:.3f} {end_y:.3f} c"
        )


def _corners(poly: Poly, height: float) -> str:
    strokes = (f"{x:.3f} {height - y:.3f} {'l' if place else 'm'}" for place, (x, y) in enumerate(poly.points))
    return " ".join(strokes) + (" h" if poly.fill is not None else "")


@cache
def _colour(tone: Tone) -> str:
    """Red, green and blue from 0 to 1, as the operators of a page take them."""
    digits = PAPER[tone].removeprefix("#")
    return " ".join(f"{int(digits[place : place + 2], 16) / 255:.4f}" for place in (0, 2, 4))
