"""What a card shows as a PDF: the approval record of its model, and the difference from another version."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, Signal

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import ChooseSave, Wanted
from clinicalc.gui.models.card_view import CardView
from clinicalc.gui.window_words import sentence_of
from clinicalc.operations.course import Course

if TYPE_CHECKING:
    from clinicalc.errors import ClinicalcError
    from clinicalc.library.opening import OpenedLibrary

BUSY = "Something else is still being done; ask again when it is over."


class CardPrints(QObject):
    """Asks where to, writes in an errand, and tells what came of it. `opened` is the library as it was last read."""

    told = Signal(str)
    """A sentence: where it was saved, or why not."""

    def __init__(
        self, view: CardView, errands: Errands, choose: ChooseSave, opened: Callable[[], OpenedLibrary | None]
    ) -> None:
        super().__init__()
        self._view, self._errands, self._choose, self._opened = view, errands, choose, opened
        view.offer_prints()
        view.print_asked.connect(self.save_record)
        view.difference_print_asked.connect(self.save_difference)

    def save_record(self) -> None:
        """The approval record of the model that is shown."""
        from clinicalc.operations.vetting_prints import suggest_vetting_name, write_approval_pdf

        card, opened = self._view.card, self._opened()
        if card is None or card.state is None or opened is None:
            return
        state = card.state
        name = suggest_vetting_name("approval", f"{card.id} {card.version}", opened.opened_at)
        path = self._choose(self._view, Wanted.RECORD_PDF, name)
        if path is not None:
            # the dialog asked before a file is replaced
            self._write(
                path,
                lambda _: write_approval_pdf(path, opened, state, card.candidate, card.file_fault, replace=True),
            )

    def save_difference(self) -> None:
        """The difference that is shown."""
        from clinicalc.operations.vetting_prints import name_version, suggest_vetting_name, write_difference_pdf

        found, opened = self._view.difference, self._opened()
        if found is None or opened is None:
            return
        versions = f"{found.new_model.content.id} {found.old.version} to {found.new_version}"
        path = self._choose(
            self._view, Wanted.DIFFERENCE_PDF, suggest_vetting_name("difference", versions, opened.opened_at)
        )
        if path is None:
            return
        old, new = name_version(found.old_model, opened), name_version(found.new_model, opened)
        practice = opened.authority.practice
        self._write(
            path,
            lambda _: write_difference_pdf(path, old, new, found.difference, found.effect, practice, replace=True),
        )

    def _write(self, path: Path, write: Callable[[Course], None]) -> None:
        started = self._errands.run("Saving", write, lambda _: self.told.emit(f"Saved as {path.name}."), self._fail)
        if not started:
            self.told.emit(BUSY)

    def _fail(self, error: ClinicalcError) -> None:
        self.told.emit(sentence_of(error))
