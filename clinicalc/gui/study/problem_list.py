"""Problems as footnotes: a numbered mark whose ink is the gravity, the word of it, the sentence."""

from collections.abc import Sequence
from dataclasses import dataclass

from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout

from clinicalc.assessment.findings import Grade
from clinicalc.gui import theme
from clinicalc.gui.figure_view import text_part
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.labels import make_label, make_line
from clinicalc.gui.wording import GRADE_WORDS

_WORD_WIDTH, _GAP = 62, 9
_ORDER = (Grade.STOP, Grade.CAUTION, Grade.NOTE)


@dataclass(frozen=True, slots=True)
class Stated:
    """A graded sentence about data, a model or a fit."""

    grade: Grade
    sentence: str


class ProblemList(Block):
    """All of them, stops first; the numbers are those of this list."""

    def __init__(self, stated: Sequence[Stated]) -> None:
        super().__init__()
        ordered = sorted(stated, key=lambda one: _ORDER.index(one.grade))
        self.entries = [ProblemEntry(number, one) for number, one in enumerate(ordered, 1)]
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(4)
        for entry in self.entries:
            column.addWidget(entry)


class ProblemEntry(Block):
    """One sentence; a stop stands in a heavy frame."""

    def __init__(self, number: int, stated: Stated) -> None:
        super().__init__()
        self.stated = stated
        words = GRADE_WORDS[stated.grade]
        self.mark = IndexMark()
        self.word = make_line(words, semibold=True)
        self.word.setFixedWidth(round(_WORD_WIDTH * text_part()))
        self.message = make_label(stated.sentence)
        self.message.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.message.setAccessibleName(f"{words} {number}: {stated.sentence}")
        for label in (self.word, self.message):
            label.setContentsMargins(0, 2, 0, 2)
        row = QHBoxLayout(self)
        row.setSpacing(_GAP)
        row.setContentsMargins(*((10, 6, 10, 6) if stated.grade is Grade.STOP else (10, 0, 10, 0)))
        for widget, stretch in ((self.mark, 0), (self.word, 0), (self.message, 1)):
            row.addWidget(widget, stretch, Qt.AlignmentFlag.AlignTop)
        self.mark.show_mark(number, stated.grade, f"{words} {number}", leads=False)

    def paintEvent(self, event: QPaintEvent) -> None:
        """The heavy frame of a stop."""
        if self.stated.grade is not Grade.STOP:
            return
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(QColor(theme.tokens().ink), 2))
        painter.drawRoundedRect(QRectF(self.rect()).adjusted(1, 1, -1, -1), 3, 3)
        painter.end()


def count_stated(stated: Sequence[Stated]) -> str:
    """How many there are: "2 stops, 1 caution"; "" for none."""
    counts = ((grade, sum(one.grade is grade for one in stated)) for grade in _ORDER)
    return ", ".join(f"{count} {grade.value}{'' if count == 1 else 's'}" for grade, count in counts if count)
