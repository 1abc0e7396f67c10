"""The window: the bar at the top, and under it one page of several; that of the patient is made with it."""

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QSize, Qt
from PySide6.QtGui import QCloseEvent, QKeySequence, QResizeEvent, QShortcut
from PySide6.QtWidgets import QDialog, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.model import Model
from clinicalc.errors import ClinicalcError
from clinicalc.gui import theme
from clinicalc.gui.bedside_page import BedsidePage
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.file_dialogs import ChooseOpen, ChooseSave, ask_where_to_save, ask_which_file
from clinicalc.gui.hold_dialog import AskWhy, ask_why
from clinicalc.gui.labels import make_rule
from clinicalc.gui.model_desk import ModelDesk
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.gui.other_pages import OtherPages
from clinicalc.gui.outputs import Outputs, ShowPreview, show_print_preview
from clinicalc.gui.page_bar import PageBar
from clinicalc.gui.page_focus import PageFocus
from clinicalc.gui.page_tabs import Page, title_of
from clinicalc.gui.preferences import Preferences
from clinicalc.operations.bedside import open_model
from clinicalc.settings import ThemeChoice

if TYPE_CHECKING:
    from clinicalc.gui.file_choosing import FileChoices
    from clinicalc.operations.approved import ApprovedModel

SMALLEST = QSize(1024, 640)
"""The smallest window with two panes."""
NARROWEST = QSize(640, 400)
"""The smallest window, in one column: the usual one at 200 % text."""


