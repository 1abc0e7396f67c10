"""The page of the window on which a patient is assessed: model line, values and result or a refused file, foot."""

from itertools import pairwise

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QStackedWidget, QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.foot_bar import FootBar
from clinicalc.gui.labels import make_rule
from clinicalc.gui.model_bar import ModelBar
from clinicalc.gui.patient_page import PatientPage
from clinicalc.gui.refusal_view import RefusalView
from clinicalc.gui.rows import FieldRow


class BedsidePage(QWidget):
    """Puts the parts in place and leads the focus through them; `after` are the stops of the window's own bar."""

    def __init__(self, state: EntryState, after: tuple[QWidget, ...], parent: QWidget) -> None:
        super().__init__(parent)
        self._state, self._after = state, after
        self._left_field: QWidget | None = None
        self.model_bar = ModelBar(state)
        self.foot = FootBar()
        self._lay_out()
        self.patient = PatientPage(state, self.model_bar, self.views)
        self.values, self.sheet, self.field_note = self.patient.values, self.patient.sheet, self.patient.field_note
        self.refusal = RefusalView()
        self.views.addWidget(self.patient)
        self.views.addWidget(self.refusal)
        self._connect()
        self.allow_output()

    def show_patient(self) -> None:
        """The patient in place of a refused file."""
        self.views.setCurrentWidget(self.patient)

    def show_refusal(self, name: str, error: ClinicalcError, *explanation: str) -> None:
        """Why a file or model was not taken, in place of the patient, who stays."""
        self.refusal.show_refusal(name, error, *explanation)
        self.views.setCurrentWidget(self.refusal)
        self.allow_output()
        self.refusal.problems.setFocus(Qt.FocusReason.OtherFocusReason)

    def allow_output(self) -> None:
        """Whether what is on screen may be copied, printed and saved."""
        assessment = self._state.assessment
        has_number = assessment is not None and assessment.estimate is not None
        self.foot.allow_output(has_number and self.views.currentWidget() is not self.refusal)
        self.foot.new_patient.setEnabled(self._state.model is not None)

    def fit(self, width: int) -> None:
        """Small windows take the compact pane, narrow ones one column; the focus stays where it is."""
        focused = self._focused()
        if not self.patient.fit(width):
            return
        narrow = self.patient.is_narrow
        if not narrow:
            self._column.insertWidget(0, self.model_bar)
        self.model_bar.show()
        self.model_bar.set_narrow(narrow)
        self.foot.set_narrow(narrow)
        self.order_tabs()
        if focused is not None:
            focused.setFocus(Qt.FocusReason.OtherFocusReason)

    def go_across(self) -> None:
        """Between the values and the result, where the arrow keys scroll; back to the field that was left.

        A file that is refused covers the patient and keeps the focus: what is typed must not reach a field that nobody
        sees.
        """
        if self.views.currentWidget() is not self.patient:
            self.refusal.go_across()
            return
        focused = self._focused()
        if focused is not None and self.values.isAncestorOf(focused):
            self._left_field = focused
            self.sheet.scroller.setFocus(Qt.FocusReason.ShortcutFocusReason)
        elif self._left_field is not None and self._left_field in self._visible_stops():
            self._left_field.setFocus(Qt.FocusReason.ShortcutFocusReason)
        else:
            self.values.focus_first()

    def order_tabs(self) -> None:
        """The order of the tab key, from the model line to the bar of the window."""
        bar, foot = self.model_bar, self.foot
        chain: list[QWidget] = [
            *self.patient.pinned.tab_stops(),
            bar.chooser,
            bar.horizon.chooser,
            bar.recalibration.chooser,
            *self.values.tab_stops(),
            self.sheet.scroller,  # no stop of the tab key, but where F6 leads: from there on into the sheet
            *self.sheet.tab_stops(),
            foot.new_patient,
            foot.copy,
            foot.print,
            foot.save_pdf,
            *self._after,
        ]
        for before, following in pairwise(chain):
            QWidget.setTabOrder(before, following)

    def _lay_out(self) -> None:
        """Put the parts in place; the views are filled afterwards, since what is moved takes all inside it along."""
        self.views = QStackedWidget()
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(0)
        self._column.addWidget(self.model_bar)
        self._column.addWidget(make_rule())
        self._column.addWidget(self.views, 1)
        self._column.addWidget(self.foot)

    def _connect(self) -> None:
        self.refusal.closed.connect(self._close_refusal)
        self.values.rebuilt.connect(self._take_rows)
        self.values.stops_moved.connect(self.order_tabs)
        self.values.row_entered.connect(self._note_field)
        self.values.left_last.connect(self._leave_values)
        self.values.mark_pressed.connect(self._go_to_finding)
        self.patient.pinned.field_asked.connect(self.values.focus_field)
        self.sheet.field_asked.connect(self.values.focus_field)
        self.sheet.stops_changed.connect(self.order_tabs)
        self._state.assessed.connect(self._settle)
        self._state.blanked.connect(self._settle)

    def _settle(self, _: object = None) -> None:
        self.foot.say("")
        self.allow_output()

    def _close_refusal(self) -> None:
        self.show_patient()
        self.allow_output()
        self.values.focus_first()

    def _note_field(self, row: FieldRow | None) -> None:
        if row is None:
            self.field_note.clear()
        else:
            self.field_note.show_row(row)

    def _go_to_finding(self, number: int) -> None:
        """From the mark at a field to its finding in the list; from there Enter leads back."""
        for mark in self.sheet.findings.tab_stops():
            if mark.number == number:
                mark.setFocus(Qt.FocusReason.ShortcutFocusReason)
                self.sheet.scroller.ensureWidgetVisible(mark.parentWidget() or mark)

    def _focused(self) -> QWidget | None:
        """What has the focus in the window, where that is on this page."""
        focused = self.window().focusWidget()
        return focused if focused is not None and self.isAncestorOf(focused) else None

    def _visible_stops(self) -> list[QWidget]:
        """Where the cursor can go among the values: a second field is there only while the comparison is open."""
        return [stop for stop in self.values.tab_stops() if stop.isVisibleTo(self)]

    def _leave_values(self) -> None:
        target = self.foot.save_pdf if self.foot.save_pdf.isEnabled() else self.foot.new_patient
        target.setFocus(Qt.FocusReason.TabFocusReason)

    def _take_rows(self) -> None:
        self.patient.take_rows()
        self.order_tabs()
