"""Answers the menu of the model line where there is a library: choose, try out, hold on this machine, release."""

from collections.abc import Callable
from typing import TYPE_CHECKING

from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.foot_bar import FootBar
from clinicalc.gui.hold_dialog import AskWhy
from clinicalc.gui.model_chooser import ModelChooser
from clinicalc.gui.model_library import ModelLibrary

if TYPE_CHECKING:
    from clinicalc.operations.recent_titles import RecentFile


class ModelDesk:
    """Between the menu and the library; what cannot be done is said in the foot."""

    def __init__(
        self, window: QWidget, library: ModelLibrary, chooser: ModelChooser, foot: FootBar, ask_why: AskWhy
    ) -> None:
        self._window, self._library, self._chooser, self._foot = window, library, chooser, foot
        self._ask_why = ask_why
        chooser.name_trials()
        chooser.model_chosen.connect(library.choose)
        chooser.hold_asked.connect(self.hold)
        chooser.release_asked.connect(self.release)

    def offer(self, files: "tuple[RecentFile, ...]") -> None:
        """Fill the menu with what stands in the library now, and the files opened lately."""
        library = self._library
        self._chooser.offer(files, library.offered(), can_hold=library.can_hold, held=library.held())

    def hold(self) -> None:
        """Ask why, and hold the model in use on this machine: no number here until it is released."""
        why = self._ask_why(self._window, self._library.name_in_use)
        if why is not None:
            self._try(lambda: self._library.hold(why), "Held on this machine.")

    def release(self, fingerprint: str) -> None:
        """End a hold on this machine."""
        self._try(lambda: self._library.release(fingerprint), "Released on this machine.")

    def _try(self, verb: Callable[[], None], done: str) -> None:
        try:
            verb()
        except ClinicalcError as error:
            from clinicalc.gui.window_words import sentence_of

            self._foot.say(sentence_of(error))
        else:
            self._foot.say(done)
