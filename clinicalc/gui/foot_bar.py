"""The foot: New patient, what is kept, Save PDF; and the message line over it."""

from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc import __version__
from clinicalc.gui.labels import make_button, make_label, make_line, make_rule
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION, UNIT


class FootBar(QWidget):
    """Commands and messages; it does nothing itself."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("ground")
        self.message = make_label("", UNIT, semibold=True)
        self.message.setContentsMargins(SIDE_MARGIN, 8, SIDE_MARGIN, 8)
        self.message.hide()
        self.new_patient = make_button("&New patient")
        self.save_pdf = make_button("Sa&ve PDF…", name="primary")
        row = QHBoxLayout()
        row.setContentsMargins(SIDE_MARGIN, 8, SIDE_MARGIN, 8)
        row.setSpacing(16)
        row.addWidget(self.new_patient)
        row.addWidget(make_line("Nothing is kept unless you save or print it.", UNIT, soft=True))
        row.addStretch(1)
        row.addWidget(make_line(f"clinicalc {__version__}", CAPTION, soft=True))
        row.addWidget(self.save_pdf)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(make_rule())
        column.addWidget(self.message)
        column.addLayout(row)

    def say(self, message: str) -> None:
        """Show a message, or none."""
        self.message.setText(message)
        self.message.setVisible(bool(message))
