"""The rows of the values pane: one field each, and what they share."""

from collections.abc import Sequence

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QWidget

from clinicalc.assessment.comparison import Comparison
from clinicalc.assessment.entry import Typed
from clinicalc.assessment.findings import Finding
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.changed_place import ChangedPlace
from clinicalc.gui.dated_entry import DatedEntry
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.stated_entry import StatedEntry


class FieldRow(QWidget):
    """One field: tells what was typed, shows what is to be said about it."""

    typed = Signal(str, object)
    """Field id and Typed, or None when the field is empty or unanswered."""
    changed = Signal(str, object)
    """Field id and the changed value of a comparison, or None when there is none any more."""
    both_typed = Signal(str, object, object)
    """Field id, the value and its change, where one act has read both of them anew."""
    entered = Signal()
    """Enter was pressed: on to the next field."""
    change_entered = Signal()
    """Enter was pressed in the second field: on to the next of those."""

    def __init__(self, id: str, meaning: str = "", *, changeable: bool = False) -> None:
        super().__init__()
        self.field_id = id
        self._meaning = meaning.strip()
        self.mark = IndexMark()
        self.changes_shown = False
        """Whether second fields are on screen, here or in other rows."""
        self.is_changeable = changeable
        """Whether a comparison may change the value."""
        self._second: ChangedPlace | None = None
        self.dated: DatedEntry | None = None
        """The day of the value, where the file says how old it may be; a part of what is `stated`."""
        self.stated: StatedEntry | None = None
        """What is stated beside the value, where the file gives it a meaning; it stands elsewhere than the row."""

    @property
    def change(self) -> ChangedPlace | None:
        """The second field, where a comparison may change the value; made when it is first asked for."""
        self._have_change()
        return self._second

    @property
    def is_changing(self) -> bool:
        """Whether what is typed now goes into the second field."""
        return self._second is not None and self._second.has_focus

    @property
    def stated_now(self) -> StatedEntry | None:
        """What can be stated beside the field in focus; nothing beside a changed value."""
        return None if self.is_changing else self.stated

    def show_changes(self, shown: bool) -> None:
        """Show second fields or hide them; the row then is to be fitted anew."""
        self.changes_shown = shown
        if shown:
            self._have_change()

    def fill_change(self, typed: Typed | None) -> Typed | None:
        """Show a changed value or none, without history; returns it in the form in which it now stands."""
        return typed

    def show_comparison(self, comparison: Comparison | None) -> None:
        """What a comparison says about the changed value."""
        if self._second is not None:
            said = () if comparison is None else (*comparison.refused, *comparison.findings)
            self._second.show_findings([finding for finding in said if finding.field == self.field_id])

    def note(self) -> str:
        """What the file means by the field, as a sentence; "" where it does not say."""
        text = self._meaning
        return f"{text[:1].upper()}{text[1:]}{'' if text.endswith(('.', '?', '!')) else '.'}" if text else ""

    def note_now(self) -> str:
        """The same; of the second field, while that is in focus, what is to be said about the change."""
        return self._second.note() if self._second is not None and self.is_changing else self.note()

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

    def _have_change(self) -> None:
        """Make the second field of a value that can be changed, unless it is there."""
        if self._second is None and self.is_changeable:
            self._second = self._make_change()

    def _make_change(self) -> ChangedPlace:
        """The second field in its place, hidden; only for a value that can be changed."""
        raise NotImplementedError
