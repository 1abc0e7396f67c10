"""The day beside "Approve": until when the model is to be approved."""

from datetime import date

from PySide6.QtWidgets import QHBoxLayout, QWidget

from clinicalc.gui.figure_view import text_part
from clinicalc.gui.form_fields import TextField, read_stated_day
from clinicalc.gui.labels import make_field_label
from clinicalc.units.days import day_words

NAME = "Approve until"
_FIELD = 144
_LONGEST = 40


class UntilField(QWidget):
    """Filled with a day in words; another one can be typed, also as year, month and day."""

    def __init__(self) -> None:
        super().__init__()
        self._field = TextField(round(_FIELD * text_part()), _LONGEST)
        self.edit = self._field.edit
        self.edit.setAccessibleName(NAME)
        self.edit.setAccessibleDescription("The last day on which it gives a number; “Approve…” takes it along")
        row = QHBoxLayout(self)
        row.setContentsMargins(8, 0, 0, 0)
        row.setSpacing(0)
        label = make_field_label("Approve &until", NAME, self.edit)
        label.setWordWrap(False)
        label.setFixedWidth(label.fontMetrics().horizontalAdvance(NAME) + 14)
        row.addWidget(label)
        row.addWidget(self._field)

    def fill(self, day: date) -> None:
        """Show a day."""
        self.edit.setText(day_words(day))

    def day(self) -> date:
        """The day that is stated. Raises UsageError where none is."""
        do = "Write beside “Approve until” a day such as 30 November 2027, or 2027-11-30."
        return read_stated_day(self._field.text, do)
