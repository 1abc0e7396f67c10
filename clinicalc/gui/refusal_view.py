"""A coefficient file that is refused: every problem as plain text that can be copied."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QPlainTextEdit, QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError, CoefficientFileRefused
from clinicalc.gui.labels import make_button, make_label
from clinicalc.gui.typeface import BASE, TITLE, face

_OF_A_FILE = "Nothing was taken from it. Correct the file or open another one."


class RefusalView(QWidget):
    """Covers the patient page, so that no number stands beside a file that it does not belong to."""

    closed = Signal()

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.title = make_label("", TITLE, semibold=True)
        self.explanation = make_label(_OF_A_FILE)
        self.problems = QPlainTextEdit()
        self.problems.setReadOnly(True)
        self.problems.setFont(face(BASE))
        self.problems.setTabChangesFocus(True)
        self.problems.setAccessibleName("Problems of the file")
        self.problems.setTextInteractionFlags(
            Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
        )
        self.back = make_button("&Back")
        self.back.clicked.connect(self.closed)
        column = QVBoxLayout(self)
        column.setContentsMargins(32, 24, 28, 20)
        column.setSpacing(12)
        column.addWidget(self.title)
        column.addWidget(self.explanation)
        column.addWidget(self.problems, 1)
        row = QHBoxLayout()
        row.addWidget(self.back)
        row.addStretch(1)
        column.addLayout(row)

    def show_refusal(self, name: str, error: ClinicalcError, explanation: str = _OF_A_FILE) -> None:
        """Show why the file or the approved model called `name` was not opened."""
        self.title.setText(f"{name} was not opened")
        self.explanation.setText(explanation)
        if isinstance(error, CoefficientFileRefused):
            self.problems.setPlainText("\n\n".join(str(problem) for problem in error.problems))
        else:
            self.problems.setPlainText(str(error))
        self.problems.setFocus(Qt.FocusReason.OtherFocusReason)

    def go_across(self) -> None:
        """The focus to the problems, and from there to the way back."""
        there = self.back if self.problems.hasFocus() else self.problems
        there.setFocus(Qt.FocusReason.ShortcutFocusReason)
