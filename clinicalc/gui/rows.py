"""The rows of the values pane: one field each, and what they share."""

from collections.abc import Sequence

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.findings import Finding
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.dated_entry import DatedEntry
from clinicalc.gui.index_mark import IndexMark


class FieldRow(QWidget):
    """One field: tells what was typed, shows what is to be said about it."""

    typed = Signal(str, object)
    """Field id and Typed, or None when the field is empty or unanswered."""
    entered = Signal()
    """Enter was pressed: on to the next field."""

    def __init__(self, id: str, meaning: str = "") -> None:
        super().__init__()
        self.field_id = id
        self._meaning = meaning.strip()
        self.mark = IndexMark()
        self.dated: DatedEntry | None = None
        """The day of the value, where the file says how old it may be; it stands elsewhere than the row."""

    def note(self) -> str:
        """What the file means by the field, as a sentence; "" where it does not say."""
        text = self._meaning
        return f"{text[:1].upper()}{text[1:]}{'' if text.endswith(('.', '?', '!')) else '.'}" if text else ""

    def fill(self, typed: Typed | None) -> Typed | None:
        """Show a value or none, without history; returns it in the form in which it now stands."""
        raise NotImplementedError

    def show_remarks(self, line: ValueLine | None, findings: Sequence[Finding]) -> None:
        """What an assessment says about this field; None where there is no assessment."""
        raise NotImplementedError

    def fit(self, room: int, *, compact: bool) -> None:
        """Settle into `room` pixels; compact puts remarks on a line of their own."""
        raise NotImplementedError

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The widgets the tab key stops at, in order; the first takes the focus when the field is gone to."""
        raise NotImplementedError
