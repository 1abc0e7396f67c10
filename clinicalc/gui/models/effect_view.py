"""What a new version does: to standard patients in sentences, to the worked examples on the ruler."""

from collections.abc import Mapping
from types import MappingProxyType

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.gui.figure_view import FigureView, lettering, table_lines, text_part
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import Heading, make_label
from clinicalc.gui.text_link import OpenedText, TextLink
from clinicalc.gui.typeface import UNIT
from clinicalc.library.effect import Effect, GridEffect
from clinicalc.library.effect_words import say_grid
from clinicalc.operations.effect_on_ruler import moves_of, why_no_numbers
from clinicalc.report.columns import Columns
from clinicalc.report.effect_figure import Moves, draw_effect
from clinicalc.report.ruler import RulerSize

PATIENTS, EXAMPLES = "What it does to standard patients", "What it does to the worked examples"
AS_TEXT, CLOSE = "Chart as text", "Close the text"
NOT_COMPARED = "No horizon of one version is a horizon of the other, so there is nothing to compare."
_LABELS, _LEAST_LABELS, _PART = 312.0, 200.0, 0.38
"""Width of the labels and figures: so much of the room, within these."""
_GAP, _LANE, _TEXT, _LEAST_RULER = 24.0, 27.0, 13.0, 100.0


class ExamplesFigure(QWidget):
    """The figure as wide as there is room, with its table as text behind it."""

    def __init__(self, moves: Moves) -> None:
        super().__init__()
        self._moves = moves
        self._drawn: Columns | None = None
        self.view = FigureView()
        self.as_text = TextLink(AS_TEXT)
        self.text = OpenedText(AS_TEXT)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addWidget(self.view)
        column.addWidget(self.as_text, 0, Qt.AlignmentFlag.AlignLeft)
        column.addWidget(self.text)
        self.as_text.clicked.connect(self._toggle)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """A ruler as wide as there is room."""
        super().resizeEvent(event)
        self.fit(event.size().width())

    def fit(self, width: int) -> None:
        """Take a width, and the height of the figure at it."""
        columns = effect_columns(width)
        if columns == self._drawn:
            return
        self._drawn = columns
        self.view.show_figure(draw_effect(self._moves, columns, lettering().width))
        self.view.setFixedHeight(self.view.sizeHint().height())  # the width stays free, or no window could shrink

    def _toggle(self) -> None:
        opens = self.text.isHidden()
        self.text.setVisible(opens)
        self.as_text.say(CLOSE if opens else AS_TEXT)
        figure = self.view.figure_shown
        self.text.show_lines(table_lines([figure]) if opens and figure is not None else [])


class EffectView(Block):
    """The effect of taking one version in the place of the other; the names are such as "1.2.0"."""

    def __init__(
        self, effect: Effect, old_name: str, new_name: str, labels: Mapping[str, str] = MappingProxyType({})
    ) -> None:
        """`labels` are what values are called, by their ids; one that is empty is left out."""
        super().__init__()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(3)
        column.addWidget(Heading(PATIENTS))
        for grid in effect.grids:
            heading, said = grid_words(grid, labels)
            column.addWidget(make_label(heading, UNIT, soft=True))
            column.addWidget(make_label(said, UNIT))
            column.addSpacing(4)
        if not effect.grids:
            column.addWidget(make_label(NOT_COMPARED, UNIT))
        if effect.not_compared:
            column.addWidget(make_label("\n".join(effect.not_compared), UNIT))
        column.addSpacing(6)
        column.addWidget(Heading(EXAMPLES))
        self.figure = ExamplesFigure(moves_of(effect, old_name, new_name))
        column.addWidget(self.figure)
        self.reasons = make_label("\n".join(why_no_numbers(effect, old_name, new_name)), UNIT)
        self.reasons.setVisible(bool(self.reasons.text()))
        column.addWidget(self.reasons)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The link, and the text that it opens."""
        return (self.figure.as_text, self.figure.text)


def effect_columns(width: int) -> Columns:
    """Labels and figures in the left part of a width, the ruler in the rest of it."""
    part = text_part()
    labels = min(_LABELS * part, max(_LEAST_LABELS * part, _PART * width))
    size = RulerSize(0.0, _LANE * part, _TEXT * part)
    room = max(_LEAST_RULER, width - labels - _GAP * part - size.overhang)
    return Columns(RulerSize(room, size.lane, size.text), labels, labels + _GAP * part, UNIT * part)


def grid_words(grid: GridEffect, labels: Mapping[str, str]) -> tuple[str, str]:
    """The heading of a grid, and its sentences one a line."""
    heading, *sentences = (line.strip() for line in say_grid(grid, labels))
    return heading, "\n".join(sentences)
