"""The rows of questions: a predictor's in the column of frames, an exclusion's as a sentence with its answers right."""

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QBoxLayout, QGridLayout, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.findings import Finding, Grade
from clinicalc.assessment.not_measured import says_not_measured
from clinicalc.assessment.result import ValueLine
from clinicalc.coefficients.answers import NOT_MEASURED
from clinicalc.gui.changed_answer import ChangedAnswer
from clinicalc.gui.changed_place import BESIDE_ROOM, BESIDE_WIDTH, UNDER_WIDTH, make_change_caption
from clinicalc.gui.index_mark import SIDE
from clinicalc.gui.labels import make_field_label, make_question_label
from clinicalc.gui.not_measured_button import NotMeasuredButton
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.segments import Segments
from clinicalc.gui.tokens import COLUMN_GAP, LABEL_WIDTH, RING, ROW_PITCH

_EXCLUSION_WIDTH = 104


class QuestionRow(FieldRow):
    """A question with its answers; unanswered until somebody answers."""

    def __init__(self, field: QuestionField, marked_label: str, *, changeable: bool = False) -> None:
        super().__init__(field.id, field.meaning, changeable=changeable)
        self._field = field
        excludes = bool(field.excludes)
        self.segments = (
            Segments(field.options, field.label, _EXCLUSION_WIDTH) if excludes else Segments(field.options, field.label)
        )
        self.label = (make_question_label if excludes else make_field_label)(marked_label, field.label, self.segments)
        if field.meaning:
            self.segments.setAccessibleDescription(field.meaning)
        self.not_measured = NotMeasuredButton(field.label) if field.may_be_missing else None
        self._change: ChangedAnswer | None = None
        self._caption: QLabel | None = None
        self._changed_beside = False
        self._answers = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        self._first_line, self._under = QHBoxLayout(), QHBoxLayout()
        self._lay_out()
        if self.not_measured is not None:
            self.not_measured.clicked.connect(self._take_open)
        self.segments.chosen.connect(self._take_answer)
        self.segments.entered.connect(self.entered)

    def fill(self, typed: Typed | None) -> Typed | None:
        """Choose the answer meant, or none; what is no answer leaves the question unanswered."""
        open_ = typed is not None and self.not_measured is not None and says_not_measured(self._field, typed.text)
        meant = None if typed is None or open_ else self.segments.answer_meant(typed.text)
        self.segments.choose(meant)
        self._show_open(open_)
        if open_:
            return Typed(NOT_MEASURED)
        return None if meant is None else Typed(meant)

    def fill_change(self, typed: Typed | None) -> Typed | None:
        """Choose a changed answer, or none."""
        if typed is not None:
            self._have_change()
        if self._change is None:
            return typed
        self._change.fill(typed)
        return self._change.typed

    def show_remarks(self, line: ValueLine | None, findings: Sequence[Finding]) -> None:
        """A heavy frame where the answer stops the number."""
        self.segments.set_stopped(any(f.grade is Grade.STOP and f.code != "missing" for f in findings))

    def fit(self, room: int, *, compact: bool) -> None:
        """The answers take what the label leaves."""
        room -= LABEL_WIDTH + 2 * COLUMN_GAP + 2 * RING + SIDE
        self.segments.fit(_EXCLUSION_WIDTH if self._field.excludes else room)
        self._changed_beside = self._fit_change(room + COLUMN_GAP + 2 * RING)
        if self.not_measured is not None:
            beside = not self._changed_beside and self.segments.width() + self.not_measured.width() <= room + 2 * RING
            way = QBoxLayout.Direction.LeftToRight if beside else QBoxLayout.Direction.TopToBottom
            self._answers.setDirection(way)
            self._answers.setSpacing(RING if beside else 0)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """All answers, of which one at a time is the stop; those of the second field; the mark of a finding."""
        open_ = () if self.not_measured is None else (self.not_measured,)
        change = () if self._change is None else self._change.tab_stops()
        if self._changed_beside:
            return (*self.segments.segments, *change, *open_, self.mark)
        return (*self.segments.segments, *open_, *change, self.mark)

    def _lay_out(self) -> None:
        row = QHBoxLayout()
        row.setSpacing(0)
        if self._field.excludes:
            row.addWidget(self.label, 1, Qt.AlignmentFlag.AlignTop)
            row.addSpacing(4)
            row.addLayout(self._stand_level(), 0)
            row.addWidget(self.segments, 0, Qt.AlignmentFlag.AlignTop)
        else:
            row.addWidget(self.label)
            row.addSpacing(COLUMN_GAP)
            row.addLayout(self._answers)
            row.addStretch(1)
            row.addLayout(self._stand_level())
            self._first_line.setSpacing(RING)
            self._first_line.addWidget(self.segments)
            self._answers.addLayout(self._first_line)
        if self.not_measured is not None:  # the label level with the answers, whatever stands under them
            self.label.setMinimumHeight(ROW_PITCH)
            row.setAlignment(self.label, Qt.AlignmentFlag.AlignTop)
            self._answers.addWidget(self.not_measured)
        lines = QVBoxLayout(self)
        lines.setContentsMargins(0, 0, 0, 0)
        lines.setSpacing(0)
        lines.addLayout(row)
        lines.addLayout(self._under)

    def _make_change(self) -> ChangedAnswer:
        change, caption = ChangedAnswer(self._field), make_change_caption()
        self._change, self._caption = change, caption
        caption.setFixedWidth(LABEL_WIDTH)
        self._under.setSpacing(0)
        self._under.addWidget(caption)
        self._under.addSpacing(COLUMN_GAP)
        self._under.addStretch(1)
        self._first_line.addWidget(change)
        change.hide()
        change.retyped.connect(lambda: self.changed.emit(self.field_id, change.typed))
        change.entered.connect(self.change_entered)
        change.stand_beside(self.segments.answer)
        change.show_open(self.not_measured is not None and self.not_measured.isChecked())
        return change

    def _fit_change(self, room: int) -> bool:
        """Show the second field beside the first where both have room, else on a line of its own; whether beside."""
        if self._change is None or self._caption is None:
            return False
        beside = self._change.fits_beside() and self.segments.width() + RING + BESIDE_ROOM <= room
        if beside:
            self._first_line.addWidget(self._change)
        else:
            self._under.insertWidget(2, self._change)
        self._change.set_width(BESIDE_WIDTH if beside else UNDER_WIDTH)
        self._change.setVisible(self.changes_shown)
        self._caption.setVisible(self.changes_shown and not beside)
        return beside and self.changes_shown

    def _take_answer(self, id: str) -> None:
        self._show_open(False)
        self.typed.emit(self.field_id, Typed(id))

    def _take_open(self, pressed: bool) -> None:
        """The button was pressed: no answer stands any more, and that is said of the question or taken back."""
        self.segments.choose(None)
        self._show_open(pressed)
        self.typed.emit(self.field_id, Typed(NOT_MEASURED) if pressed else None)

    def _show_open(self, open_: bool) -> None:
        """Whether nobody knows the answer; the second field follows that, and the answer."""
        if self.not_measured is not None:
            self.not_measured.show_pressed(open_)
        if self._change is not None:
            self._change.stand_beside(self.segments.answer)
            self._change.show_open(open_)

    def _stand_level(self) -> QGridLayout:
        """The mark level with the first line of answers, however high it is."""
        column = QGridLayout()
        column.setContentsMargins(0, 0, 0, 0)
        column.setRowMinimumHeight(0, ROW_PITCH)
        column.addWidget(self.mark, 0, 0, Qt.AlignmentFlag.AlignVCenter)
        column.setRowStretch(1, 1)
        return column
