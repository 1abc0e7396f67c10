"""The pages of a window beside the patient's, made when they are first asked for: no start waits for them."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QStackedWidget

from clinicalc.gui.page_tabs import Page

if TYPE_CHECKING:
    from clinicalc.gui.file_choosing import FileChoices
    from clinicalc.gui.main_window import MainWindow
    from clinicalc.gui.models.models_page import ModelsPage
    from clinicalc.gui.practice.settings_page import SettingsPage
    from clinicalc.gui.study.study_page import StudyPage
    from clinicalc.operations.library_view import LibraryView


class OtherPages:
    """Shows them in the window's stack, and tells the patient's page what was decided on them."""

    def __init__(self, window: MainWindow, stack: QStackedWidget, choices: FileChoices | None) -> None:
        """`choices` are the dialogs of the Models page; those of the system where it is None."""
        self._window, self._stack, self._choices = window, stack, choices
        self._models: ModelsPage | None = None
        self._study: StudyPage | None = None
        self._settings: SettingsPage | None = None

    def show_page(self, page: Page) -> None:
        """Show one of them; each looks at the machine anew when it comes on screen."""
        if page is Page.MODELS:
            models = self.models()
            self._stack.setCurrentWidget(models)
            models.enter()
        elif page is Page.STUDY:
            study = self.study()
            self._stack.setCurrentWidget(study)
            study.enter()
        elif page is Page.SETTINGS:
            settings = self.settings()
            self._stack.setCurrentWidget(settings)
            settings.open()

    def models(self) -> ModelsPage:
        """The Models page."""
        if self._models is None:
            from clinicalc.gui.models.models_page import ModelsPage
            from clinicalc.operations.vetting_desk import VettingDesk

            library = self._window.library
            desk = VettingDesk() if library is None else VettingDesk(library.machine, library.clock)
            self._models = ModelsPage(desk, self._choices)
            self._models.changed.connect(self._follow)
            self._models.founded.connect(self._begin_to_use)
            self._models.reading.view_read.connect(self._name_practice)
            self._stack.addWidget(self._models)
        return self._models

    def study(self) -> StudyPage:
        """The Study page."""
        if self._study is None:
            from clinicalc.gui.study.study_page import StudyPage

            self._study = StudyPage(self._choices, lambda: self._window.preferences.settings.decision_points)
            self._study.trial_asked.connect(self._window.open_path)
            self._study.install_asked.connect(self._look_at_new)
            self._stack.addWidget(self._study)
        return self._study

    def settings(self) -> SettingsPage:
        """The page of settings."""
        if self._settings is None:
            from clinicalc.gui.practice.settings_page import SettingsPage

            self._settings = SettingsPage(
                self._window.preferences, models=self._in_use, choices=self._choices, parent=self._stack
            )
            self._settings.left.connect(lambda: self._window.show_page(Page.PATIENT))
            self._settings.library_asked.connect(self._show_ways)
            self._stack.addWidget(self._settings)
            if self._models is not None and self._models.reading.view is not None:
                self._settings.show_library(self._models.reading.view.practice)
        return self._settings

    def may_close(self) -> bool:
        """Whether the window may close; where something would be lost that is said on its page first."""
        if self._study is None or self._study.may_close():
            return True
        self._window.show_page(Page.STUDY)
        return False

    def leave(self) -> None:
        """The window closes."""
        if self._models is not None:
            self._models.leave()
        if self._study is not None:
            self._study.leave()
        if self._settings is not None:
            self._settings.leave()

    def _look_at_new(self, path: Path) -> None:
        """A coefficient file that was written on the Study page, looked at as one that is to be installed."""
        self._window.show_page(Page.MODELS)
        self.models().look_at(path)

    def _in_use(self) -> Sequence[tuple[str, str]]:
        library = self._window.library
        return () if library is None else tuple((state.id, state.title) for state in library.in_use)

    def _name_practice(self, view: LibraryView) -> None:
        if self._settings is not None:
            self._settings.show_library(view.practice)

    def _show_ways(self) -> None:
        """From the settings to the ways in which a library is founded or joined."""
        self._window.show_page(Page.MODELS)
        self.models().show_ways()

    def _follow(self) -> None:
        if self._window.library is not None:
            self._window.library.follow()

    def _begin_to_use(self) -> None:
        """A library was founded or joined while the window is open: it works from it from now on."""
        self._window.preferences.read_again()  # its folder, the practice key and perhaps the practice's name
        if self._window.library is None:
            from clinicalc.gui.model_library import ModelLibrary

            self._window.use_library(ModelLibrary(self._window.state))
        self._follow()
