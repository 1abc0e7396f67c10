"""The ruler with the names and figures of its lanes at the left: three columns in which every view stands."""

from dataclasses import dataclass
from itertools import zip_longest
from math import ceil

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QLabel, QSizePolicy, QWidget

from clinicalc.gui.figure_view import FigureView, lettering, text_part
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import FIGURE_COLUMN
from clinicalc.gui.typeface import BASE, CAPTION
from clinicalc.report.columns import Columns
from clinicalc.report.measured import APPROXIMATE, Lane, Measured
from clinicalc.report.ruler import Ruler, RulerSize, draw_ruler
from clinicalc.report.shapes import Figure

RULER_AT = FIGURE_COLUMN + 24
"""Where the ruler's axis begins, from the left edge of the words."""
_LANE, _TEXT, _LEAST_WIDTH, _GAP = 27.0, 13.0, 120.0, 6.0
_WIDE_LINE = 1.6
"""Room under the figures of the axis for the line of the wide scale, in text sizes, kept whether it is there or not."""


def overhang() -> int:
    """How far figures and heads may reach beyond the axis: the lanes are so much wider than what stands over them."""
    part = text_part()
    return ceil(RulerSize(0.0, _LANE * part, _TEXT * part).overhang)


def columns_in(width: int) -> Columns:
    """The three columns of a view that is as wide as the lanes: labels, figures, and a ruler like theirs."""
    part = text_part()
    room = max(_LEAST_WIDTH, width - RULER_AT * part - overhang())
    return Columns(RulerSize(room, _LANE * part, _TEXT * part), FIGURE_COLUMN * part, RULER_AT * part, BASE * part)


@dataclass(frozen=True, slots=True)
class LaneLabels:
    """The words beside one lane."""

    name: QLabel
    figures: QLabel


class Lanes(QWidget):
    """Shows what was measured; the lanes and the axis keep their place whatever there is to draw."""

    def __init__(self) -> None:
        super().__init__()
        self._measured: Measured | None = None
        self._lanes: tuple[Lane, ...] = (Lane.BAND,)
        self._ruler: Ruler | None = None
        self.rows: list[LaneLabels] = []
        self.caption = make_line("", CAPTION, soft=True)
        self.view = FigureView()
        for child in (self.caption, self.view):
            child.setParent(self)
        self._add_row()
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)

    @property
    def figure(self) -> Figure | None:
        """The ruler's drawing, with its table."""
        return None if self._ruler is None else self._ruler.figure

    def show_measured(
        self, measured: Measured | None, within: str = "", lanes: tuple[Lane, ...] = (Lane.BAND,)
    ) -> None:
        """Show a ruler, or nothing at all where there is no model; `within` is the horizon in words."""
        caption = f"%{f' within {within}' if within else ''}"
        stays = (caption, measured, lanes) == (self.caption.text(), self._measured, self._lanes)
        self.caption.setText(caption)
        self.setVisible(measured is not None)
        if not stays:
            self._measured, self._lanes = measured, lanes
            self._draw()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """A ruler as wide as there is room."""
        super().resizeEvent(event)
        self._draw()

    def _add_row(self) -> None:
        # soft as long as nothing is known: other ink means other style rules, 4 ms when it is first changed
        row = LaneLabels(make_line(soft=True), make_line("", semibold=True, soft=True))
        for label in (row.name, row.figures):
            label.setParent(self)
        self.rows.append(row)

    def _draw(self) -> None:
        part = text_part()
        if self._measured is None:
            self._ruler = None
            self.view.show_figure(None)
            for row in self.rows:
                row.figures.setText("")
            return
        columns = columns_in(self.width())
        ruler = draw_ruler(self._measured, columns.ruler, lettering().width, self._lanes)
        self._ruler = ruler
        self._write_rows(ruler)
        self.view.show_figure(ruler.figure)
        left = round(columns.ruler_at - ruler.overhang)
        self.view.setGeometry(left, 0, round(ruler.figure.width) + 1, round(ruler.figure.height) + 1)
        _stand(self.caption, FIGURE_COLUMN * part - self.caption.sizeHint().width(), ruler.figure.baseline)
        self.setFixedHeight(round(ruler.figure.baseline + _WIDE_LINE * _TEXT * part))

    def _write_rows(self, ruler: Ruler) -> None:
        """Name and figures beside each lane; what is known of no patient stays soft, a decision point does not."""
        while len(self.rows) < len(ruler.lanes):
            self._add_row()
        column = FIGURE_COLUMN * text_part()
        known = self._measured is not None and self._measured.probability is not None
        for row, lane in zip_longest(self.rows, ruler.lanes):
            for label in (row.name, row.figures) if lane else ():
                set_ink(label, "" if known or lane.detail else "soft")  # first: what is measured is polished
            row.figures.setText(lane.figures if lane else "")
            row.name.setText(_fitting(row, lane.name, column) if lane else "")
            for label in (row.name, row.figures):
                label.setVisible(lane is not None)
            if lane is None:
                continue
            _stand(row.name, 0.0, lane.y)
            _stand(row.figures, column - row.figures.sizeHint().width(), lane.y)

    def sizeHint(self) -> QSize:
        """As high as was fixed, as wide as there is room."""
        return QSize(round((RULER_AT + _LEAST_WIDTH) * text_part()), self.height())


def _fitting(row: LaneLabels, name: str, column: float) -> str:
    """The lane's name, or a short one where its figures leave too little room: they may need many decimals."""
    room = column - row.figures.sizeHint().width() - _GAP
    if row.name.fontMetrics().horizontalAdvance(name) <= room:
        return name
    return "Spread" if name == Lane.SPREAD else name.replace(APPROXIMATE, " about")


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
        if label.testAttribute(Qt.WidgetAttribute.WA_WState_Polished):  # before, they are looked up when it is shown
            label.style().unpolish(label)
            label.style().polish(label)
