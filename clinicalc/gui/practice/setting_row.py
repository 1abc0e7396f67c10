"""One setting in a row: its name, its field, what it is for, and why a value was refused."""

from collections.abc import Callable

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent
from PySide6.QtWidgets import QGridLayout, QWidget

from clinicalc.errors import UsageError
from clinicalc.gui.form import FIELD, LABELS
from clinicalc.gui.form_fields import TextField
from clinicalc.gui.labels import make_label, make_question_label
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import UNIT

_LONGEST = 400
"""Letters that a field takes: more than any setting may have, so that a long text is answered and not cut."""


class SettingRow(QWidget):
    """Name at the left, field and words at the right; in a narrow page the name stands over the field."""

    def __init__(self, name: str, field: QWidget, control: QWidget, says: str = "") -> None:
        """`name` may hold an access mark for the `control`; `says` stands under the field."""
        super().__init__()
        plain = name.replace("&", "")
        self.label = make_question_label(name, plain, control)
        self.field = field
        self.note = make_label(says, UNIT, soft=True)
        self.note.setContentsMargins(RING, 0, 0, 2)
        if not says:  # only hidden here: what is shown before it has a parent is a window of its own
            self.note.hide()
        self.refusal = make_label("", UNIT, semibold=True)
        self.refusal.setContentsMargins(RING, 0, 0, 2)
        self.refusal.hide()
        control.setAccessibleName(plain)
        control.setAccessibleDescription(says)
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(12)
        self._grid.setVerticalSpacing(0)
        self._grid.setColumnStretch(1, 1)
        self.set_narrow(False)

    def set_narrow(self, narrow: bool) -> None:
        """The name over the field, or at its left."""
        across = 0 if narrow else 1
        self.label.setMinimumWidth(0 if narrow else LABELS)
        self.label.setMaximumWidth(FIELD if narrow else LABELS)
        self._grid.addWidget(self.label, 0, 0, Qt.AlignmentFlag.AlignTop)
        for place, part in enumerate((self.field, self.refusal, self.note), 1 if narrow else 0):
            at = Qt.AlignmentFlag.AlignLeft if part is self.field else Qt.AlignmentFlag(0)
            self._grid.addWidget(part, place, across, 1, 2 if narrow else 1, at)

    def refuse(self, words: str) -> None:
        """Say at the field why its value was not taken, and that the old one stays in force."""
        self.refusal.setText(f"{words[:1].upper()}{words[1:]} What was set before stays in force.")
        self.refusal.show()
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, self.refusal.text()))

    def settle(self) -> None:
        """Nothing is refused."""
        self.refusal.hide()
        self.refusal.setText("")

    @property
    def is_refused(self) -> bool:
        """Whether a value stands in the field that is not in force."""
        return bool(self.refusal.text())

    def restore(self) -> bool:
        """Show what is in force again; whether anything else stood there."""
        return False


class TextSetting(SettingRow):
    """A setting of one or more lines of words: taken when a line is left or Enter pressed."""

    taken = Signal()
    """Lines that differ from those in force stand in the fields."""

    def __init__(self, name: str, says: str = "", *, lines: int = 1, width: int = FIELD) -> None:
        column = QWidget()
        grid = QGridLayout(column)
        grid.setContentsMargins(0, 0, 0, 0)
        grid.setVerticalSpacing(0)
        self.fields = tuple(TextField(width, _LONGEST) for _ in range(lines))
        for place, field in enumerate(self.fields):
            grid.addWidget(field, place, 0)
        super().__init__(name, column, self.fields[0].edit, says)
        self._shown = ("",) * lines
        for number, field in enumerate(self.fields, 1):
            if lines > 1:
                field.edit.setAccessibleName(f"{name.replace('&', '')}, line {number}")
            field.edit.editingFinished.connect(self._finish)

    @property
    def lines(self) -> tuple[str, ...]:
        """The lines that hold something, without spaces at their ends."""
        return tuple(field.text for field in self.fields if field.text)

    @property
    def text(self) -> str:
        """The one line."""
        return self.fields[0].text

    def show_lines(self, lines: tuple[str, ...]) -> None:
        """Show what is in force; what was refused, or is being typed, stays."""
        unfinished = self._is_unfinished()
        self._shown = (*lines, *("",) * (len(self.fields) - len(lines)))
        if not unfinished:
            self._show()

    def settle(self) -> None:
        """What stands in the fields was taken, and is shown as it was taken."""
        super().settle()
        for field in self.fields:
            field.set_stopped(False)
        self._show()

    def refuse(self, words: str) -> None:
        """As any row; the fields keep what was typed, in a heavy frame."""
        super().refuse(words)
        for field, shown in zip(self.fields, self._shown, strict=True):
            field.set_stopped(field.text != shown)

    def restore(self) -> bool:
        """Show what is in force again; whether anything else stood there."""
        unfinished = self._is_unfinished()
        if unfinished:
            self.settle()
        return unfinished

    def take(self, change: Callable[[], None]) -> None:
        """Do what takes the value; a value that cannot be is refused at the field."""
        try:
            change()
        except UsageError as error:
            self.refuse(str(error))
        else:
            self.settle()

    def _show(self) -> None:
        for field, text in zip(self.fields, self._shown, strict=True):
            if field.edit.text() != text:
                field.edit.setText(text)

    def _is_unfinished(self) -> bool:
        return tuple(field.text for field in self.fields) != self._shown

    def _finish(self) -> None:
        if self._is_unfinished():
            self.taken.emit()
        elif self.is_refused:
            self.settle()