class MainWindow(QWidget):
    """One patient, one model; `number` tells it from other windows of the program.

    `state` may come with an assess verb of its own; the dialogs and the preview may be replaced. `library` is that of
    the practice, reading for this very `state`; None on a machine that uses none, until one is founded or joined here.
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
        choose_files: "FileChoices | None" = None,
    ) -> None:
        super().__init__()
        self.state = state or EntryState()
        self.preferences = preferences or Preferences()
        self.library: ModelLibrary | None = None
        self.desk: ModelDesk | None = None
        self.page = Page.PATIENT
        self._number = number
        self._choose_open, self._ask_why = choose_open, ask_why
        self._beside: dict[Callable[[QWidget], QDialog], QDialog] = {}
        self.setObjectName("ground")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.setMinimumSize(NARROWEST)
        self.page_bar = PageBar(self.preferences.settings.theme)
        self._lay_out()
        self._take_parts()
        self.others = OtherPages(self, self._pages, choose_files)
        PageFocus(self._pages)
        self.outputs = Outputs(
            self, self.state, self.foot, self.preferences, choose_save, show_preview, self._read_again
        )
        self._connect()
        if library is not None:
            self.use_library(library)
        self._listen_for_keys()
        self.page_bar.tabs.show_number(number)
        self._show_title()
        self._show_settings()

    def show_page(self, page: Page) -> None:
        """Show a page of the window; what stands on the others stays, and what is typed there too."""
        if page is self.page:
            return
        self.page = page
        if page is Page.PATIENT:
            self._pages.setCurrentWidget(self.bedside)
            self._read_again()
        else:
            self.others.show_page(page)
        self.page_bar.tabs.show_page(page)
        self._show_title()

    def use_model(self, model: Model, entry: PatientEntry | None = None) -> None:
        """Show a model, with a patient's entry or with empty fields."""
        self._show_patient()
        self.state.use_model(model, entry)
        self._show_title()
        self.values.focus_first()

    def use_library(self, library: ModelLibrary) -> None:
        """Work from the practice's library from now on; nothing of it is read yet."""
        self.library = library
        self.desk = ModelDesk(self, library, self.model_bar.chooser, self.foot, self._ask_why)
        library.chosen.connect(self._use_approved)
        library.refused.connect(self._refuse_approved)
        library.told.connect(self.sheet.invite)

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
            self.show_page(Page.PATIENT)
            self.bedside.show_refusal(path.name, error)
            return
        self.use_model(model)
        self.preferences.remember_file(path)

    def begin_new_patient(self) -> None:
        """Clear every field and begin at the first."""
        self._show_patient()
        if self.library is None:
            self.state.begin_new_patient()
        else:
            self.library.begin_new_patient()
            self._show_title()
        self.values.focus_first()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The patient's page goes by the width of the window, also while another is shown."""
        super().resizeEvent(event)
        self.bedside.fit(event.size().width())

    def closeEvent(self, event: QCloseEvent) -> None:
        """What is not saved is said once before it is lost; for what is still being done nobody waits."""
        if not self.others.may_close():
            event.ignore()
            return
        self.others.leave()
        if self.library is not None:
            self.library.leave()
        super().closeEvent(event)

    def _lay_out(self) -> None:
        self._pages = QStackedWidget()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self.page_bar)
        column.addWidget(make_rule())
        column.addWidget(self._pages, 1)

    def _take_parts(self) -> None:
        """The patient's page, and what of it is asked for by its name."""
        bar = self.page_bar
        self.bedside = BedsidePage(self.state, (bar.tabs, bar.menu_button, bar.guide), self._pages)
        self._pages.addWidget(self.bedside)
        self.model_bar, self.foot = self.bedside.model_bar, self.bedside.foot
        self.patient, self.refusal = self.bedside.patient, self.bedside.refusal
        self.values, self.sheet, self.field_note = self.bedside.values, self.bedside.sheet, self.bedside.field_note

    def _connect(self) -> None:
        chooser = self.model_bar.chooser
        chooser.open_action.triggered.connect(self.open_file)
        chooser.file_chosen.connect(self.open_path)
        chooser.about_to_open.connect(self._offer_models)
        self.foot.new_patient.clicked.connect(self.begin_new_patient)
        self.page_bar.tabs.asked.connect(self.show_page)
        self.page_bar.theme_chosen.connect(self._choose_theme)
        self.page_bar.settings.triggered.connect(lambda: self.show_page(Page.SETTINGS))
        self.page_bar.about.triggered.connect(lambda: self._open_beside(_make_about))
        self.page_bar.guide.clicked.connect(lambda: self._open_beside(_make_guide))
        self.preferences.changed.connect(self._take_settings)
        self.preferences.refused.connect(lambda words: self.foot.say(f"{words[:1].upper()}{words[1:]}"))

    def _listen_for_keys(self) -> None:
        """Keys of the window, and keys of the patient's page, which do nothing while another is shown."""
        self.addAction(self.page_bar.settings)
        self.bedside.addAction(self.model_bar.chooser.open_action)
        for keys, where, verb in (
            ("F1", self, self.page_bar.guide.click),
            ("F2", self, lambda: self.show_page(Page.PATIENT)),
            ("F3", self, lambda: self.show_page(Page.MODELS)),
            ("F4", self, lambda: self.show_page(Page.STUDY)),
            ("F10", self, self.page_bar.open_menu),
            ("F6", self.bedside, self.bedside.go_across),
            ("Shift+F6", self.bedside, self.bedside.go_across),
            ("Ctrl+Shift+C", self.bedside, self.foot.copy.click),
        ):
            QShortcut(QKeySequence(keys), where).activated.connect(verb)

    def _show_patient(self) -> None:
        """The patient's page, and on it the patient in place of a refused file."""
        self.show_page(Page.PATIENT)
        self.bedside.show_patient()

    def _show_title(self) -> None:
        model = self.state.model
        self.setWindowTitle(title_of(self.page, self._number, "" if model is None else model.content.title))

    def _show_settings(self) -> None:
        self.page_bar.show_practice(self.preferences.settings.practice)
        self.state.use_practice_points(self.preferences.settings.decision_points)
        self.state.use_level(self.preferences.settings.level)
        self.values.prefer_units(self.preferences.settings.units)

    def _take_settings(self) -> None:
        """Take up settings that were changed, here or in another window."""
        settings = self.preferences.settings
        if self.page_bar.theme is not settings.theme:
            self.page_bar.show_theme(settings.theme)
            theme.choose(settings.theme)
        self._show_settings()

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
        """Shown where the patient is; another page stays, since nobody asked to leave it."""
        self.bedside.show_patient()
        self.state.use_model(approved.model, approved=approved)
        self._show_title()
        if self.page is Page.PATIENT:
            self.values.focus_first()

    def _refuse_approved(self, name: str, error: ClinicalcError) -> None:
        self.bedside.show_refusal(name, error, "Nothing was taken from it. Choose another model, or ask an approver.")

    def _read_again(self) -> None:
        if self.library is not None:
            self.library.check()


def _make_guide(parent: QWidget) -> QDialog:
    # loaded when it is first asked for, not at every start
    from clinicalc.gui.guide_view import GuideView

    return GuideView(parent)


def _make_about(parent: QWidget) -> QDialog:
    from clinicalc.gui.about_view import AboutView

    return AboutView(parent)
