"""The window: page bar, model line, values and result side by side, foot."""

from collections.abc import Callable
from dataclasses import replace
from itertools import pairwise
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QKeySequence, QResizeEvent, QShortcut
from PySide6.QtWidgets import QDialog, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.model import Model
from clinicalc.errors import ClinicalcError
from clinicalc.gui import theme
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.file_dialogs import ChooseOpen, ChooseSave, ask_where_to_save, ask_which_file
from clinicalc.gui.foot_bar import FootBar
from clinicalc.gui.hold_dialog import AskWhy, ask_why
from clinicalc.gui.labels import make_rule
from clinicalc.gui.model_bar import ModelBar
from clinicalc.gui.model_desk import ModelDesk
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.gui.outputs import Outputs, ShowPreview, show_print_preview
from clinicalc.gui.page_bar import PageBar, page_name
from clinicalc.gui.patient_page import PatientPage
from clinicalc.gui.preferences import Preferences
from clinicalc.gui.refusal_view import RefusalView
from clinicalc.gui.rows import FieldRow
from clinicalc.operations.bedside import open_model
from clinicalc.settings import ThemeChoice

if TYPE_CHECKING:
    from clinicalc.operations.approved import ApprovedModel

SMALLEST = QSize(1024, 640)
"""The smallest window with two panes."""
NARROWEST = QSize(640, 400)
"""The smallest window, in one column: the usual one at 200 % text."""


