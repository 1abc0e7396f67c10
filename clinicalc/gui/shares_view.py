"""Shares: the walk from the reference person to this patient, and for those who ask the matching age."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.gui.figure_view import FigureView, lettering
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_label
from clinicalc.gui.lanes import columns_in, overhang
from clinicalc.gui.text_link import LINK_PADDING, TextLink
from clinicalc.gui.typeface import CAPTION
from clinicalc.report.columns import Columns
from clinicalc.report.matching_age_words import MATCHING_AGE_MEANING, say_matching_age
from clinicalc.report.on_the_ruler import walk_of
from clinicalc.report.shapes import Figure
from clinicalc.report.shares_figure import SHARES_MEANING, Walk, draw_shares

EMPTY = "The shares stand here when there is a number."
ASK, STOP_ASKING = "Show the matching age", "Hide the matching age"


class SharesView(Block):
    """As wide as the lanes above it, whose ruler it shares; its words begin `LINK_PADDING` from its left edge."""

    matching_age_asked = Signal(bool)
    """Whether the matching age is to be shown from now on."""

    def __init__(self) -> None:
        super().__init__()
        self.empty = make_label(EMPTY, soft=True)
        self.meaning = make_label(SHARES_MEANING, CAPTION, soft=True)
        self.view = FigureView()
        self.reference = make_label("", CAPTION, soft=True)
        self.ask = TextLink(ASK)
        self.matched = make_label()
        self.caution = make_label("", CAPTION, soft=True)
        self._walk: Walk | None = None
        self._drawn: tuple[Walk | None, Columns] | None = None
        self._is_shown = False
        self._lay_out()
        self.ask.clicked.connect(self._ask)
        self.show_assessment(None)

    @property
    def figure(self) -> Figure | None:
        """The picture, with its table."""
        return self.view.figure_shown

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The link that asks for the matching age."""
        return (self.ask,)

    def show_assessment(self, assessment: Assessment | None, *, vetted: bool = False) -> None:
        """Show the shares of an assessment, or say why there are none."""
        estimate = None if assessment is None else assessment.estimate
        self._walk = None if assessment is None else walk_of(assessment)
        absent = "" if estimate is None else estimate.shares_absent_because
        self.empty.setText(f"No shares: {absent}" if absent else EMPTY)
        self.empty.setVisible(self._walk is None)
        self.meaning.setVisible(self._walk is not None)
        self.view.setVisible(self._walk is not None)
        whom = "" if estimate is None or self._walk is None else estimate.reference_person
        self.reference.setText(f"Reference person: {whom}." if whom else "")
        self.reference.setVisible(bool(whom))
        self._show_matching_age(estimate)
        self._draw()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """A ruler as wide as there is room."""
        super().resizeEvent(event)
        self._draw()

    def _lay_out(self) -> None:
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(4)
        parts = (self.empty, self.meaning, self.view, self.reference, self.ask, self.matched, self.caution)
        for part in parts:
            room = QVBoxLayout()
            right = 0 if part is self.view else overhang()
            room.setContentsMargins(0 if part is self.ask else LINK_PADDING, 0, right, 0)
            left = Qt.AlignmentFlag.AlignLeft if part is self.ask else Qt.AlignmentFlag(0)
            room.addWidget(part, 0, left)
            column.addLayout(room)

    def _show_matching_age(self, estimate: Estimate | None) -> None:
        found = None if estimate is None else estimate.matching_age
        self._is_shown = found is not None
        self.ask.say(STOP_ASKING if self._is_shown else ASK)
        self.ask.setVisible(self._walk is not None or self._is_shown)
        self.matched.setText("" if found is None else say_matching_age(found))
        self.caution.setText(MATCHING_AGE_MEANING if found is not None else "")
        for label in (self.matched, self.caution):
            label.setVisible(self._is_shown)

    def _ask(self) -> None:
        self.matching_age_asked.emit(not self._is_shown)

    def _draw(self) -> None:
        columns = columns_in(self.width() - LINK_PADDING)
        if self._drawn == (drawn := (self._walk, columns)):
            return
        self._drawn = drawn
        self.view.show_figure(None if self._walk is None else draw_shares(self._walk, columns, lettering().width))
        height = self.view.sizeHint().height()
        if height != self.view.height():
            self.view.setFixedHeight(height)  # the width stays free, or no window could shrink
