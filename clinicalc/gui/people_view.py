"""In 100 people: the probability as large dots with both counts."""

from PySide6.QtCore import Qt
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QGridLayout, QVBoxLayout, QWidget

from clinicalc.assessment.numerals import of_people
from clinicalc.assessment.result import Assessment, Band
from clinicalc.gui.figure_view import FigureView, text_part
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_label, make_line
from clinicalc.gui.lanes import RULER_AT, set_ink
from clinicalc.gui.typeface import HEADLINE
from clinicalc.report.dots import DOT, draw_people
from clinicalc.report.shapes import Figure

EMPTY = "The picture stands here when there is a number."
PEOPLE = "In 100 people"
_COUNT = 44
_DROP = 8.0
"""The dots stand as low as the digits beside them."""
_GAP, _UNDER = 24, 10
_FREE_WIDTH = 16_777_215
"""Qt's own greatest width: none set."""


class PeopleView(Block):
    """Under 1 % (and over 99 %) the people are 1000, and picture and counts change places: 1000 dots need the room."""

    def __init__(self) -> None:
        super().__init__()
        self.empty = make_label(EMPTY, soft=True)
        self.dots = FigureView(drop=_DROP * text_part())
        self.counts = QWidget()
        self.have_count, self.have = make_line("", _COUNT), make_label("", HEADLINE)
        self.rest_count, self.rest = make_line("", _COUNT), make_label("", HEADLINE)
        self.explained = make_label()
        self._probability: float | None = None
        self._lay_out()
        self.show_assessment(None)

    @staticmethod
    def name_for(probability: float | None) -> str:
        """What the view of a probability is called: the people may be 1000."""
        return PEOPLE if probability is None else f"In {of_people(probability)[1]} people"

    @property
    def figure(self) -> Figure | None:
        """The picture, with its table."""
        return self.dots.figure_shown

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Nothing to press."""
        return ()

    def show_assessment(self, assessment: Assessment | None, *, vetted: bool = False) -> None:
        """Show the people of an assessment, or say that there are none."""
        estimate = None if assessment is None else assessment.estimate
        self._probability = None if estimate is None else estimate.probability
        self.empty.setVisible(estimate is None)
        self.dots.setVisible(estimate is not None)
        self.counts.setVisible(estimate is not None)
        self.explained.setVisible(estimate is not None)
        if assessment is not None and estimate is not None and assessment.span is not None:
            count, whole = of_people(estimate.probability)
            outcome = f"{assessment.model.content.use.plain.outcome} within {assessment.span.words}"
            self._say_counts(count, whole, outcome, rare=estimate.probability < 0.5)
            self.explained.setText(explain_people(whole, estimate.band, some_unknown=estimate.not_measured is not None))
            set_ink(self.have_count, "accent" if vetted else "soft")
            self._place(whole)
        else:
            for label in (self.have_count, self.have, self.rest_count, self.rest, self.explained):
                label.clear()  # nothing of a number that is no longer there, not even out of sight
        self._draw()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """1000 dots take the room there is."""
        super().resizeEvent(event)
        self._draw()

    def _lay_out(self) -> None:
        self._rows = QGridLayout(self.counts)
        self._rows.setContentsMargins(0, 0, 0, 0)
        self._rows.setHorizontalSpacing(16)
        self._rows.setVerticalSpacing(2)
        self.explained.setContentsMargins(0, 10, 0, 0)
        self._grid = QGridLayout()
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setSpacing(0)
        self._grid.setColumnMinimumWidth(0, round(RULER_AT * text_part()))
        self._grid.setColumnStretch(1, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(4)
        column.addWidget(self.empty)
        column.addLayout(self._grid)
        self._whole = 0
        self._place(100)

    def _place(self, whole: int) -> None:
        """Counts beside their words and right of the picture; left of 1000 people, and over their words."""
        if whole == self._whole:
            return
        self._whole = whole
        beside = whole == 100
        top = Qt.AlignmentFlag.AlignTop
        for widget in (self.dots, self.counts, self.explained):
            self._grid.removeWidget(widget)
        self._grid.addWidget(self.dots, 0, 0 if beside else 1, 2 if beside else 1, 1, top)
        self._grid.addWidget(self.counts, 0, 1 if beside else 0, 1 if beside else 2, 1, top)
        self._grid.addWidget(self.explained, 1, 1, top)
        pairs = ((self.have_count, self.have), (self.rest_count, self.rest))
        for place, (count, words) in enumerate(pairs):
            for widget in (count, words):
                self._rows.removeWidget(widget)
            # beside a count the words stand on its baseline
            lower = count.fontMetrics().ascent() - words.fontMetrics().ascent() if beside else 0
            words.setContentsMargins(0, lower, 0, 0 if beside else _UNDER)
            self._rows.addWidget(count, place if beside else 2 * place, 0, top)
            self._rows.addWidget(words, place if beside else 2 * place + 1, 1 if beside else 0, top)
        self._rows.setColumnStretch(0 if beside else 1, 0)
        self._rows.setColumnStretch(1 if beside else 0, 1)
        self.counts.setContentsMargins(0, 0, 0 if beside else _GAP, 0)
        # long words of an outcome break: they would push the picture over the edge, and some people with it
        self.counts.setMaximumWidth(_FREE_WIDTH if beside else round(RULER_AT * text_part()))

    def _draw(self) -> None:
        part = text_part()
        if self._probability is None:
            self.dots.show_figure(None)
        else:
            room = max(100.0, self.width() - RULER_AT * part)
            self.dots.show_figure(draw_people(self._probability, DOT * part, room))
            self.dots.setFixedHeight(self.dots.sizeHint().height())  # the width stays free, or no window could shrink

    def _say_counts(self, count: int | None, whole: int, outcome: str, *, rare: bool) -> None:
        few, most = "<1", f">{whole - 1}"
        if count is None:
            have, rest = (few, most) if rare else (most, few)
        else:
            have, rest = str(count), str(whole - count)
        self.have_count.setText(have)
        self.have.setText(f"{'has' if have in ('1', few) else 'have'} {outcome}")
        self.rest_count.setText(rest)
        self.rest.setText("does not" if rest in ("1", few) else "do not")


def explain_people(whole: int, band: Band | None, *, some_unknown: bool = False) -> str:
    """Who the people are, that nobody knows which of them this patient is, and how sure the count is."""
    same = "the same known values" if some_unknown else "the same values"
    who = f"{whole} people with {same} as this patient. Nobody can say which of the {whole} this patient is."
    if band is None:
        return f"{who} The file does not say how precisely the count is known."
    low, high = (round(whole * end) for end in (band.lower, band.upper))
    room = f"{low} to {high}" if low != high else f"about {low}"
    if low == 0:
        room = f"fewer than 1 to {high}" if high else "fewer than 1"
    if some_unknown:
        return f"{who} How precisely the coefficients are known, and what was not measured, leave room for {room}."
    return f"{who} How precisely the coefficients are known leaves room for {room}."