class MainWindow(QWidget):
    """One patient, one model; `number` tells it from other windows of the program.

    `state` may come with an assess verb of its own; the dialogs and the preview may be replaced. `library` is that of
    the practice, reading for this very `state`; None on a machine that uses none.
    """

    def __init__(
        self,
        state: EntryState | None = None,
        *,
        preferences: Preferences | None = None,
        library: ModelLibrary | None = None,
        number: int = 1,
        choose_open: ChooseOpen = ask_which_file,
        choose_save: ChooseSave = ask_where_to_save,
        show_preview: ShowPreview = show_print_preview,
        ask_why: AskWhy = ask_why,
    ) -> None:
        super().__init__()
        self.state = state or EntryState()
        self.preferences = preferences or Preferences()
        self.library = library
        self._number = number
        self._left_field: QWidget | None = None
        self._choose_open = choose_open
        self._beside: dict[Callable[[QWidget], QDialog], QDialog] = {}
        self.setObjectName("ground")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.setMinimumSize(NARROWEST)
        self.page_bar = PageBar(self.preferences.settings.theme)
        self.model_bar = ModelBar(self.state)
        self.foot = FootBar()
        self._lay_out()
        self.patient = PatientPage(self.state, self.model_bar, self.pages)
        self.values, self.sheet, self.field_note = self.patient.values, self.patient.sheet, self.patient.field_note
        self.refusal = RefusalView()
        self.pages.addWidget(self.patient)
        self.pages.addWidget(self.refusal)
        self.outputs = Outputs(
            self, self.state, self.foot, self.preferences, choose_save, show_preview, self._read_again
        )
        chooser = self.model_bar.chooser
        self.desk = None if library is None else ModelDesk(self, library, chooser, self.foot, ask_why)
        self._connect()
        self._listen_for_keys()
        self.page_bar.tab.show_number(number)
        self._show_title()
        self._show_settings()
        self._allow_output()

    def use_model(self, model: Model, entry: PatientEntry | None = None) -> None:
        """Show a model, with a patient's entry or with empty fields."""
        self.pages.setCurrentIndex(0)
        self.state.use_model(model, entry)
        self._show_title()
        self.values.focus_first()

    def open_file(self) -> None:
        """Ask for a coefficient file and use it; one that is refused is explained, and the model in use stays."""
        path = self._choose_open(self)
        if path is not None:
            self.open_path(path)

    def open_path(self, path: Path) -> None:
        """Use the coefficient file at a path; one that is missing or refused is explained, and the model stays."""
        try:
            model = open_model(path)
        except ClinicalcError as error:
            self._show_refusal(path.name, error)
            return
        self.use_model(model)
        self.preferences.remember_file(path)

    def _show_refusal(self, name: str, error: ClinicalcError, *explanation: str) -> None:
        self.refusal.show_refusal(name, error, *explanation)
        self.pages.setCurrentWidget(self.refusal)
        self._allow_output()
        self.refusal.problems.setFocus(Qt.FocusReason.OtherFocusReason)

    def begin_new_patient(self) -> None:
        """Clear every field and begin at the first."""
        self.pages.setCurrentIndex(0)
        if self.library is None:
            self.state.begin_new_patient()
        else:
            self.library.begin_new_patient()
            self._show_title()
        self.values.focus_first()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Small windows take the compact pane, narrow ones one column; the focus stays where it is."""
        super().resizeEvent(event)
        focused = self.focusWidget()
        if not self.patient.fit(event.size().width()):
            return
        narrow = self.patient.is_narrow
        if not narrow:
            self._column.insertWidget(2, self.model_bar)
        self.model_bar.show()
        self.model_bar.set_narrow(narrow)
        self.foot.set_narrow(narrow)
        self._order_tabs()
        if focused is not None:
            focused.setFocus(Qt.FocusReason.OtherFocusReason)

    def _lay_out(self) -> None:
        """Put the parts in place; the pages are filled afterwards, since what is moved takes all inside it along."""
        self.pages = QStackedWidget()
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(0)
        for bar in (self.page_bar, self.model_bar):
            self._column.addWidget(bar)
            self._column.addWidget(make_rule())
        self._column.addWidget(self.pages, 1)
        self._column.addWidget(self.foot)

    def _connect(self) -> None:
        chooser = self.model_bar.chooser
        chooser.open_action.triggered.connect(self.open_file)
        chooser.file_chosen.connect(self.open_path)
        chooser.about_to_open.connect(self._offer_models)
        if self.library is not None:
            self.library.chosen.connect(self._use_approved)
            self.library.refused.connect(self._refuse_approved)
            self.library.told.connect(self.sheet.invite)
        self.foot.new_patient.clicked.connect(self.begin_new_patient)
        self.refusal.closed.connect(self._close_refusal)
        self.page_bar.theme_chosen.connect(self._choose_theme)
        self.page_bar.about.triggered.connect(lambda: self._open_beside(_make_about))
        self.page_bar.guide.clicked.connect(lambda: self._open_beside(_make_guide))
        self.preferences.changed.connect(self._show_settings)
        self.preferences.refused.connect(self.foot.say)
        self.values.rebuilt.connect(self._take_rows)
        self.values.stops_moved.connect(self._order_tabs)
        self.values.row_entered.connect(self._note_field)
        self.values.left_last.connect(self._leave_values)
        self.values.mark_pressed.connect(self._go_to_finding)
        self.patient.pinned.field_asked.connect(self.values.focus_field)
        self.sheet.field_asked.connect(self.values.focus_field)
        self.sheet.stops_changed.connect(self._order_tabs)
        self.state.assessed.connect(self._settle)
        self.state.blanked.connect(self._settle)

    def _listen_for_keys(self) -> None:
        self.addAction(self.model_bar.chooser.open_action)
        for keys, verb in (
            ("F6", self._go_across),
            ("Shift+F6", self._go_across),
            ("F1", self.page_bar.guide.click),
            ("F10", self.page_bar.open_menu),
            ("Ctrl+Shift+C", self.foot.copy.click),
        ):
            QShortcut(QKeySequence(keys), self).activated.connect(verb)

    def _show_title(self) -> None:
        model = self.state.model
        name = page_name(self._number)
        self.setWindowTitle(name if model is None else f"{name}: {model.content.title}")

    def _show_settings(self) -> None:
        self.page_bar.practice.setText(self.preferences.settings.practice)
        self.state.use_practice_points(self.preferences.settings.decision_points)

    def _choose_theme(self, choice: ThemeChoice) -> None:
        theme.choose(choice)
        self.preferences.take(replace(self.preferences.settings, theme=choice))

    def _open_beside(self, make: Callable[[QWidget], QDialog]) -> None:
        """Guide and notices open beside the window, each once."""
        if make not in self._beside:
            self._beside[make] = make(self)
        view = self._beside[make]
        view.show()
        view.raise_()
        view.activateWindow()

    def _offer_models(self) -> None:
        from clinicalc.operations.recent_titles import name_recent_files

        offer = self.model_bar.chooser.offer if self.desk is None else self.desk.offer
        offer(name_recent_files(self.preferences.settings.recent_files))

    def _use_approved(self, approved: "ApprovedModel") -> None:
        self.pages.setCurrentIndex(0)
        self.state.use_model(approved.model, approved=approved)
        self._show_title()
        self.values.focus_first()

    def _refuse_approved(self, name: str, error: ClinicalcError) -> None:
        self._show_refusal(name, error, "Nothing was taken from it. Choose another model, or ask an approver.")

    def _read_again(self) -> None:
        if self.library is not None:
            self.library.check()

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

    def _settle(self, _: object = None) -> None:
        self.foot.say("")
        self._allow_output()

    def _allow_output(self) -> None:
        assessment = self.state.assessment
        has_number = assessment is not None and assessment.estimate is not None
        self.foot.allow_output(has_number and self.pages.currentWidget() is not self.refusal)
        self.foot.new_patient.setEnabled(self.state.model is not None)

    def _close_refusal(self) -> None:
        self.pages.setCurrentIndex(0)
        self._allow_output()
        self.values.focus_first()

    def _go_across(self) -> None:
        """Between the values and the result, where the arrow keys scroll; back to the field that was left.

        A page that covers the patient keeps the focus: what is typed must not reach a field that nobody sees.
        """
        if self.pages.currentWidget() is not self.patient:
            self.refusal.go_across()
            return
        focused = self.focusWidget()
        if focused is not None and self.values.isAncestorOf(focused):
            self._left_field = focused
            self.sheet.scroller.setFocus(Qt.FocusReason.ShortcutFocusReason)
        elif self._left_field is not None and self._left_field in self._visible_stops():
            self._left_field.setFocus(Qt.FocusReason.ShortcutFocusReason)
        else:
            self.values.focus_first()

    def _visible_stops(self) -> list[QWidget]:
        """Where the cursor can go among the values: a second field is there only while the comparison is open."""
        return [stop for stop in self.values.tab_stops() if stop.isVisibleTo(self)]

    def _leave_values(self) -> None:
        target = self.foot.save_pdf if self.foot.save_pdf.isEnabled() else self.foot.new_patient
        target.setFocus(Qt.FocusReason.TabFocusReason)

    def _take_rows(self) -> None:
        self.patient.take_rows()
        self._order_tabs()

    def _order_tabs(self) -> None:
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
            self.page_bar.menu_button,
            self.page_bar.guide,
        ]
        for before, after in pairwise(chain):
            QWidget.setTabOrder(before, after)


def _make_guide(parent: QWidget) -> QDialog:
    # loaded when it is first asked for, not at every start
    from clinicalc.gui.guide_view import GuideView

    return GuideView(parent)


def _make_about(parent: QWidget) -> QDialog:
    from clinicalc.gui.about_view import AboutView

    return AboutView(parent)
