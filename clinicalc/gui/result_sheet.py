"""The sheet: the number, whom it is about, where it lies, and every reason to doubt it."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QKeySequence, QResizeEvent, QShortcut
from PySide6.QtWidgets import QScrollArea, QVBoxLayout, QWidget

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.spans import Span
from clinicalc.gui.crown import Crown, height_of
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.findings_list import OVERHANG, FindingsList
from clinicalc.gui.held_layouts import held_layouts
from clinicalc.gui.labels import make_label
from clinicalc.gui.lanes import Lanes, measure_assessment, overhang
from clinicalc.gui.people_view import PeopleView
from clinicalc.gui.pinned_summary import PinnedMark, PinnedSummary
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import CAPTION
from clinicalc.gui.vetting_strip import VettingStrip
from clinicalc.gui.wording import (
    GRADE_WORDS,
    event_heading,
    event_in_full,
    explain_no_number,
    grades_in_words,
    longest_sentence,
    not_used_sentence,
    numbered_findings,
)
from clinicalc.operations.summary import people_sentence
from clinicalc.report.measured import Measured
from clinicalc.report.phrases import BAND_MEANING, NOT_VETTED

_VETTED = False
"""Until there is a model library, every file is opened by its name, and nobody has vetted it."""
_RING = 2
_TOP = 10


class SheetScroller(QScrollArea):
    """Tells when its room has changed, be it by a scroll bar that came or went."""

    resized = Signal()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The room for the sheet is another one: its margins settle first, so that it is arranged once."""
        self.resized.emit()
        super().resizeEvent(event)


