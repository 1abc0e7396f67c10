"""The window: model bar, values and result side by side, foot; opens files and saves prints."""

from collections.abc import Callable
from itertools import pairwise
from pathlib import Path

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QKeySequence, QResizeEvent, QShortcut
from PySide6.QtWidgets import QFileDialog, QFrame, QHBoxLayout, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.model import Model
from clinicalc.errors import ClinicalcError
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.foot_bar import FootBar
from clinicalc.gui.labels import make_rule
from clinicalc.gui.model_bar import ModelBar
from clinicalc.gui.refusal_view import RefusalView
from clinicalc.gui.result_sheet import ResultSheet
from clinicalc.gui.tokens import COMPACT_BELOW
from clinicalc.gui.values_pane import ValuesPane
from clinicalc.operations.bedside import open_model
from clinicalc.operations.documents import save_pdf, suggest_pdf_name

SMALLEST = QSize(1024, 640)

ChooseOpen = Callable[[QWidget], Path | None]
ChooseSave = Callable[[QWidget, str], Path | None]


def ask_which_file(parent: QWidget) -> Path | None:
    """The coefficient file somebody points to in the system's dialog, or None."""
    name, _ = QFileDialog.getOpenFileName(parent, "Open a coefficient file", "", "Coefficient files (*.json)")
    return Path(name) if name else None


def ask_where_to_save(parent: QWidget, suggestion: str) -> Path | None:
    """Where to save the print, or None; the suggestion holds nothing about the patient."""
    dialog = QFileDialog(parent, "Save the print", "", "PDF (*.pdf)")
    dialog.setAcceptMode(QFileDialog.AcceptMode.AcceptSave)
    dialog.setDefaultSuffix("pdf")  # added before the dialog asks whether to replace a file
    dialog.selectFile(suggestion)
    chosen = dialog.selectedFiles() if dialog.exec() else []
    dialog.deleteLater()
    return Path(chosen[0]) if chosen else None


class MainWindow(QWidget):
    """One patient, one model. `state` may come with an assess verb of its own; the dialogs may be replaced."""

    def __init__(
        self,
        state: EntryState | None = None,
        *,
        choose_open: ChooseOpen = ask_which_file,
        choose_save: ChooseSave = ask_where_to_save,
    ) -> None:
        super().__init__()
        self.state = state or EntryState()
        self._left_field: QWidget | None = None
        self._choose_open, self._choose_save = choose_open, choose_save
        self.setObjectName("ground")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.setWindowTitle("Patient")
        self.setMinimumSize(SMALLEST)
        self.model_bar = ModelBar(self.state)
        self.values = ValuesPane(self.state)
        self.sheet = ResultSheet(self.state)
        self.refusal = RefusalView()
        self.foot = FootBar()
        self._lay_out()
        self._connect()
        self._allow_saving()

    def use_model(self, model: Model, entry: PatientEntry | None = None) -> None:
        """Show a model, with a patient's entry or with empty fields."""
        self.pages.setCurrentIndex(0)
        self.state.use_model(model, entry)
        self.setWindowTitle(f"Patient: {model.content.title}")
        self.values.focus_first()

    def open_file(self) -> None:
        """Ask for a coefficient file and use it; one that is refused is explained, and the model in use stays."""
        path = self._choose_open(self)
        if path is None:
            return
        try:
            model = open_model(path)
        except ClinicalcError as error:
            self.refusal.show_refusal(path.name, error)
            self.pages.setCurrentWidget(self.refusal)
            self._allow_saving()
            self.refusal.problems.setFocus(Qt.FocusReason.OtherFocusReason)
            return
        self.use_model(model)

    def save_print(self) -> None:
        """Save the assessment on screen as a PDF, and say where, or why not."""
        assessment = self.state.assessment
        if assessment is None or assessment.estimate is None:
            return
        path = self._choose_save(self, suggest_pdf_name(assessment))
        if path is None:
            return
        try:
            save_pdf(path, assessment)
        except ClinicalcError as error:
            self.foot.say(f"Not saved: {error}")
            return
        self.foot.say(f"Saved as {path.name}.")

    def begin_new_patient(self) -> None:
        """Clear every field and begin at the first."""
        self.pages.setCurrentIndex(0)
        self.state.begin_new_patient()
        self.values.focus_first()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Small windows take the narrow pane."""
        super().resizeEvent(event)
        compact = event.size().width() < COMPACT_BELOW
        self.values.set_compact(compact)
        self.sheet.set_compact(compact)

    def _lay_out(self) -> None:
        page = QWidget()
        panes = QHBoxLayout(page)
        panes.setContentsMargins(0, 0, 0, 0)
        panes.setSpacing(0)
        border = QFrame()
        border.setObjectName("rule")
        border.setFixedWidth(1)
        panes.addWidget(self.values)
        panes.addWidget(border)
        panes.addWidget(self.sheet, 1)
        self.pages = QStackedWidget()
        self.pages.addWidget(page)
        self.pages.addWidget(self.refusal)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.model_bar)
        column.addWidget(make_rule())
        column.addWidget(self.pages, 1)
        column.addWidget(self.foot)

    def _connect(self) -> None:
        self.model_bar.open_button.clicked.connect(self.open_file)
        self.foot.new_patient.clicked.connect(self.begin_new_patient)
        self.foot.save_pdf.clicked.connect(self.save_print)
        self.refusal.closed.connect(self._close_refusal)
        QShortcut(QKeySequence(Qt.Key.Key_F6), self).activated.connect(self._go_across)
        self.values.rebuilt.connect(self._order_tabs)
        self.values.left_last.connect(self._leave_values)
        self.state.assessed.connect(self._settle)
        self.state.blanked.connect(self._settle)

    def _settle(self, _: object = None) -> None:
        self.foot.say("")
        self._allow_saving()

    def _allow_saving(self) -> None:
        assessment = self.state.assessment
        has_number = assessment is not None and assessment.estimate is not None
        self.foot.save_pdf.setEnabled(has_number and self.pages.currentWidget() is not self.refusal)
        self.foot.new_patient.setEnabled(self.state.model is not None)

    def _close_refusal(self) -> None:
        self.pages.setCurrentIndex(0)
        self._allow_saving()
        self.values.focus_first()

    def _go_across(self) -> None:
        """Between the values and the result, where the arrow keys scroll; back to the field that was left."""
        focused = self.focusWidget()
        if focused is not None and self.values.isAncestorOf(focused):
            self._left_field = focused
            self.sheet.scroller.setFocus(Qt.FocusReason.ShortcutFocusReason)
        elif self._left_field is not None and self._left_field in self.values.tab_stops():
            self._left_field.setFocus(Qt.FocusReason.ShortcutFocusReason)
        else:
            self.values.focus_first()

    def _leave_values(self) -> None:
        target = self.foot.save_pdf if self.foot.save_pdf.isEnabled() else self.foot.new_patient
        target.setFocus(Qt.FocusReason.TabFocusReason)

    def _order_tabs(self) -> None:
        bar = self.model_bar
        chain: list[QWidget] = [
            bar.open_button,
            bar.horizon.chooser,
            bar.recalibration.chooser,
            *self.values.tab_stops(),
            self.foot.new_patient,
            self.foot.save_pdf,
        ]
        for before, after in pairwise(chain):
            QWidget.setTabOrder(before, after)
