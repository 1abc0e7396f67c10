"""The findings as footnotes: a numbered mark, the grade in words, the message."""

from collections.abc import Mapping, Sequence

from PySide6.QtCore import QRectF, Qt, Signal
from PySide6.QtGui import QColor, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout

from clinicalc.assessment.findings import Finding, Grade
from clinicalc.gui import theme
from clinicalc.gui.figure_view import text_part
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.labels import Heading, make_label, make_line
from clinicalc.gui.wording import GRADE_WORDS, findings_heading

OVERHANG = 2
"""How far the list's edge lies left of its text: the marks need it for the focus ring."""
_GAP = 9
_WORD_WIDTH = 62


class FindingsList(Block):
    """Stops first, each in a heavy frame; then cautions and notes."""

    field_asked = Signal(str)
    """The mark of a finding about this field was pressed."""

    def __init__(self) -> None:
        super().__init__()
        self._heading = Heading("No findings so far")
        head = QHBoxLayout()
        head.setContentsMargins(OVERHANG, 0, 0, 0)
        head.addWidget(self._heading)
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(4)
        self._column.addLayout(head)
        self._entries: list[FindingEntry] = []
        self._shown: tuple[tuple[int, Finding], ...] = ()

    def show_findings(
        self, findings: Sequence[tuple[int, Finding]], labels: Mapping[str, str], *, heading: str | None = None
    ) -> None:
        """Replace the list by numbered findings; `labels` has the name of every field that can be gone to.

        The heading says how many there are, unless it is given.
        Entries stay and take other words: a list made anew at every key would cost more than the assessment.
        """
        self._heading.label.setText(findings_heading(findings) if heading is None else heading)
        while len(self._entries) < len(findings):
            entry = FindingEntry()
            entry.field_asked.connect(self.field_asked)
            self._entries.append(entry)
            self._column.addWidget(entry)
        for entry, (number, finding) in zip(self._entries, findings, strict=False):
            entry.show_finding(number, finding, labels.get(finding.field, ""))
        for place, entry in enumerate(self._entries):
            entry.setVisible(place < len(findings))
            if place >= len(findings):
                entry.clear()
        self._shown = tuple(findings)

    @property
    def shown(self) -> tuple[tuple[int, Finding], ...]:
        """What is listed, with its numbers."""
        return self._shown

    def tab_stops(self) -> tuple[IndexMark, ...]:
        """The marks that lead to a field, in order."""
        marks = [entry.mark for entry in self._entries[: len(self._shown)]]
        return tuple(mark for mark in marks if mark.isEnabled())


class FindingEntry(Block):
    """One finding."""

    field_asked = Signal(str)

    def __init__(self) -> None:
        super().__init__()
        self._finding: Finding | None = None
        self.mark = IndexMark()
        self.word = make_line("", semibold=True)
        self.word.setFixedWidth(round(_WORD_WIDTH * text_part()))
        self.message = make_label()
        self.message.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
        for label in (self.word, self.message):
            label.setContentsMargins(0, 2, 0, 2)
        self._row = QHBoxLayout(self)
        self._row.setSpacing(_GAP)
        for widget, stretch in ((self.mark, 0), (self.word, 0), (self.message, 1)):
            self._row.addWidget(widget, stretch, Qt.AlignmentFlag.AlignTop)
        self.mark.clicked.connect(self._ask)

    def show_finding(self, number: int, finding: Finding, label: str) -> None:
        """Show a finding; `label` names the field it is about, "" where there is none to go to."""
        if finding == self._finding and number == self.mark.number:
            return
        self._finding = finding
        grade = GRADE_WORDS[finding.grade]
        name = f"{grade} {number}: go to {label}" if label else f"{grade} {number}"
        self.mark.show_mark(number, finding.grade, name, leads=bool(label))
        self.word.setText(grade)
        self.message.setText(finding.message)
        inside = 10 if finding.grade is Grade.STOP else 0
        self._row.setContentsMargins(inside, inside - 2 if inside else 0, inside, inside - 2 if inside else 0)
        self.update()

    def clear(self) -> None:
        """Hold nothing of a finding that is no longer there: its words may name a number."""
        if self._finding is None:
            return
        self._finding = None
        self.mark.setAccessibleName("")
        for label in (self.word, self.message):
            label.clear()

    def paintEvent(self, event: QPaintEvent) -> None:
        """The heavy frame of a stop."""
        if self._finding is None or self._finding.grade is not Grade.STOP:
            return
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(QColor(theme.tokens().ink), 2))
        painter.drawRoundedRect(QRectF(self.rect()).adjusted(OVERHANG + 1, 1, -1, -1), 3, 3)
        painter.end()

    def _ask(self) -> None:
        if self._finding is not None:
            self.field_asked.emit(self._finding.field)
