"""The foot: New patient, what is kept, Copy, Print, Save PDF; and what was just done."""

from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc import __version__
from clinicalc.gui.labels import make_button, make_label, make_line, make_rule
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION, UNIT

_AT = 3
"""The place of a message in the row: after "New patient", a gap and the promise."""


class FootBar(QWidget):
    """Commands and messages; it does nothing itself."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("ground")
        self.message = make_label("", UNIT, semibold=True)
        self.message.hide()
        self.promise = make_line("Nothing is kept unless you save or print it.", UNIT, soft=True)
        self._program = make_line(f"clinicalc {__version__}", CAPTION, soft=True)
        self._is_narrow = False
        self.new_patient = make_button("&New patient")
        self.copy = make_button("Copy")
        self.copy.setAccessibleDescription("Key: Ctrl+Shift+C")
        self.print = make_button("P&rint…")
        self.save_pdf = make_button("Sa&ve PDF…", name="primary")
        self._above = QHBoxLayout()
        self._above.setContentsMargins(SIDE_MARGIN, 8, SIDE_MARGIN, 0)
        self._row = row = QHBoxLayout()
        row.setContentsMargins(SIDE_MARGIN, 8, SIDE_MARGIN, 8)
        row.setSpacing(10)
        row.addWidget(self.new_patient)
        row.addSpacing(8)
        row.addWidget(self.promise)
        row.addWidget(self.message, 1)
        row.addStretch(0)
        row.addWidget(self._program)
        row.addSpacing(6)
        row.addWidget(self.copy)
        row.addWidget(self.print)
        row.addWidget(self.save_pdf)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(make_rule())
        column.addLayout(self._above)
        column.addLayout(row)

    def allow_output(self, allowed: bool) -> None:
        """Whether there is a number that may be copied, printed and saved."""
        for button in (self.copy, self.print, self.save_pdf):
            button.setEnabled(allowed)

    def say(self, message: str) -> None:
        """Show a message in place of the promise, so that nothing else moves for it, and announce it; or none."""
        self.message.setText(message)
        self._show_message_or_promise()
        if message:
            QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, message))

    def set_narrow(self, narrow: bool) -> None:
        """Narrow: the commands, and messages over them when there are any."""
        if narrow is not self._is_narrow:
            before, after = (self._row, self._above) if narrow else (self._above, self._row)
            before.removeWidget(self.message)
            after.insertWidget(_AT if after is self._row else 0, self.message, 1)
        self._is_narrow = narrow
        self._program.setVisible(not narrow)
        self._show_message_or_promise()

    def _show_message_or_promise(self) -> None:
        has_message = bool(self.message.text())
        self.message.setVisible(has_message)
        self.promise.setVisible(not has_message and not self._is_narrow)
