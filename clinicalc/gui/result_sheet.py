"""The sheet: the number, whom it is about, where it lies, and every reason to doubt it."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QKeySequence, QResizeEvent, QShortcut
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.shown_figures import shown_probability
from clinicalc.gui.axis_words import AxisWords
from clinicalc.gui.crown import Crown
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.findings_list import OVERHANG, FindingsList
from clinicalc.gui.held_layouts import Block, held_layouts
from clinicalc.gui.labels import make_label
from clinicalc.gui.lanes import Lanes, overhang
from clinicalc.gui.pinned_summary import PinnedMark, PinnedSummary
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.text_link import LINK_PADDING
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import CAPTION
from clinicalc.gui.vetting_strip import VettingStrip
from clinicalc.gui.view_tabs import PAD
from clinicalc.gui.views import Views
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
from clinicalc.report.measured import APPROXIMATE, Lane
from clinicalc.report.on_the_ruler import lanes_of, measure_assessment, measure_nothing
from clinicalc.report.phrases import NOT_VETTED, say_people

_RING = 2
_TOP = 10


class SheetScroller(Scroller):
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
    comparison_opened = Signal(bool)
    """Whether the comparison is now the open view, so that there is room wanted for changed values."""

    def __init__(self, state: EntryState) -> None:
        super().__init__()
        self._state = state
        self._announced: tuple[bool, tuple[object, ...]] = (False, ())
        self._stops: tuple[QWidget, ...] = ()
        self._kept: tuple[object, ...] = ()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.strip = VettingStrip(NOT_VETTED)
        self.crown = Crown()
        self.number, self.small_grid = self.crown.number, self.crown.small_grid
        self.headline, self.sentence = self.crown.headline, self.crown.sentence
        self.lanes = Lanes()
        self.band_name, self.band_figure = self.lanes.rows[0].name, self.lanes.rows[0].figures
        self.words = AxisWords()
        self.band_reason, self.decided = self.words.band_reason, self.words.decided
        self.meaning, self.assumptions = self.words.meaning, self.words.assumptions
        self.findings = FindingsList()
        self.views = Views()
        self.people = self.views.people
        self.outcome = make_label("", CAPTION, soft=True)
        self.not_used = make_label("", CAPTION, soft=True)
        self.scroller = SheetScroller()
        self._lay_out()
        self._show_no_model()
        self.scroller.resized.connect(self._fit)
        self.findings.field_asked.connect(self.field_asked)
        self._listen_to_views()
        state.model_changed.connect(self._take_model)
        state.assessed.connect(self._show_current)
        state.blanked.connect(self.blank)

    def blank(self, sentence: str) -> None:
        """Take the number off first, then everything that was drawn from it, then say why."""
        self.number.clear()
        self.views.show_assessment(None, ())
        self._show_charts(None)
        self.headline.setText("No number")
        self.sentence.setText(sentence)
        self.findings.hide()
        self.findings.show_findings((), {})
        self._announce(None)

    def invite(self, headline: str, sentence: str) -> None:
        """While no model is chosen: why, and what to do."""
        if self._state.model is None:
            self.headline.setText(headline)
            self.sentence.setText(sentence)

    def set_compact(self, compact: bool) -> None:
        """Nothing depends on the window's size but what follows from the sheet's own width."""
        self._fit()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Where the tab key stops, in order: the band's assumptions, the views, the marks that lead to a field."""
        return (*self.assumptions.tab_stops(), *self.views.tab_stops(), *self.findings.tab_stops())

    def pinned_summary(self) -> PinnedSummary:
        """What is on the sheet now, in short."""
        shown = self.findings.shown if not self.findings.isHidden() else ()
        return PinnedSummary(
            percentage=self.number.percentage,
            headline=self.headline.text(),
            sentence=self.sentence.text(),
            band_name=self.band_name.text().replace(APPROXIMATE, " about"),  # there is little room
            band_figures=self.band_figure.text(),
            marks=tuple(PinnedMark(n, f.grade, GRADE_WORDS[f.grade], f.field) for n, f in shown),
            vetted=self._is_vetted,
        )

    @property
    def _is_vetted(self) -> bool:
        """Whether the practice approved the model; a file that is opened by its name is tried out."""
        return self._state.vetting is not None

    def _listen_to_views(self) -> None:
        table = QShortcut(QKeySequence(Qt.Key.Key_T), self)
        table.setContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
        table.activated.connect(self.views.toggle_text)
        self.views.comparison_opened.connect(self.comparison_opened)
        self.views.matching_age_asked.connect(self._state.ask_matching_age)
        self.views.stops_changed.connect(self._tell_stops)

    def _lay_out(self) -> None:
        self._body = body = Block()
        body.setObjectName("sheet")
        self._place_scroller()  # first: what is moved takes all inside it along, and empty that is little
        self._column = QVBoxLayout(body)
        self._column.setSpacing(0)
        self._column.addLayout(_inset(PAD, overhang(), self.crown))
        self._column.addLayout(_inset(PAD, 0, self.lanes))
        self._column.addLayout(_inset(PAD - LINK_PADDING, overhang(), self.words))
        self._column.addSpacing(6)
        self._column.addLayout(_inset(PAD - OVERHANG, overhang(), self.findings))
        self._column.addSpacing(8)
        self._column.addWidget(self.views)
        self._column.addSpacing(14)
        self._column.addLayout(_inset(PAD, overhang(), self.outcome, self.not_used))
        self._column.addStretch(1)

    def _place_scroller(self) -> None:
        self.scroller.setObjectName("sheet_scroll")
        self.scroller.setAccessibleName("Result")
        self.scroller.setFocusPolicy(Qt.FocusPolicy.ClickFocus)
        self.scroller.setWidgetResizable(True)
        self.scroller.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        # its room is kept and empty when there is nothing to scroll: one that comes and goes arranges all anew
        self.scroller.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOn)
        self.scroller.setWidget(self._body)
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
        self._column.setContentsMargins(SHEET_MARGIN - _RING - PAD, top, right, 20)
        self._keep_room()

    def _keep_room(self) -> None:
        """Reserve what the model's words take at this width, so that nothing moves when they come or go."""
        model = self._state.model
        if model is None:
            return
        width = self.scroller.width() - SHEET_MARGIN - SHEET_MARGIN_RIGHT
        points = self._state.decision_points
        if self._kept == (kept := (model, self._state.span, points, width)):
            return
        self._kept = kept
        spans = [self._state.span] if self._state.span is not None else list(model.spans)
        headings = [event_heading(model, span) for span in spans]
        sentences = [longest_sentence(model, span) for span in spans]
        self.crown.keep_room(headings, sentences, width)
        self.words.keep_room(model, points, width)

    def _show_no_model(self) -> None:
        for widget in (self.strip, self.findings, self.views):
            widget.hide()
        self.lanes.show_measured(None)
        self.headline.setText("No coefficient file is open")
        self.sentence.setText("Open one to begin: a coefficient file holds one risk model, its units and its limits.")

    def _take_model(self) -> None:
        model = self._state.model
        self.blank("")
        self.views.close_comparison()
        if model is None:
            self._show_no_model()
            return
        self.strip.setVisible(not self._is_vetted)
        self.views.show()
        event = event_in_full(model)
        self.outcome.setText(f"Event: {event}." if event else "")
        self.not_used.setText(not_used_sentence(model))
        self._fit()

    def _show_current(self) -> None:
        assessment = self._state.assessment
        if assessment is None:  # blanked by another listener in the meantime
            return
        self._keep_room()  # the practice may have other decision points by now, or the horizon another
        view = self.views.open_view
        inside = (view, view.counts) if view is self.people else (view,)
        with held_layouts(self._body, self.crown, self.words, self.findings, self.views, *inside):
            self._show(assessment)
        self._announce(assessment)

    def _show(self, assessment: Assessment) -> None:
        estimate = assessment.estimate
        if estimate is None:
            self.number.clear()
            headline, sentence = explain_no_number(assessment)
        else:
            headline = event_heading(assessment.model, assessment.span)
            sentence = say_people(assessment)
            percentage = shown_probability(assessment)
            self.number.show_percentage(percentage, f"{headline}. {sentence}", vetted=self._is_vetted)
        self.headline.setText(headline)
        self.sentence.setText(sentence)
        self._show_charts(assessment)
        labels = {field.id: field.label for field in assessment.model.fields}
        self.findings.show_findings(numbered_findings(assessment), labels)
        self.findings.show()

    def _show_charts(self, assessment: Assessment | None) -> None:
        """Small grid, ruler and views of an assessment; their empty places where there is no number."""
        model = self._state.model
        estimate = None if assessment is None else assessment.estimate
        self.small_grid.show_probability(None if estimate is None else estimate.probability)
        self._show_lanes(model, assessment)
        others = [] if self.lanes.figure is None else [self.lanes.figure]
        self.views.show_assessment(assessment, others, vetted=self._is_vetted)

    def _show_lanes(self, model: Model | None, assessment: Assessment | None) -> None:
        """The ruler and the words under it."""
        lanes: tuple[Lane, ...] = ()
        if model is None:
            self.lanes.show_measured(None)
        else:
            points = self._state.decision_points
            lanes = lanes_of(model, points)
            known = (
                measure_nothing(model, points, self._state.level)
                if assessment is None
                else measure_assessment(assessment, points)
            )
            self.lanes.show_measured(known, "" if self._state.span is None else self._state.span.words, lanes)
        self.words.show_words(model, lanes, assessment)

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
