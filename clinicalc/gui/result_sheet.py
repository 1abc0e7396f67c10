"""The sheet: the number, whom it is about, its band, and every reason to doubt it."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QGridLayout, QScrollArea, QVBoxLayout, QWidget

from clinicalc.assessment.numerals import percent, percent_range
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.findings_list import FindingsList
from clinicalc.gui.labels import make_label, make_line
from clinicalc.gui.number_face import NumberFace
from clinicalc.gui.tokens import FIGURE_COLUMN, SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import CAPTION, HEADLINE
from clinicalc.gui.vetting_strip import VettingStrip
from clinicalc.gui.wording import event_heading, event_in_full, explain_no_number, shown_findings
from clinicalc.operations.summary import people_sentence
from clinicalc.report.phrases import BAND_MEANING, NOT_VETTED, level_words

_NOTHING = "–"
_RING = 2
_ROOM = (110, 72)
_ROOM_COMPACT = (134, 92)


class ResultSheet(QWidget):
    """Shows the state's assessment, and nothing where there is none."""

    def __init__(self, state: EntryState) -> None:
        super().__init__()
        self._state = state
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.strip = VettingStrip(NOT_VETTED)
        self.number = NumberFace()
        self.headline = make_label("", HEADLINE, semibold=True)
        self.sentence = make_label()
        self.band_name = make_line()
        self.band_figure = make_line("", semibold=True)
        self.band_reason = make_label("", soft=True)
        self.band_reason.setContentsMargins(0, 0, 0, 10)
        self.meaning = make_label(BAND_MEANING, CAPTION, soft=True)
        self.outcome = make_label("", CAPTION, soft=True)
        self.findings = FindingsList()
        self.scroller = QScrollArea()
        self._lay_out()
        self.set_compact(False)
        self._show_no_model()
        state.model_changed.connect(self._take_model)
        state.assessed.connect(self._show_current)
        state.blanked.connect(self.blank)

    def blank(self, sentence: str) -> None:
        """Take the number off first, then say why."""
        self.number.clear()
        self._show_estimate(None)
        self.headline.setText("No number")
        self.sentence.setText(sentence)
        self.findings.hide()

    def set_compact(self, compact: bool) -> None:
        """Keep as much room as words take in a narrow sheet, so that nothing moves when they come or go."""
        for row, height in enumerate(_ROOM_COMPACT if compact else _ROOM):
            self._grid.setRowMinimumHeight(row, height)

    def _lay_out(self) -> None:
        body = QWidget()
        body.setObjectName("sheet")
        grid = QGridLayout(body)
        grid.setContentsMargins(SHEET_MARGIN - _RING, 16, SHEET_MARGIN_RIGHT - _RING, 20)
        self._grid = grid
        grid.setHorizontalSpacing(24)
        grid.setVerticalSpacing(0)
        grid.setColumnMinimumWidth(0, FIGURE_COLUMN)
        grid.setColumnStretch(1, 1)
        words = QVBoxLayout()
        words.setSpacing(5)
        words.setContentsMargins(0, 6, 0, 10)
        words.addWidget(self.headline)
        words.addWidget(self.sentence)
        words.addStretch(1)
        grid.addWidget(self.number, 0, 0, Qt.AlignmentFlag.AlignTop | Qt.AlignmentFlag.AlignLeft)
        grid.addLayout(words, 0, 1)
        band = QGridLayout()
        band.setContentsMargins(0, 0, 0, 0)
        band.addWidget(self.band_name, 0, 0, Qt.AlignmentFlag.AlignLeft)
        band.addWidget(self.band_figure, 0, 1, Qt.AlignmentFlag.AlignRight)
        grid.addLayout(band, 1, 0, Qt.AlignmentFlag.AlignTop)
        grid.addWidget(self.band_reason, 1, 1, Qt.AlignmentFlag.AlignTop)
        grid.addWidget(self.meaning, 2, 0, 1, 2)
        grid.setRowMinimumHeight(3, 6)
        grid.addWidget(self.outcome, 4, 0, 1, 2)
        grid.setRowMinimumHeight(5, 10)
        grid.addWidget(self.findings, 6, 0, 1, 2)
        grid.setRowStretch(7, 1)
        self.scroller.setObjectName("sheet_scroll")
        self.scroller.setAccessibleName("Result")
        self.scroller.setFocusPolicy(Qt.FocusPolicy.ClickFocus)
        self.scroller.setWidgetResizable(True)
        self.scroller.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.scroller.setWidget(body)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.strip)
        column.addWidget(self.scroller, 1)

    def _show_no_model(self) -> None:
        self.strip.hide()
        self.meaning.hide()
        self.findings.hide()
        self.headline.setText("No coefficient file is open")
        self.sentence.setText("Open one to begin: a coefficient file holds one risk model, its units and its limits.")

    def _take_model(self) -> None:
        model = self._state.model
        self.blank("")
        if model is None:
            return
        # until there is a model library, every file is opened by its name, and nobody has vetted it
        self.strip.show()
        self.meaning.show()
        event = event_in_full(model)
        self.outcome.setText(f"Event: {event}." if event else "")

    def _show_current(self) -> None:
        assessment = self._state.assessment
        if assessment is None:  # blanked by another listener in the meantime
            return
        estimate = assessment.estimate
        if estimate is None:
            self.number.clear()
            headline, sentence = explain_no_number(assessment)
        else:
            headline = event_heading(assessment.model, assessment.span)
            sentence = people_sentence(assessment)
            percentage = percent(estimate.probability, estimate.complement)
            self.number.show_percentage(percentage, f"{headline}. {sentence}", vetted=False)
        self.headline.setText(headline)
        self.sentence.setText(sentence)
        self._show_estimate(estimate, assessment)
        self.findings.show_findings(shown_findings(assessment))
        self.findings.show()

    def _show_estimate(self, estimate: Estimate | None, assessment: Assessment | None = None) -> None:
        band = None if estimate is None else estimate.band
        level = "" if assessment is None else f"{level_words(assessment.level)} "
        self.band_name.setText(f"{level}band".capitalize() if self._state.model is not None else "")
        if band is not None:
            self.band_figure.setText(percent_range(band.lower, band.upper))
        elif estimate is not None:
            self.band_figure.setText("no band")
        else:
            self.band_figure.setText(_NOTHING if self._state.model is not None else "")
        self.band_reason.setText("" if estimate is None else estimate.band_absent_because)
