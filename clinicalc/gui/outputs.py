"""What can be made of the number on screen: copied text, a print, a PDF. All from the one assessment on screen."""

from collections.abc import Callable
from typing import Protocol

from PySide6.QtCore import QMimeData
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QWidget

from clinicalc.assessment.result import Assessment
from clinicalc.errors import ClinicalcError
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.file_dialogs import ChooseSave, leaving_no_trace
from clinicalc.gui.foot_bar import FootBar
from clinicalc.gui.preferences import Preferences
from clinicalc.operations.copying import copy_text
from clinicalc.operations.documents import save_pdf, suggest_pdf_name
from clinicalc.settings import Paper


class ShowPreview(Protocol):
    """Shows the print of one assessment and lets it be printed while `still_current` says yes."""

    def __call__(
        self,
        parent: QWidget | None,
        assessment: Assessment,
        still_current: Callable[[], bool],
        *,
        practice: str,
        paper: Paper,
        explain: Callable[[QWidget | None, str], None],
    ) -> bool: ...


def show_print_preview(
    parent: QWidget | None,
    assessment: Assessment,
    still_current: Callable[[], bool],
    *,
    practice: str,
    paper: Paper,
    explain: Callable[[QWidget | None, str], None],
) -> bool:
    """The preview of the system's printing, which is loaded when it is first wanted; False where it was refused."""
    from clinicalc.gui.printing import preview

    with leaving_no_trace():  # it has a file dialog of its own
        return preview(parent, assessment, still_current, practice=practice, paper=paper, explain=explain)


class Outputs:
    """Answers the buttons of the foot, and says there what was done or why not."""

    def __init__(
        self,
        window: QWidget,
        state: EntryState,
        foot: FootBar,
        preferences: Preferences,
        choose_save: ChooseSave,
        show_preview: ShowPreview,
    ) -> None:
        self._window, self._state, self._foot, self._preferences = window, state, foot, preferences
        self._choose_save, self._show_preview = choose_save, show_preview
        foot.copy.clicked.connect(self.copy)
        foot.save_pdf.clicked.connect(self.save)
        foot.print.clicked.connect(self.print)

    def copy(self) -> None:
        """Put the assessment on screen on the clipboard, as plain text and nothing else."""
        assessment = self._with_number()
        if assessment is None:
            return
        content = QMimeData()
        content.setText(copy_text(assessment))
        QGuiApplication.clipboard().setMimeData(content)
        self._foot.say("Copied as text, without name or number.")

    def print(self) -> None:
        """Show the preview of the assessment on screen, which prints that one or nothing."""
        assessment = self._with_number()
        if assessment is None:
            return
        settings = self._preferences.settings
        try:
            self._show_preview(
                self._window,
                assessment,
                lambda: self.still_on_screen(assessment),
                practice=settings.practice,
                paper=settings.paper,
                explain=lambda _, sentence: self._foot.say(f"{sentence[:1].upper()}{sentence[1:]}"),
            )
        except ClinicalcError as error:
            self._foot.say(f"Not printed: {error}")

    def save(self) -> None:
        """Save the assessment on screen as a PDF, and say where, or why not."""
        assessment = self._with_number()
        if assessment is None:
            return
        path = self._choose_save(self._window, suggest_pdf_name(assessment))
        if path is None:
            return
        if not self.still_on_screen(assessment):
            self._foot.say("Not saved: a value was changed while the place was chosen. Save again.")
            return
        settings = self._preferences.settings
        try:
            save_pdf(path, assessment, practice=settings.practice, paper=settings.paper)
        except ClinicalcError as error:
            self._foot.say(f"Not saved: {error}")
            return
        self._foot.say(f"Saved as {path.name}.")

    def still_on_screen(self, assessment: Assessment) -> bool:
        """Whether this very assessment is the one on screen; one that was made since, even of like values, is not."""
        return self._state.assessment is assessment

    def _with_number(self) -> Assessment | None:
        assessment = self._state.assessment
        return None if assessment is None or assessment.estimate is None else assessment
