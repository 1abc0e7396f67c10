"""The rows of questions: a predictor's in the column of frames, an exclusion's as a sentence with its answers right."""

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.findings import Finding, Grade
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.index_mark import SIDE
from clinicalc.gui.labels import make_field_label, make_question_label
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.segments import Segments
from clinicalc.gui.tokens import COLUMN_GAP, LABEL_WIDTH, RING, ROW_PITCH

_EXCLUSION_WIDTH = 104


class QuestionRow(FieldRow):
    """A question with its answers; unanswered until somebody answers."""

    def __init__(self, field: QuestionField, marked_label: str) -> None:
        super().__init__(field.id, field.meaning)
        self._field = field
        excludes = bool(field.excludes)
        self.segments = (
            Segments(field.options, field.label, _EXCLUSION_WIDTH) if excludes else Segments(field.options, field.label)
        )
        self.label = (make_question_label if excludes else make_field_label)(marked_label, field.label, self.segments)
        if field.meaning:
            self.segments.setAccessibleDescription(field.meaning)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        if excludes:
            row.setSpacing(0)
            row.addWidget(self.label, 1, Qt.AlignmentFlag.AlignTop)
            row.addSpacing(4)
            row.addLayout(self._stand_level(), 0)
            row.addWidget(self.segments, 0, Qt.AlignmentFlag.AlignTop)
        else:
            row.setSpacing(COLUMN_GAP)
            row.addWidget(self.label)
            row.addWidget(self.segments)
            row.addStretch(1)
            row.addLayout(self._stand_level())
        self.segments.chosen.connect(lambda id: self.typed.emit(self.field_id, Typed(id)))
        self.segments.entered.connect(self.entered)

    def fill(self, typed: Typed | None) -> Typed | None:
        """Choose the answer meant, or none; what is no answer leaves the question unanswered."""
        said = "" if typed is None else typed.text.strip().casefold()
        meant = [o.id for o in self._field.options if said in (o.id.casefold(), o.label.casefold())]
        self.segments.choose(meant[0] if meant else None)
        return Typed(meant[0]) if meant else None

    def show_remarks(self, line: ValueLine | None, findings: Sequence[Finding]) -> None:
        """A heavy frame where the answer stops the number."""
        self.segments.set_stopped(any(f.grade is Grade.STOP and f.code != "missing" for f in findings))

    def fit(self, room: int, *, compact: bool) -> None:
        """The answers take what the label leaves."""
        self.segments.fit(
            _EXCLUSION_WIDTH if self._field.excludes else room - LABEL_WIDTH - 2 * COLUMN_GAP - 2 * RING - SIDE,
        )

    def tab_stops(self) -> tuple[QWidget, ...]:
        """All answers, of which one at a time is the stop; the mark of a finding."""
        return (*self.segments.segments, self.mark)

    def _stand_level(self) -> QVBoxLayout:
        """The mark level with the first line of answers."""
        column = QVBoxLayout()
        column.setContentsMargins(0, (ROW_PITCH - SIDE) // 2, 0, 0)
        column.addWidget(self.mark)
        column.addStretch(1)
        return column
