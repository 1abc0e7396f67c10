"""Columns as the window and the print have them, and the reach of what is drawn, for the tests of views."""

from clinicalc.report.columns import Columns
from clinicalc.report.fonts import read_lettering
from clinicalc.report.ruler import RulerSize
from clinicalc.report.shapes import Dot, Figure, Line, Poly, Rect, Shape, Text

MEASURE = read_lettering().width
WINDOW = Columns(RulerSize(436), 248, 272)
COMPACT = Columns(RulerSize(360), 248, 272)
PRINT = Columns(RulerSize(322, 21, 9, 0.75), 176, 188, 10.5)
DOUBLED = Columns(RulerSize(400, 54, 26), 496, 544, 30)
EVERY_SIZE = (WINDOW, COMPACT, PRINT, DOUBLED)


def reach(shape: Shape) -> tuple[float, float, float, float]:
    """Left, top, right and bottom of a shape."""
    match shape:
        case Text():
            wide = MEASURE(shape.text, shape.size, shape.weight)
            return shape.left(wide), shape.y - 0.7 * shape.size, shape.left(wide) + wide, shape.y
        case Line():
            (left, right), (top, bottom) = sorted((shape.x, shape.to_x)), sorted((shape.y, shape.to_y))
            return left, top, right, bottom
        case Rect():
            return shape.x, shape.y, shape.x + shape.width, shape.y + shape.height
        case Dot():
            r = shape.radius
            return shape.x - r, shape.y - r, shape.x + r, shape.y + r
        case Poly():
            xs, ys = [x for x, _ in shape.points], [y for _, y in shape.points]
            return min(xs), min(ys), max(xs), max(ys)


def assert_inside(figure: Figure) -> None:
    """Nothing is drawn beyond the figure."""
    for shape in figure.shapes:
        left, top, right, bottom = reach(shape)
        assert left >= -1e-9, shape
        assert top >= -1e-9, shape
        assert right <= figure.width + 1e-9, shape
        assert bottom <= figure.height + 1e-9, shape


def assert_no_words_overlap(figure: Figure) -> None:
    """No two texts run into each other."""
    texts = [shape for shape in figure.shapes if isinstance(shape, Text)]
    for place, one in enumerate(texts):
        left, top, right, bottom = reach(one)
        for other in texts[place + 1 :]:
            begin, above, end, below = reach(other)
            apart = right <= begin or end <= left or bottom <= above or below <= top
            assert apart, (one.text, other.text)
