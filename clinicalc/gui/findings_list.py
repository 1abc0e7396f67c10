"""The findings as a numbered list: a mark, the grade in words, the message."""

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QFrame, QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.assessment.findings import Finding, Grade
from clinicalc.gui.labels import Heading, make_label, make_line
from clinicalc.gui.typeface import CAPTION
from clinicalc.report.phrases import count_words

_WORDS = {Grade.STOP: "Stop", Grade.CAUTION: "Caution", Grade.NOTE: "Note"}
_MARK = 20
_WORD_WIDTH = 62


class FindingsList(QWidget):
    """Stops first, each in a heavy frame; then cautions and notes."""

    def __init__(self) -> None:
        super().__init__()
        self._heading = Heading("No findings so far")
        self._list = QWidget()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        column.addWidget(self._heading)
        column.addWidget(self._list)
        self._column = column

    def show_findings(self, findings: Sequence[Finding]) -> None:
        """Replace the list."""
        self._heading.label.setText(count_words(len(findings), "finding") if findings else "No findings so far")
        fresh = QWidget()
        entries = QVBoxLayout(fresh)
        entries.setContentsMargins(0, 0, 0, 0)
        entries.setSpacing(8)
        for number, finding in enumerate(findings, 1):
            entries.addWidget(_make_entry(number, finding))
        self._column.replaceWidget(self._list, fresh)
        self._list.hide()
        self._list.deleteLater()
        self._list = fresh


def _make_entry(number: int, finding: Finding) -> QFrame:
    entry = QFrame()
    stops = finding.grade is Grade.STOP
    if stops:
        entry.setObjectName("stop")
    row = QHBoxLayout(entry)
    row.setContentsMargins(8 if stops else 0, 8 if stops else 0, 8 if stops else 0, 8 if stops else 0)
    row.setSpacing(11)
    mark = make_line(str(number), CAPTION, semibold=True)
    mark.setProperty("grade", finding.grade.value)
    mark.setFixedSize(_MARK, _MARK)
    mark.setAlignment(Qt.AlignmentFlag.AlignCenter)
    word = make_line(_WORDS[finding.grade], semibold=True)
    word.setFixedWidth(_WORD_WIDTH)
    message = make_label(finding.message)
    message.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
    for widget, stretch in ((mark, 0), (word, 0), (message, 1)):
        row.addWidget(widget, stretch, Qt.AlignmentFlag.AlignTop)
    return entry
