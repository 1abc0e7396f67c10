"""Which row a field of a model gets, and what in it is gone to."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QWidget

from clinicalc.assessment.fields import Field, NumberField
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.number_row import NumberRow
from clinicalc.gui.question_row import QuestionRow
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.worked_out_row import WorkedOutRow


def make_row(field: Field, label: str, *, changeable: bool, preferred: str = "") -> FieldRow:
    """A row for a field; `label` may hold one access mark, `changeable` gives it a second field for a comparison.

    `preferred` is the unit in which it begins while it is empty, "" for the file's own.
    """
    if not isinstance(field, NumberField):
        return QuestionRow(field, label, changeable=changeable)
    if not field.may_be_typed:
        return WorkedOutRow(field)
    return NumberRow(field, label, changeable=changeable, preferred=preferred)


def has_no_letter(field: Field) -> bool:
    """Exclusions stand first and are whole sentences; what is never typed is never gone to."""
    return not field.may_be_typed if isinstance(field, NumberField) else bool(field.excludes)


def takes_entries(widget: QWidget) -> bool:
    """Whether the tab key stops here for something to be entered: at everything but marks."""
    return bool(widget.focusPolicy() & Qt.FocusPolicy.TabFocus) and not isinstance(widget, IndexMark)
