"""Plots as large as there is room, each with its table as text behind it."""

from collections.abc import Callable

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.gui.figure_view import FigureView, lettering, table_lines, text_part
from clinicalc.gui.text_link import OpenedText, TextLink
from clinicalc.report.calibration_figure import ShownCalibration, draw_calibration
from clinicalc.report.plot_frame import PlotSize
from clinicalc.report.shapes import Figure, Measure

AS_TEXT, CLOSE = "Chart as text", "Close the text"
_WIDEST, _NARROWEST, _TEXT = 720.0, 200.0, 13.0
"""Width of the plot with what is written under it, at the usual text size."""


class PlotView(QWidget):
    """As wide as there is room, up to the width at which lines are still read with ease."""

    def __init__(self, draw: Callable[[PlotSize, Measure], Figure]) -> None:
        """`draw` makes the figure at a size, with the lettering's measure of widths."""
        super().__init__()
        self._draw = draw
        self._drawn: PlotSize | None = None
        self.view = FigureView()
        self.as_text = TextLink(AS_TEXT)
        self.text = OpenedText(AS_TEXT)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 4, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.view)
        column.addWidget(self.as_text, 0, Qt.AlignmentFlag.AlignLeft)
        column.addWidget(self.text)
        self.as_text.clicked.connect(self._toggle)

    @property
    def words(self) -> str:
        """What the figure says, in a sentence and the lines of its table."""
        figure = self.view.figure_shown
        return "" if figure is None else "\n".join((figure.sentence, *table_lines([figure])))

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Drawn anew for another width."""
        super().resizeEvent(event)
        self.fit(event.size().width())

    def fit(self, width: int) -> None:
        """Take a width, and the height of the figure at it."""
        part = text_part()
        size = PlotSize(min(_WIDEST * part, max(_NARROWEST, float(width))), _TEXT * part)
        if size == self._drawn:
            return
        self._drawn = size
        self.view.show_figure(self._draw(size, lettering().width))
        self.view.setFixedHeight(self.view.sizeHint().height())  # the width stays free, or no window could shrink

    def _toggle(self) -> None:
        opens = self.text.isHidden()
        self.text.setVisible(opens)
        self.as_text.say(CLOSE if opens else AS_TEXT)
        figure = self.view.figure_shown
        self.text.show_lines(table_lines([figure]) if opens and figure is not None else [])


class CalibrationView(PlotView):
    """Predicted and observed."""

    def __init__(self, shown: ShownCalibration) -> None:
        super().__init__(lambda size, measure: draw_calibration(shown, size, measure))
