"""The ruler with the names and figures of its lanes at the left: three columns in which every view stands."""

from math import ceil

from PySide6.QtCore import QSize
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QLabel, QSizePolicy, QWidget

from clinicalc.assessment.result import Assessment
from clinicalc.gui.figure_view import FigureView, lettering, text_part
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import FIGURE_COLUMN
from clinicalc.gui.typeface import CAPTION
from clinicalc.report.measured import Interval, Measured
from clinicalc.report.ruler import Ruler, RulerSize, draw_ruler
from clinicalc.report.shapes import Figure

RULER_AT = FIGURE_COLUMN + 24
"""Where the ruler's axis begins, from the left edge of the words."""
_LANE, _TEXT, _LEAST_WIDTH = 27.0, 13.0, 120.0
_WIDE_LINE = 1.6
"""Room under the figures of the axis for the line of the wide scale, in text sizes, kept whether it is there or not."""


def overhang() -> int:
    """How far figures and heads may reach beyond the axis: the lanes are so much wider than what stands over them."""
    part = text_part()
    return ceil(RulerSize(0.0, _LANE * part, _TEXT * part).overhang)


def measure_assessment(assessment: Assessment) -> Measured:
    """What a ruler shows of an assessment; without an estimate only the scale."""
    place = next((e for e in assessment.model.equations if e.content.id == assessment.equation), None)
    link = (place or assessment.model.equations[0]).content.link
    estimate = assessment.estimate
    if estimate is None:
        return Measured(link, level=assessment.level)
    band = None if estimate.band is None else Interval(estimate.band.lower, estimate.band.upper)
    return Measured(link, estimate.probability, estimate.complement, band, assessment.level)


class Lanes(QWidget):
    """Shows what was measured; the axis keeps its place whatever there is to draw."""

    def __init__(self) -> None:
        super().__init__()
        self._measured: Measured | None = None
        self._ruler: Ruler | None = None
        self.name = make_line()
        self.figures = make_line("", semibold=True)
        self.caption = make_line("", CAPTION, soft=True)
        self.view = FigureView()
        for child in (self.name, self.figures, self.caption, self.view):
            child.setParent(self)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)

    @property
    def figure(self) -> Figure | None:
        """The ruler's drawing, with its table."""
        return None if self._ruler is None else self._ruler.figure

    def show_measured(self, measured: Measured | None, within: str = "") -> None:
        """Show a ruler, or nothing at all where there is no model; `within` is the horizon in words."""
        self.caption.setText(f"%{f' within {within}' if within else ''}")
        self.setVisible(measured is not None)
        if measured != self._measured:
            self._measured = measured
            self._draw()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """A ruler as wide as there is room."""
        super().resizeEvent(event)
        self._draw()

    def _draw(self) -> None:
        part = text_part()
        if self._measured is None:
            self._ruler = None
            self.view.show_figure(None)
            self.figures.setText("")
            return
        at = RULER_AT * part
        size = RulerSize(max(_LEAST_WIDTH, self.width() - at - overhang()), _LANE * part, _TEXT * part)
        ruler = draw_ruler(self._measured, size, lettering().width)
        self._ruler = ruler
        lane = ruler.lanes[0]
        self.name.setText(lane.name)
        self.figures.setText(lane.figures)
        known = self._measured.probability is not None
        for label in (self.name, self.figures):
            set_ink(label, "" if known else "soft")
        self.view.show_figure(ruler.figure)
        left = round(at - ruler.overhang)
        self.view.setGeometry(left, 0, round(ruler.figure.width) + 1, round(ruler.figure.height) + 1)
        column = FIGURE_COLUMN * part
        _stand(self.name, 0.0, lane.y)
        _stand(self.figures, column - self.figures.sizeHint().width(), lane.y)
        _stand(self.caption, column - self.caption.sizeHint().width(), ruler.figure.baseline)
        self.setFixedHeight(round(ruler.figure.baseline + _WIDE_LINE * _TEXT * part))

    def sizeHint(self) -> QSize:
        """As high as was fixed, as wide as there is room."""
        return QSize(round((RULER_AT + _LEAST_WIDTH) * text_part()), self.height())


def _stand(label: QLabel, x: float, baseline: float) -> None:
    """Put a line of text on a baseline."""
    size = label.sizeHint()
    metrics = label.fontMetrics()
    top = (size.height() - metrics.height()) / 2 + metrics.ascent()
    label.setGeometry(round(x), round(baseline - top), size.width(), size.height())


def set_ink(label: QLabel, ink: str) -> None:
    """Take another ink ("soft", "accent", "" for the usual); style rules are looked up anew only where it changes."""
    if (label.property("ink") or "") != ink:
        label.setProperty("ink", ink)
        label.style().unpolish(label)
        label.style().polish(label)
