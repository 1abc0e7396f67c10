"""How predictions lie: both sides in parts of their own people, their medians, and the words."""

import numpy as np
import pytest

from clinicalc.estimation.calibrated import PredictionSpread
from clinicalc.report.plot_frame import PlotSize
from clinicalc.report.shapes import Figure, Line, Rect, Text, Tone
from clinicalc.report.spread_figure import ShownSpread, draw_spread
from tests.report.calibrations import EVERY_SIZE, every_kind
from tests.report.viewing import MEASURE, assert_inside, assert_no_words_overlap

KINDS = every_kind()
SIZE = PlotSize(440.0)


def drawn(spread: PredictionSpread, size: PlotSize = SIZE) -> Figure:
    shown = ShownSpread(spread, "with the event seen by 5 years", "not seen", "In the people of the fit.")
    return draw_spread(shown, size, MEASURE)


def written(figure: Figure) -> str:
    return " ".join(shape.text for shape in figure.shapes if isinstance(shape, Text))


def bars(figure: Figure, tone: Tone) -> list[Rect]:
    return [shape for shape in figure.shapes if isinstance(shape, Rect) and shape.fill is tone]


@pytest.mark.parametrize("size", EVERY_SIZE)
@pytest.mark.parametrize("kind", KINDS)
def test_everything_stays_inside_and_apart(kind: str, size: PlotSize) -> None:
    figure = drawn(KINDS[kind].spread, size)
    assert_inside(figure)
    assert_no_words_overlap(figure)


def test_each_side_is_drawn_in_parts_of_its_own_people() -> None:
    p = np.array([0.05] * 90 + [0.15] * 10 + [0.15] * 30 + [0.25] * 10)
    had = np.array([False] * 100 + [True] * 40)
    order = np.argsort(p, kind="stable")
    figure = drawn(PredictionSpread(p[order], had[order]))
    above, below = bars(figure, Tone.ACCENT), bars(figure, Tone.HATCH)
    assert len(above) == len(below) == 2
    heights = [bar.height for bar in (*above, *below)]
    tallest = max(heights)
    assert [height / tallest for height in heights] == pytest.approx([0.75 / 0.9, 0.25 / 0.9, 1.0, 0.1 / 0.9])
    (axis,) = (s for s in figure.shapes if isinstance(s, Line) and s.tone is Tone.INK and s.y == s.to_y)
    assert all(bar.y + bar.height == pytest.approx(axis.y) for bar in above)
    assert all(bar.y == pytest.approx(axis.y) for bar in below)


def test_medians_are_dashed_and_said() -> None:
    spread = KINDS["timed"].spread
    figure = drawn(spread)
    dashed = [shape for shape in figure.shapes if isinstance(shape, Line) and shape.dash]
    medians = [float(np.median(spread.predictions[rows])) for rows in (spread.had_event, ~spread.had_event)]
    assert len(dashed) == 2
    assert dashed[0].x > dashed[1].x
    for median in medians:
        assert f"median {100 * median:.1f}\u202f%" in written(figure)
    assert figure.sentence.startswith("Predictions: with the event seen by 5 years, ")
    assert [len(row) for row in figure.table] == [2, 2, 2]
    assert "half of them from" in figure.table[1][1]
    assert "In the people of the fit." in written(figure)


def test_a_side_without_anybody_says_so() -> None:
    figure = drawn(PredictionSpread(np.array([0.1, 0.2, 0.3]), np.zeros(3, dtype=np.bool_)))
    assert bars(figure, Tone.ACCENT) == []
    assert "With the event seen by 5 years, 0 people" in written(figure)
    assert figure.table[1] == ("with the event seen by 5 years, 0 people", "nobody")
    assert_inside(figure)


def test_people_beyond_the_axis_are_counted() -> None:
    p = np.sort(np.append(np.linspace(0.01, 0.2, 500), [0.7, 0.9]))
    figure = drawn(PredictionSpread(p, p > 0.1))
    assert "2 above 20\u202f% not drawn" in written(figure)
