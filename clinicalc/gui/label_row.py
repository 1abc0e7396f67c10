"""The last row of the values: the name or number for the print."""

from PySide6.QtWidgets import QHBoxLayout, QLineEdit, QSizePolicy, QWidget

from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.labels import make_field_label
from clinicalc.gui.tokens import COLUMN_GAP, RING
from clinicalc.gui.typeface import BASE, face

PRINT_LABEL = "Name or number"
_LONGEST_NAME = 120
"""What a print takes, as `report.document` states it: reading it from there would slow every start."""


class LabelRow(QWidget):
    """The name or number that stands on the print and nowhere else."""

    def __init__(self, marked_label: str) -> None:
        super().__init__()
        self.frame = FieldFrame()
        self.edit = QLineEdit()
        self.edit.setFont(face(BASE))
        self.edit.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.edit.setMaxLength(_LONGEST_NAME)
        self.edit.setAccessibleName(PRINT_LABEL)
        inside = QHBoxLayout(self.frame)
        inside.setContentsMargins(RING + 7, RING + 1, RING + 7, RING + 1)
        inside.addWidget(self.edit)
        self.frame.watch(self.edit)
        self.label = make_field_label(marked_label, PRINT_LABEL, self.edit)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(COLUMN_GAP)
        row.addWidget(self.label)
        row.addWidget(self.frame)
        row.addStretch(1)

    def fill(self, label: str) -> None:
        """Show a label without history and without telling anybody."""
        blocked = self.edit.blockSignals(True)
        self.edit.setText(label)
        self.edit.blockSignals(blocked)
