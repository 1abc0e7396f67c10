"""A few figures in a row: every word of them, inside and apart."""

import pytest

from clinicalc.report.key_figures import KeyFigure, KeyFigures, draw_key_figures
from clinicalc.report.plot_frame import PlotSize
from clinicalc.report.shapes import Line, Text
from tests.report.viewing import MEASURE, assert_inside, assert_no_words_overlap

ROW = KeyFigures(
    (
        KeyFigure("Observed / expected", "0.85", "", "0.77 to 0.94"),
        KeyFigure("Calibration slope", "0.97", "", "0.84 to 1.10"),
        KeyFigure("C", "–", "", "no figure, see the table"),
        KeyFigure("Scaled Brier score", "−12.1", "%", "−13.4 to 6.6\u202f%"),
        KeyFigure("Mean calibration error (ICI)", "1.2", "points", "Its limits have no formula."),
    )
)


@pytest.mark.parametrize("size", [PlotSize(510.0, 9.0, 0.75), PlotSize(764.0), PlotSize(1400.0, 26.0)])
def test_everything_stays_inside_and_apart(size: PlotSize) -> None:
    figure = draw_key_figures(ROW, size, MEASURE)
    assert_inside(figure)
    assert_no_words_overlap(figure)
    said = " ".join(shape.text for shape in figure.shapes if isinstance(shape, Text))
    for one in ROW.figures:
        for words in (one.name, one.figure, one.unit, one.under):
            assert all(word in said for word in words.split(" "))


def test_lines_stand_between_them_and_words_say_all() -> None:
    figure = draw_key_figures(ROW, PlotSize(510.0, 9.0, 0.75), MEASURE)
    assert len([shape for shape in figure.shapes if isinstance(shape, Line)]) == 4
    assert figure.table[4] == ("Scaled Brier score", "−12.1 % −13.4 to 6.6\u202f%")
    assert "Calibration slope: 0.97 0.84 to 1.10" in figure.sentence
