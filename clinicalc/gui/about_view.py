"""What the program is and what it does not claim; the notices for what others made."""

from PySide6.QtCore import QSize, Qt
from PySide6.QtWidgets import QDialog, QHBoxLayout, QPlainTextEdit, QVBoxLayout, QWidget

from clinicalc.gui.labels import Heading, make_button, make_label
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE, UNIT, face
from clinicalc.operations.about import About, read_about


class AboutView(QDialog):
    """Name, version, the sentences about approval and hazards, and the notices; it knows nothing about any patient."""

    def __init__(self, parent: QWidget | None = None, about: About | None = None) -> None:
        super().__init__(parent)
        shown = read_about() if about is None else about
        self.setObjectName("sheet")
        self.setWindowTitle("About")
        self.setModal(False)
        self.resize(QSize(760, 620).boundedTo(self.screen().availableSize()))
        self.title = make_label(f"{shown.name} {shown.version}", TITLE, semibold=True)
        self.sentences = tuple(make_label(text) for text in (shown.purpose, shown.no_approval, shown.hazards))
        self.notices = QPlainTextEdit()
        self.notices.setReadOnly(True)
        self.notices.setFont(face(UNIT))
        self.notices.setTabChangesFocus(True)
        self.notices.setAccessibleName("Notices for what others made")
        self.notices.setTextInteractionFlags(
            Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
        )
        self.notices.setPlainText(shown.notices)
        self.close_button = make_button("&Close")
        self.close_button.clicked.connect(self.close)
        self._lay_out()
        self.close_button.setFocus(Qt.FocusReason.OtherFocusReason)

    def _lay_out(self) -> None:
        column = QVBoxLayout(self)
        column.setContentsMargins(SHEET_MARGIN, 24, SHEET_MARGIN_RIGHT, 20)
        column.setSpacing(10)
        column.addWidget(self.title)
        for sentence in self.sentences:
            column.addWidget(sentence)
        column.addSpacing(6)
        column.addWidget(Heading("Notices"))
        column.addWidget(self.notices, 1)
        row = QHBoxLayout()
        row.addWidget(self.close_button)
        row.addStretch(1)
        column.addLayout(row)
