"""The number, whom it is about, its band and the marks of its findings, kept in sight where the sheet scrolls away."""

from PySide6.QtCore import QSize, Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.gui.figure_view import FigureView, lettering
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.labels import make_line
from clinicalc.gui.pinned_summary import PinnedMark, PinnedSummary
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION, UNIT, VALUE
from clinicalc.report.number import draw_number, draw_seats
from clinicalc.report.shapes import Figure

_NUMBER = 48
_BASELINE = 42
_MOST_MARKS = 2
_HEIGHT = 88
_GAP = 16


class PinnedNumber(FigureView):
    """The number or its empty seats, on one baseline."""

    def __init__(self) -> None:
        super().__init__(0.0, float(_BASELINE))
        self.setFixedSize(QSize(142, 54))

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
        self.setFixedHeight(_HEIGHT)
        self.number = PinnedNumber()
        self.headline = make_line("", VALUE, semibold=True)
        self.band_name = make_line("", UNIT)
        self.band = make_line("", UNIT, semibold=True)
        self.fingerprint = make_line("", CAPTION, soft=True)
        self.model = make_line("", CAPTION, soft=True)
        self._marks = tuple((IndexMark(), make_line("", UNIT, semibold=True)) for _ in range(_MOST_MARKS))
        self._more = make_line("", UNIT)
        self._fields: dict[int, str] = {}
        for mark, _ in self._marks:
            mark.pressed_for.connect(lambda number: self.field_asked.emit(self._fields.get(number, "")))
        self._lay_out()
        self.clear()

    def clear(self) -> None:
        """Take the number off, and everything that was said of it."""
        self.number.show_figure(draw_seats(lettering().width, size=_NUMBER))
        for label in (self.headline, self.band_name, self.band, self._more):
            label.setText("")
        for mark, word in self._marks:
            mark.show_findings(())
            word.hide()

    def show_summary(self, summary: PinnedSummary, fingerprint: str, model: str) -> None:
        """Show what is on the sheet, in short, with the model's fingerprint and its name."""
        self.clear()
        if summary.percentage:
            width = lettering().width
            self.number.show_figure(draw_number(summary.percentage, width, vetted=summary.vetted, size=_NUMBER))
        self._show_words(self.headline, summary.headline)
        self.headline.setAccessibleDescription(summary.sentence)
        self.band_name.setText(summary.band_name)
        self.band.setText(summary.band_figures)
        self.fingerprint.setText(fingerprint)
        self._show_words(self.model, model, self.fingerprint.sizeHint().width() + _GAP)
        self._show_marks(summary.marks)

    def _show_marks(self, marks: tuple[PinnedMark, ...]) -> None:
        self._fields = {mark.number: mark.field for mark in marks}
        for (button, word), shown in zip(self._marks, marks, strict=False):
            name = f"{shown.word} {shown.number}"
            button.show_mark(shown.number, shown.grade, name, leads=bool(shown.field))
            word.setText(shown.word)
            word.show()
        rest = len(marks) - _MOST_MARKS
        self._more.setText(f"and {rest} more" if rest > 0 else "")

    def _show_words(self, label: QLabel, words: str, beside: int = 0) -> None:
        """In one line; what does not fit stands in full further down, and is said in full."""
        room = self.width() - 2 * SIDE_MARGIN - self.number.width() - 20 - beside
        label.setText(label.fontMetrics().elidedText(words, Qt.TextElideMode.ElideRight, max(room, 100)))
        label.setAccessibleName(words)

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
        named.addWidget(self.fingerprint)
        named.addWidget(self.model)
        named.addStretch(1)
        words = QVBoxLayout()
        words.setSpacing(1)
        words.addStretch(1)
        words.addWidget(self.headline)
        words.addLayout(line)
        words.addLayout(named)
        words.addStretch(1)
        row = QHBoxLayout(self)
        row.setContentsMargins(SIDE_MARGIN, 4, SIDE_MARGIN, 4)
        row.setSpacing(20)
        row.addWidget(self.number)
        row.addLayout(words, 1)
