"""The number, whom it is about, its band and the marks of its findings, kept in sight where the sheet scrolls away."""

from PySide6.QtCore import QSize, Qt, Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.gui.crown import height_of
from clinicalc.gui.figure_view import FigureView, lettering
from clinicalc.gui.index_mark import SIDE, IndexMark
from clinicalc.gui.labels import make_label, make_line
from clinicalc.gui.pinned_summary import PinnedMark, PinnedSummary
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION, UNIT, VALUE
from clinicalc.report.number import draw_number, draw_seats
from clinicalc.report.shapes import Figure

_NUMBER = 58.0
_BASELINE = 50
_NUMBER_ROOM = QSize(142, 66)
_MOST_MARKS = 2
_LEAST_HEIGHT = 88
_GAP, _BESIDE_NUMBER, _BETWEEN, _ABOVE_AND_BELOW = 16, 20, 1, 4


class PinnedNumber(FigureView):
    """The number or its empty seats, on one baseline."""

    def __init__(self) -> None:
        super().__init__(0.0, float(_BASELINE))
        self.setFixedSize(_NUMBER_ROOM)

    def show_percentage(self, percentage: str, *, vetted: bool) -> None:
        """A percentage, a little smaller where it is a long one such as ">99.9 %"; the empty seats for ""."""
        width = lettering().width
        if not percentage:
            self.show_figure(draw_seats(width, size=_NUMBER))
            return
        drawn = draw_number(percentage, width, vetted=vetted, size=_NUMBER)
        if drawn.width > self.width():
            drawn = draw_number(percentage, width, vetted=vetted, size=_NUMBER * self.width() / drawn.width)
        self.show_figure(drawn)

    def anchor_of(self, figure: Figure) -> float:
        """Its baseline."""
        return figure.baseline


class PinnedBar(QWidget):
    """Shows one summary; without one it shows no number."""

    field_asked = Signal(str)
    """The mark of a finding about this field was pressed."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self._longest: tuple[str, str] = ("", "")
        self.number = PinnedNumber()
        self.headline = make_label("", VALUE, semibold=True)
        self.band_name = make_line("", UNIT)
        self.band = make_line("", UNIT, semibold=True)
        self.fingerprint = make_line("", CAPTION, soft=True)
        self.model = make_label("", CAPTION, soft=True)
        self._marks = tuple((IndexMark(), make_line("", UNIT, semibold=True)) for _ in range(_MOST_MARKS))
        self._more = make_line("", UNIT)
        self._fields: dict[int, str] = {}
        for mark, _ in self._marks:
            mark.pressed_for.connect(lambda number: self.field_asked.emit(self._fields.get(number, "")))
        self._lay_out()
        self.clear()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The marks, of which those that lead to a field take the focus."""
        return tuple(mark for mark, _ in self._marks)

    def clear(self) -> None:
        """Take the number off, and everything that was said of it."""
        self.number.show_percentage("", vetted=False)
        for label in (self.headline, self.band_name, self.band, self._more):
            label.setText("")
        for mark, word in self._marks:
            mark.show_findings(())
            word.hide()

    def show_summary(self, summary: PinnedSummary, fingerprint: str, model: str, heading: str = "") -> None:
        """Show what is on the sheet, in short, with the model's fingerprint and its name.

        `heading` is the longest headline that there may be: the bar is as high for every other.
        """
        self.clear()
        self.number.show_percentage(summary.percentage, vetted=summary.vetted)
        self.headline.setText(summary.headline)
        self.headline.setAccessibleDescription(summary.sentence)
        self.band_name.setText(summary.band_name)
        self.band.setText(summary.band_figures)
        self.fingerprint.setText(fingerprint)
        self.model.setText(model)
        self._show_marks(summary.marks)
        self._longest = (heading, model)
        self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Lines break elsewhere."""
        super().resizeEvent(event)
        self._fit()

    def _show_marks(self, marks: tuple[PinnedMark, ...]) -> None:
        self._fields = {mark.number: mark.field for mark in marks}
        for (button, word), shown in zip(self._marks, marks, strict=False):
            name = f"{shown.word} {shown.number}"
            button.show_mark(shown.number, shown.grade, name, leads=bool(shown.field))
            word.setText(shown.word)
            word.show()
        rest = len(marks) - _MOST_MARKS
        self._more.setText(f"and {rest} more" if rest > 0 else "")

    def _fit(self) -> None:
        """As high as the longest words take at this width, so that nothing moves when they change."""
        room = max(100, self.width() - 2 * SIDE_MARGIN - self.number.width() - _BESIDE_NUMBER)
        heading, model = self._longest
        beside = room - self.fingerprint.sizeHint().width() - _GAP
        words = height_of(self.headline, (heading, self.headline.text()), room) + height_of(
            self.model, (model,), beside
        )
        self.setFixedHeight(max(_LEAST_HEIGHT, words + SIDE + 2 * _BETWEEN + 2 * _ABOVE_AND_BELOW))

    def _lay_out(self) -> None:
        line = QHBoxLayout()
        line.setSpacing(8)
        for widget in (self.band_name, self.band):
            line.addWidget(widget)
        line.addSpacing(8)
        for mark, word in self._marks:
            line.addWidget(mark)
            line.addWidget(word)
        line.addWidget(self._more)
        line.addStretch(1)
        named = QHBoxLayout()
        named.setSpacing(_GAP)
        named.addWidget(self.fingerprint, 0, Qt.AlignmentFlag.AlignTop)
        named.addWidget(self.model, 1, Qt.AlignmentFlag.AlignTop)
        words = QVBoxLayout()
        words.setSpacing(_BETWEEN)
        words.addStretch(1)
        words.addWidget(self.headline)
        words.addLayout(line)
        words.addLayout(named)
        words.addStretch(1)
        row = QHBoxLayout(self)
        row.setContentsMargins(SIDE_MARGIN, _ABOVE_AND_BELOW, SIDE_MARGIN, _ABOVE_AND_BELOW)
        row.setSpacing(_BESIDE_NUMBER)
        row.addWidget(self.number)
        row.addLayout(words, 1)
