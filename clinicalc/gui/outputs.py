"""What can be made of the number on screen: copied text, a print, a PDF. All from the one assessment on screen."""

from collections.abc import Callable
from typing import Protocol

from PySide6.QtCore import QMimeData
from PySide6.QtGui import QGuiApplication
from PySide6.QtWidgets import QWidget

from clinicalc.assessment.result import Assessment
from clinicalc.errors import ClinicalcError, PrintRefused
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
        letterhead: tuple[str, ...],
        paper: Paper,
        explain: Callable[[QWidget | None, str], None],
        read_again: Callable[[], None],
    ) -> bool: ...


def show_print_preview(
    parent: QWidget | None,
    assessment: Assessment,
    still_current: Callable[[], bool],
    *,
    practice: str,
    letterhead: tuple[str, ...],
    paper: Paper,
    explain: Callable[[QWidget | None, str], None],
    read_again: Callable[[], None],
) -> bool:
    """The preview of the system's printing, which is loaded when it is first wanted; False where it was refused."""
    from clinicalc.gui.printing import preview

    with leaving_no_trace():  # it has a file dialog of its own
        return preview(
            parent,
            assessment,
            still_current,
            practice=practice,
            letterhead=letterhead,
            paper=paper,
            explain=explain,
            read_again=read_again,
        )


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
        read_again: Callable[[], None],
    ) -> None:
        """`read_again` reads what the library says of the model now; it is called before anything leaves the window."""
        self._window, self._state, self._foot, self._preferences = window, state, foot, preferences
        self._choose_save, self._show_preview, self._read_again = choose_save, show_preview, read_again
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
                lambda: self._may_print(assessment),
                practice=settings.practice,
                letterhead=settings.letterhead,
                paper=settings.paper,
                explain=lambda _, sentence: self._foot.say(f"{sentence[:1].upper()}{sentence[1:]}"),
                read_again=self._read_again,
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
        self._read_again()
        if self._state.withheld:
            self._foot.say("Not saved: the model gives no number any more.")
            return
        if not self.still_on_screen(assessment):
            what = "a value was" if self._state.approved is None else "what is on screen has"
            self._foot.say(f"Not saved: {what} changed while the place was chosen. Save again.")
            return
        settings = self._preferences.settings
        try:
            save_pdf(
                path,
                assessment,
                practice=settings.practice,
                paper=settings.paper,
                letterhead=settings.letterhead,
            )
        except ClinicalcError as error:
            self._foot.say(f"Not saved: {error}")
            return
        self._foot.say(f"Saved as {path.name}.")

    def still_on_screen(self, assessment: Assessment) -> bool:
        """Whether this very assessment is the one on screen; one that was made since, even of like values, is not."""
        return self._state.assessment is assessment

    def _may_print(self, assessment: Assessment) -> bool:
        """Whether this is on screen. Raises PrintRefused where the library no longer stands behind the model."""
        if self._state.withheld:
            raise PrintRefused("nothing was printed: this model gives no number any more.", why=self._state.withheld)
        return self.still_on_screen(assessment)

    def _with_number(self) -> Assessment | None:
        """What is on screen, once the library has been asked whether it may be."""
        self._read_again()
        assessment = self._state.assessment
        return None if assessment is None or assessment.estimate is None else assessment
