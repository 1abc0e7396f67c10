"""Comparison: the same patient with changed values, beside the number as entered."""

from PySide6.QtCore import Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.assessment.changeable import changeable_fields
from clinicalc.assessment.comparison import Comparison
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.gui.figure_view import FigureView, lettering
from clinicalc.gui.findings_list import OVERHANG, FindingsList
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_label
from clinicalc.gui.lanes import columns_in, overhang
from clinicalc.gui.wording import numbered_findings
from clinicalc.report.columns import Columns
from clinicalc.report.comparison_figure import Compared, draw_comparison
from clinicalc.report.on_the_ruler import compared_of
from clinicalc.report.phrases import count_words
from clinicalc.report.phrases_comparison import people_words
from clinicalc.report.shapes import Figure

EMPTY = "The comparison stands here when there is a number."
HOW = "Change a value in the column “with changes”, next to the values."
NOTHING_TO_CHANGE = "The coefficient file calls no value of this model modifiable, so there is nothing to compare."
STANDS = "the number as entered stands"
SAME = "Every changed value is the one that was entered."


class ComparisonView(Block):
    """As wide as the lanes above it, whose ruler it shares. What is said about changed values is listed here.

    Its words begin `OVERHANG` from its left edge.
    """

    field_asked = Signal(str)
    """The mark of a finding about this field was pressed."""

    def __init__(self) -> None:
        super().__init__()
        self.how = make_label(HOW, soft=True)
        self.view = FigureView()
        self.people = make_label()
        self.reason = make_label()
        self.findings = FindingsList()
        self._compared: Compared | None = None
        self._shown: tuple[Compared | None, Columns] | None = None
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        for part in (self.how, self.reason, self.view, self.people, self.findings):
            room = QVBoxLayout()
            right = 0 if part is self.view else overhang()
            room.setContentsMargins(0 if part is self.findings else OVERHANG, 0, right, 0)
            room.addWidget(part)
            column.addLayout(room)
        self.findings.field_asked.connect(self.field_asked)
        self.show_assessment(None)

    @property
    def figure(self) -> Figure | None:
        """The picture, with its table."""
        return self.view.figure_shown

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The marks that lead to a field."""
        return () if self.findings.isHidden() else self.findings.tab_stops()

    def show_assessment(self, assessment: Assessment | None, *, vetted: bool = False) -> None:
        """Show the comparison of an assessment, or say how to make one or why there is none."""
        estimate = None if assessment is None else assessment.estimate
        comparison = None if estimate is None else estimate.comparison
        self._compared = None if assessment is None else compared_of(assessment)
        self.how.setText(_how(None if assessment is None else assessment.model, has_number=estimate is not None))
        self.how.setVisible(comparison is None)
        self.view.setVisible(comparison is not None and comparison.own is not None)
        self.people.setText("" if comparison is None else people_words(comparison))
        self.people.setVisible(bool(self.people.text()))
        self.reason.setText("" if comparison is None else _reason(comparison))
        self.reason.setVisible(bool(self.reason.text()))
        self._list_findings(assessment, comparison)
        self._draw()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """A ruler as wide as there is room."""
        super().resizeEvent(event)
        self._draw()

    def _list_findings(self, assessment: Assessment | None, comparison: Comparison | None) -> None:
        """Numbered on from the sheet's own findings, so that no number stands for two of them."""
        said = () if comparison is None else comparison.refused + comparison.findings
        after = 1 if assessment is None else 1 + len(numbered_findings(assessment))
        labels = {} if assessment is None else {field.id: field.label for field in assessment.model.fields}
        heading = f"{count_words(len(said), 'finding')} about the changes" if said else ""
        if comparison is not None and comparison.refused:
            heading = f"{heading}; {STANDS}"  # a stop of the comparison is none of the number
        self.findings.show_findings(tuple(enumerate(said, after)), labels, heading=heading)
        self.findings.setVisible(bool(said))

    def _draw(self) -> None:
        columns = columns_in(self.width() - OVERHANG)
        if self._shown == (shown := (self._compared, columns)):
            return
        self._shown = shown
        drawn = None if self._compared is None else draw_comparison(self._compared, columns, lettering().width)
        self.view.show_figure(drawn)
        height = self.view.sizeHint().height()
        if height != self.view.height():
            self.view.setFixedHeight(height)  # the width stays free, or no window could shrink


def _how(model: Model | None, *, has_number: bool) -> str:
    if model is not None and not changeable_fields(model):
        return NOTHING_TO_CHANGE
    return HOW if has_number else EMPTY


def _reason(comparison: Comparison) -> str:
    """Why there are no numbers or no band of the difference, or that nothing differs; stops say theirs themselves."""
    if comparison.own is None:
        return "No comparison." if comparison.refused else f"No comparison: {comparison.because}"
    if not comparison.changes:
        return SAME
    return f"No band of the difference: {comparison.because}" if comparison.because else ""
