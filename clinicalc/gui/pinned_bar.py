"""The number with its band, or why there is none, and its findings' marks, in sight where the sheet scrolls away."""

from collections.abc import Sequence

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
_AFTER_BAND = 2
_NO_NUMBER = "No number yet"
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
        self._headings: tuple[str, ...] = ()
        self._reasons: tuple[str, ...] = ()
        self.number = PinnedNumber()
        self.headline = make_label("", VALUE, semibold=True)
        self.sentence = make_label("", UNIT)
        self.band_name = make_line("", UNIT)
        self.band = make_line("", UNIT, semibold=True)
        self.fingerprint = make_line("", CAPTION, soft=True)
        self.model = make_label("", CAPTION, soft=True)
        self._marks = tuple((IndexMark(), make_line("", UNIT, semibold=True)) for _ in range(_MOST_MARKS))
        self._more = make_line("", UNIT)
        self._fields: dict[int, str] = {}
        self._rest = 0
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
        labels = (self.headline, self.sentence, self.band_name, self.band, self.fingerprint, self.model, self._more)
        for label in labels:
            label.setText("")
        self._rest = 0
        self._more.setAccessibleName("")
        self.headline.setAccessibleDescription("")  # its words name a number that is no longer there
        for mark, word in self._marks:
            mark.show_findings(())
            word.hide()

    def keep_room(self, heading: str, reasons: Sequence[str]) -> None:
        """Stay as high as the longest headline of a number and the longest of the reasons for none take."""
        self._headings, self._reasons = (heading,), tuple(reasons)

    def show_summary(self, summary: PinnedSummary, fingerprint: str, model: str) -> None:
        """Show what is on the sheet, in short, with the model's fingerprint and its name.

        Without a number, the sentence that says what is still to go or what stops it takes the place of the band.
        """
        self.clear()
        self.number.show_percentage(summary.percentage, vetted=summary.vetted)
        self.headline.setText(summary.headline)
        self.headline.setAccessibleDescription(summary.sentence)
        self._arrange(has_number=bool(summary.percentage))
        if summary.percentage:
            self.band_name.setText(summary.band_name)
            self.band.setText(summary.band_figures)
        else:
            self.sentence.setText(summary.sentence)
        self.fingerprint.setText(fingerprint)
        self.model.setText(model)
        self._show_marks(summary.marks)
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
        self._rest = max(0, len(marks) - _MOST_MARKS)

    def _say_rest(self, room: int) -> None:
        """How many findings have no mark here, in words where the line has room for them beside a long band."""
        words = f"and {self._rest} more" if self._rest else ""
        before = (self.band_name, self.band) if self.sentence.isHidden() else (self.headline,)
        beside = sum(label.sizeHint().width() + self._line.spacing() for label in before)
        self._more.setAccessibleName(words)
        for said in (words, f"+{self._rest}" if self._rest else ""):
            self._more.setText(said)
            if beside + self._marked.sizeHint().width() <= room:
                return

    def _arrange(self, *, has_number: bool) -> None:
        """The marks stand beside the band, or beside the two or three words that there is no number."""
        for part in (self.band_name, self.band):
            part.setVisible(has_number)
        self.sentence.setVisible(not has_number)
        self.headline.setWordWrap(has_number)
        self._top.setStretch(0, int(has_number))
        if has_number:
            self._line.insertWidget(_AFTER_BAND, self._listed)
        else:
            self._top.insertWidget(1, self._listed)

    def _fit(self) -> None:
        """As high as the longest words take at this width, so that nothing moves when they change."""
        room = max(100, self.width() - 2 * SIDE_MARGIN - self.number.width() - _BESIDE_NUMBER)
        self._say_rest(room)
        beside = room - self.fingerprint.sizeHint().width() - _GAP
        with_number = height_of(self.headline, (*self._headings, self.headline.text()), room)
        without = max(SIDE, height_of(self.headline, (_NO_NUMBER,), room)) + _BETWEEN
        without += height_of(self.sentence, (*self._reasons, self.sentence.text()), room)
        words = max(with_number + SIDE, without) + height_of(self.model, (self.model.text(),), beside)
        self.setFixedHeight(max(_LEAST_HEIGHT, words + 2 * _BETWEEN + 2 * _ABOVE_AND_BELOW))

    def _lay_out(self) -> None:
        self._listed = QWidget()
        self._marked = listed = QHBoxLayout(self._listed)
        listed.setContentsMargins(8, 0, 0, 0)
        listed.setSpacing(8)
        for mark, word in self._marks:
            listed.addWidget(mark)
            listed.addWidget(word)
        listed.addWidget(self._more)
        self._line = QHBoxLayout()
        self._line.setSpacing(8)
        for widget in (self.band_name, self.band, self._listed):
            self._line.addWidget(widget)
        self._line.addStretch(1)
        self._top = QHBoxLayout()
        self._top.setSpacing(8)
        self._top.addWidget(self.headline, 1)
        self._top.addStretch(0)
        named = QHBoxLayout()
        named.setSpacing(_GAP)
        named.addWidget(self.fingerprint, 0, Qt.AlignmentFlag.AlignTop)
        named.addWidget(self.model, 1, Qt.AlignmentFlag.AlignTop)
        words = QVBoxLayout()
        words.setSpacing(_BETWEEN)
        words.addStretch(1)
        words.addLayout(self._top)
        words.addWidget(self.sentence)
        words.addLayout(self._line)
        words.addLayout(named)
        words.addStretch(1)
        row = QHBoxLayout(self)
        row.setContentsMargins(SIDE_MARGIN, _ABOVE_AND_BELOW, SIDE_MARGIN, _ABOVE_AND_BELOW)
        row.setSpacing(_BESIDE_NUMBER)
        row.addWidget(self.number)
        row.addLayout(words, 1)
