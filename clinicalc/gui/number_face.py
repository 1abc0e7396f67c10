"""The number as large text with its people beside it, or the empty seats of its digits."""

from PySide6.QtCore import QSize

from clinicalc.gui.figure_view import FigureView, lettering, text_part
from clinicalc.gui.typeface import NUMBER
from clinicalc.report.dots import SMALL_SIDE, draw_small_grid
from clinicalc.report.number import draw_number, draw_seats
from clinicalc.report.shapes import Figure

BASELINE = 68.0
"""Where the number stands in its widget: the small grid beside it reaches just to the top."""
GRID_AT = 186
_BELOW = 16.0
_SIDE_BEARING = -3.0
_WIDEST = 180.0


class NumberFace(FigureView):
    """Shows one percentage on a fixed baseline, so that nothing moves when it comes or goes."""

    def __init__(self) -> None:
        part = text_part()
        super().__init__(_SIDE_BEARING * part, BASELINE * part)
        self._percentage = ""
        self.setFixedSize(QSize(round(GRID_AT * part), round((BASELINE + _BELOW) * part)))
        self._show_seats()

    @property
    def figure(self) -> str:
        """The figure on screen without its sign, "" when there is none."""
        return self._percentage.removesuffix("%").strip()

    @property
    def percentage(self) -> str:
        """The figure with its sign, "" when there is none."""
        return self._percentage

    def show_percentage(self, percentage: str, sentence: str, *, vetted: bool) -> None:
        """Show a percentage such as "12.2 %"; a screen reader says `sentence`. Soft ink for a file not vetted."""
        part = text_part()
        drawn = draw_number(percentage, lettering().width, vetted=vetted, size=NUMBER * part)
        if drawn.width > _WIDEST * part:  # ">99.9 %": a little smaller, or it would stand in the grid
            size = NUMBER * part * _WIDEST * part / drawn.width
            drawn = draw_number(percentage, lettering().width, vetted=vetted, size=size)
        self._percentage = percentage
        self.show_figure(drawn)
        self.setAccessibleName(f"{drawn.sentence}. {sentence}")

    def clear(self) -> None:
        """Show the empty seats."""
        self._percentage = ""
        self._show_seats()

    def anchor_of(self, figure: Figure) -> float:
        """Its baseline."""
        return figure.baseline

    def _show_seats(self) -> None:
        self.show_figure(draw_seats(lettering().width, size=NUMBER * text_part()))
        self.setAccessibleName("No number")


class SmallGrid(FigureView):
    """The number as 10 x 10 people, on the number's baseline; empty room where there is no number."""

    def __init__(self) -> None:
        super().__init__(0.0, 0.0)
        side = round(SMALL_SIDE * text_part())
        self.setFixedSize(QSize(side, side))

    def show_probability(self, probability: float | None) -> None:
        """Show people, or none."""
        self.show_figure(None if probability is None else draw_small_grid(probability, SMALL_SIDE * text_part()))
