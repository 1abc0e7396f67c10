"""The row of a value that is only worked out from others and never typed."""

from collections.abc import Sequence

from PySide6.QtWidgets import QHBoxLayout, QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding
from clinicalc.assessment.numerals import plain
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.labels import make_label, make_row_label
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.tokens import COLUMN_GAP, RING, ROW_PITCH
from clinicalc.gui.typeface import UNIT

_NOTHING = "–"


class WorkedOutRow(FieldRow):
    """Label and figure, no field."""

    def __init__(self, field: NumberField) -> None:
        super().__init__(field.id, field.meaning)
        self._field = field
        self.value = make_label(_NOTHING, UNIT, soft=True)
        self.value.setAccessibleName(field.label)
        self.setMinimumHeight(ROW_PITCH)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(COLUMN_GAP + RING)
        row.addWidget(make_row_label(field.label))
        row.addWidget(self.value, 1)
        row.addWidget(self.mark)

    def fill(self, typed: Typed | None) -> Typed | None:
        """Nothing can be typed here; text from elsewhere is kept, so that its finding is seen."""
        return typed

    def show_remarks(self, line: ValueLine | None, findings: Sequence[Finding]) -> None:
        """The figure, when there is one, to as many digits as the findings say it."""
        if line is None or not line.worked_out or line.number is None:
            self.value.setText(_NOTHING)
            return
        unit = "" if self._field.unit == "1" else f" {self._field.spelling}"
        self.value.setText(f"{plain(line.number)}{unit}, worked out")

    def fit(self, room: int, *, compact: bool) -> None:
        """Takes any room."""

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Only the mark of a finding."""
        return (self.mark,)
