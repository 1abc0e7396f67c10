"""The page of one patient: values and result side by side, or in one column under the pinned number."""

from PySide6.QtWidgets import QFrame, QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.assessment.model import Model
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.field_note import FieldNote
from clinicalc.gui.model_bar import ModelBar
from clinicalc.gui.one_column import OneColumn
from clinicalc.gui.pinned_bar import PinnedBar
from clinicalc.gui.result_sheet import ResultSheet
from clinicalc.gui.tokens import COMPACT_BELOW
from clinicalc.gui.values_pane import ValuesPane
from clinicalc.gui.wording import event_heading, longest_reasons
from clinicalc.report.phrases import vetting_words

ONE_COLUMN_BELOW = 900
"""Window width under which there is one column: that of the usual window at 200 % text."""
_SCROLL_BAR = 12


class PatientPage(QWidget):
    """Arranges the panes for the window's width. In one column the model line scrolls with them."""

    def __init__(self, state: EntryState, model_bar: ModelBar, parent: QWidget | None = None) -> None:
        super().__init__(parent)
        self._state, self._model_bar = state, model_bar
        self.is_narrow = False
        self.values = ValuesPane(state)
        self.field_note = FieldNote()
        self.sheet = ResultSheet(state)
        self.pinned = PinnedBar()
        self.one_column = OneColumn()
        self._border = QFrame()
        self._border.setObjectName("rule")
        self._border.setFixedWidth(1)
        self._left = QVBoxLayout()
        self._left.setSpacing(0)
        self._left.addWidget(self.values, 1)
        self._left.addWidget(self.one_column, 1)
        self._left.addWidget(self.field_note)
        self._panes = QHBoxLayout()
        self._panes.setSpacing(0)
        self._panes.addLayout(self._left)
        self._panes.addWidget(self._border)
        self._panes.addWidget(self.sheet, 1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.pinned)
        column.addLayout(self._panes, 1)
        self.pinned.hide()
        self.one_column.hide()
        self.sheet.comparison_opened.connect(self.values.show_changes)
        self.sheet.comparison_opened.connect(self.show_changes)
        self.sheet.views.change_asked.connect(self.values.focus_change)
        state.assessed.connect(self.pin)
        state.blanked.connect(self.pin)

    def fit(self, width: int) -> bool:
        """Settle into a window of this width; whether the panes were arranged anew."""
        narrow = width < ONE_COLUMN_BELOW
        anew = narrow != self.is_narrow
        if anew:
            self._arrange(narrow=narrow)
        compact = width < COMPACT_BELOW and not narrow
        self.values.set_compact(compact, width - _SCROLL_BAR if narrow else None)
        self.field_note.fit(width if narrow else self.values.width())
        self.sheet.set_compact(compact)
        return anew

    def show_changes(self, shown: bool) -> None:
        """Show the second fields of a comparison beside the values, or hide them."""
        self.values.show_changes(shown)
        self.field_note.fit(self.width() if self.is_narrow else self.values.width())
        self.one_column.fit()

    def take_rows(self) -> None:
        """The values pane has the rows of another model."""
        self.field_note.hold(tuple(self.values.rows.values()))
        self.field_note.fit(self.width() if self.is_narrow else self.values.width())
        self.one_column.fit()

    def pin(self, _: object = None) -> None:
        """Show in short what is on the sheet, which may be out of sight in one column."""
        model = self._state.model
        withheld = self._state.withheld
        if not self.is_narrow or model is None or (self._state.assessment is None and not withheld):
            self.pinned.clear()
            return
        summary = self.sheet.pinned_summary()
        named = f"{model.content.title} {model.content.version}"
        if withheld:
            named = f"Not in use: {named}"
        else:
            named = f"{named}. {vetting_words(self._state.vetting)}." if summary.vetted else f"Not vetted: {named}"
        self.pinned.keep_room(self._heading(model), longest_reasons(model))
        self.pinned.show_summary(summary, group_fingerprint(model.fingerprint, 3), named)

    def _heading(self, model: Model) -> str:
        """The longest headline of a number of this model, for the room that is kept free."""
        spans = model.spans if self._state.span is None else (self._state.span,)
        return max((event_heading(model, span) for span in spans), key=len)

    def _arrange(self, *, narrow: bool) -> None:
        self.is_narrow = narrow
        self.pinned.setVisible(narrow)
        self.one_column.setVisible(narrow)
        self._border.setVisible(not narrow)
        self.field_note.set_narrow(narrow)
        if narrow:
            panes = (self._model_bar, self.values, self.sheet)
            self.one_column.take(panes, (self.values, self.sheet.scroller))
        else:
            self.one_column.let_go()
            self._left.insertWidget(0, self.values, 1)
            self._panes.addWidget(self.sheet, 1)
        for pane in (self.values, self.sheet):
            pane.show()  # a pane with another parent is hidden, and what is hidden takes no focus
        self.pin()