class ResultSheet(QWidget):
    """Shows the state's assessment, and nothing where there is none."""

    field_asked = Signal(str)
    """The mark of a finding about this field was pressed."""
    stops_changed = Signal()
    """`tab_stops` may be others now."""

    def __init__(self, state: EntryState) -> None:
        super().__init__()
        self._state = state
        self._announced: tuple[bool, tuple[object, ...]] = (False, ())
        self._stops: tuple[QWidget, ...] = ()
        self._kept: tuple[Model, Span | None, int] | None = None
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.strip = VettingStrip(NOT_VETTED)
        self.crown = Crown()
        self.number, self.small_grid = self.crown.number, self.crown.small_grid
        self.headline, self.sentence = self.crown.headline, self.crown.sentence
        self.lanes = Lanes()
        self.band_name, self.band_figure = self.lanes.name, self.lanes.figures
        self.band_reason = make_label("", CAPTION)
        self.meaning = make_label(BAND_MEANING, CAPTION, soft=True)
        self.meaning.setContentsMargins(0, 4, 0, 0)  # apart from the reason why there is no band
        self.findings = FindingsList()
        self.people = PeopleView()
        self.outcome = make_label("", CAPTION, soft=True)
        self.not_used = make_label("", CAPTION, soft=True)
        self.scroller = SheetScroller()
        self._lay_out()
        self._show_no_model()
        self.scroller.resized.connect(self._fit)
        self.findings.field_asked.connect(self.field_asked)
        table = QShortcut(QKeySequence(Qt.Key.Key_T), self)
        table.setContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
        table.activated.connect(self.people.toggle_text)
        state.model_changed.connect(self._take_model)
        state.assessed.connect(self._show_current)
        state.blanked.connect(self.blank)

    def blank(self, sentence: str) -> None:
        """Take the number off first, then everything that was drawn from it, then say why."""
        self.number.clear()
        self._show_charts(None)
        self.headline.setText("No number")
        self.sentence.setText(sentence)
        self.findings.hide()
        self._announce(None)

    def set_compact(self, compact: bool) -> None:
        """Nothing depends on the window's size but what follows from the sheet's own width."""
        self._fit()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Where the tab key stops, in order: the view, then the marks that lead to a field."""
        return (self.people.as_text, self.people.text, *self.findings.tab_stops())

    def pinned_summary(self) -> PinnedSummary:
        """What is on the sheet now, in short."""
        shown = self.findings.shown if not self.findings.isHidden() else ()
        return PinnedSummary(
            percentage=self.number.percentage,
            headline=self.headline.text(),
            sentence=self.sentence.text(),
            band_name=self.band_name.text(),
            band_figures=self.band_figure.text(),
            marks=tuple(PinnedMark(n, f.grade, GRADE_WORDS[f.grade], f.field) for n, f in shown),
            vetted=_VETTED,
        )

    def _lay_out(self) -> None:
        self._body = body = QWidget()
        body.setObjectName("sheet")
        self._column = QVBoxLayout(body)
        self._column.setSpacing(0)
        self._column.addLayout(_inset(OVERHANG, overhang(), self.crown))
        self._column.addLayout(_inset(OVERHANG, 0, self.lanes))
        # a box of its own keeps the room: a label that is empty clings to the least height it once had
        self._reason = QWidget()
        self._reason.setLayout(_inset(0, 0, self.band_reason))
        self._column.addLayout(_inset(OVERHANG, overhang(), self._reason, self.meaning))
        self._column.addSpacing(6)
        self._column.addLayout(_inset(0, overhang(), self.findings))
        self._column.addSpacing(8)
        self._column.addLayout(_inset(OVERHANG, overhang(), self.people))
        self._column.addSpacing(14)
        self._column.addLayout(_inset(OVERHANG, overhang(), self.outcome, self.not_used))
        self._column.addStretch(1)
        self.scroller.setObjectName("sheet_scroll")
        self.scroller.setAccessibleName("Result")
        self.scroller.setFocusPolicy(Qt.FocusPolicy.ClickFocus)
        self.scroller.setWidgetResizable(True)
        self.scroller.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        # its room is kept and empty when there is nothing to scroll: one that comes and goes arranges all anew
        self.scroller.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOn)
        self.scroller.setWidget(body)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.strip)
        column.addWidget(self.scroller, 1)

    def _fit(self) -> None:
        """Margins that leave the ruler where it is when a scroll bar comes, and room for the longest words."""
        bar = self.scroller.width() - 2 * _RING - self.scroller.viewport().width()
        right = max(0, SHEET_MARGIN_RIGHT - _RING - bar - overhang())
        top = _TOP if self.strip.isVisibleTo(self) else _TOP + 8
        self._column.setContentsMargins(SHEET_MARGIN - _RING - OVERHANG, top, right, 20)
        self._keep_room()

    def _keep_room(self) -> None:
        """Reserve what the model's words take at this width, so that nothing moves when they come or go."""
        model = self._state.model
        if model is None:
            return
        width = self.scroller.width() - SHEET_MARGIN - SHEET_MARGIN_RIGHT
        if self._kept == (kept := (model, self._state.span, width)):
            return
        self._kept = kept
        spans = [self._state.span] if self._state.span is not None else list(model.spans)
        headings = [event_heading(model, span) for span in spans]
        sentences = [longest_sentence(model, span) for span in spans]
        self.crown.keep_room(headings, sentences, width)
        because = {line.no_band_because for equation in model.equations for line in equation.lines} - {""}
        reasons = [_no_band(reason) for reason in because]
        self._reason.setMinimumHeight(height_of(self.band_reason, reasons, width))

    def _show_no_model(self) -> None:
        for widget in (self.strip, self.band_reason, self.meaning, self.findings, self.people):
            widget.hide()
        self.lanes.show_measured(None)
        self.headline.setText("No coefficient file is open")
        self.sentence.setText("Open one to begin: a coefficient file holds one risk model, its units and its limits.")

    def _take_model(self) -> None:
        model = self._state.model
        self.blank("")
        if model is None:
            return
        for widget in (self.strip, self.meaning, self.people):
            widget.show()
        event = event_in_full(model)
        self.outcome.setText(f"Event: {event}." if event else "")
        self.not_used.setText(not_used_sentence(model))
        self._fit()

    def _show_current(self) -> None:
        assessment = self._state.assessment
        if assessment is None:  # blanked by another listener in the meantime
            return
        with held_layouts(self._body, self.crown, self.findings, self.people, self.people.counts):
            self._show(assessment)
        self._announce(assessment)

    def _show(self, assessment: Assessment) -> None:
        estimate = assessment.estimate
        if estimate is None:
            self.number.clear()
            headline, sentence = explain_no_number(assessment)
        else:
            headline = event_heading(assessment.model, assessment.span)
            sentence = people_sentence(assessment)
            percentage = percent(estimate.probability, estimate.complement)
            self.number.show_percentage(percentage, f"{headline}. {sentence}", vetted=_VETTED)
        self.headline.setText(headline)
        self.sentence.setText(sentence)
        self._show_charts(assessment)
        labels = {field.id: field.label for field in assessment.model.fields}
        self.findings.show_findings(numbered_findings(assessment), labels)
        self.findings.show()

    def _show_charts(self, assessment: Assessment | None) -> None:
        """Small grid, ruler and people of an assessment; their empty places where there is no number."""
        model = self._state.model
        estimate = None if assessment is None else assessment.estimate
        self.small_grid.show_probability(None if estimate is None else estimate.probability)
        span = self._state.span
        within = "" if span is None else span.words
        if assessment is not None:
            self.lanes.show_measured(measure_assessment(assessment), within)
        else:
            measured = None if model is None else Measured(model.equations[0].content.link)
            self.lanes.show_measured(measured, within)
        no_band = estimate is not None and estimate.band is None
        reason = estimate.band_absent_because if estimate is not None and no_band else ""
        self.band_reason.setText(_no_band(reason) if reason else "")
        self.band_reason.setVisible(bool(reason))
        others = [] if self.lanes.figure is None else [self.lanes.figure]
        self.people.show_assessment(assessment, others, vetted=_VETTED)

    def _announce(self, assessment: Assessment | None) -> None:
        """Tell a screen reader when a number comes or goes, or a grade of finding; not at every key."""
        listed = [] if assessment is None else [finding for _, finding in numbered_findings(assessment)]
        grades = tuple(sorted({finding.grade for finding in listed}))
        self._tell_stops()
        due = (bool(self.number.figure), grades)
        if due == self._announced:
            return
        self._announced = due
        what = self.number.percentage or self.headline.text()
        words = f"{what}, {grades_in_words(listed)}" if assessment is not None else what
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, words))

    def _tell_stops(self) -> None:
        stops = self.tab_stops()
        if stops != self._stops:
            self._stops = stops
            self.stops_changed.emit()


def _inset(left: int, right: int, *widgets: QWidget) -> QVBoxLayout:
    """Widgets under each other between these margins."""
    column = QVBoxLayout()
    column.setContentsMargins(left, 0, right, 0)
    column.setSpacing(0)
    for widget in widgets:
        column.addWidget(widget)
    return column


def _no_band(reason: str) -> str:
    return f"No band: {reason}"
