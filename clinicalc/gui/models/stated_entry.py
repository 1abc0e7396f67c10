"""One entry of a card that must not be passed over: a stop in its heavy frame, or a caution."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QHBoxLayout

from clinicalc.assessment.findings import Grade
from clinicalc.gui.figure_view import text_part
from clinicalc.gui.labels import make_label, make_line
from clinicalc.gui.wording import GRADE_WORDS

_WORD_WIDTH, _GAP = 62, 9


class StatedEntry(QFrame):
    """The word of the grade, and the sentence: what happened and what to do."""

    def __init__(self, grade: Grade, sentence: str) -> None:
        super().__init__()
        self.grade = grade
        is_stop = grade is Grade.STOP
        if is_stop:
            self.setObjectName("stop")
        self.word = make_line(GRADE_WORDS[grade], semibold=True)
        self.word.setFixedWidth(round(_WORD_WIDTH * text_part()))
        self.message = make_label(sentence)
        self.message.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        self.message.setAccessibleName(f"{GRADE_WORDS[grade]}: {sentence}")
        row = QHBoxLayout(self)
        row.setSpacing(_GAP)
        row.setContentsMargins(*((10, 6, 10, 7) if is_stop else (0, 0, 0, 0)))
        row.addWidget(self.word, 0, Qt.AlignmentFlag.AlignTop)
        row.addWidget(self.message, 1)
