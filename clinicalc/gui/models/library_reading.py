"""What the Models page reads of the library, one thing after the other, the newest wish first of its kind.

Everything is read in errands. What is wished for while another errand runs waits for its end.
"""

from collections.abc import Callable
from pathlib import Path
from typing import Any

from PySide6.QtCore import QObject, Signal

from clinicalc.errors import ClinicalcError, LibraryError, Stopped
from clinicalc.gui.errands import Errands
from clinicalc.operations.course import Course
from clinicalc.operations.vetting_desk import LibraryView, ModelCard, VersionDifference, VettingDesk

_Wish = tuple[str, Callable[[Course], Any], Callable[[Any], None], Callable[[ClinicalcError], None]]


class LibraryReading(QObject):
    """`view` is the last reading, None before the first and after one that failed."""

    view_read = Signal(object)
    """The LibraryView."""
    view_failed = Signal(object)
    """The ClinicalcError; where somebody stopped it, the view before stays."""
    card_read = Signal(object)
    """The ModelCard that was wished for last."""
    card_failed = Signal(object)
    """The ClinicalcError."""
    looked_at = Signal(object)
    """The ModelCard of a file that is not in the library yet."""
    look_failed = Signal(str, object)
    """The name of the file, and the ClinicalcError."""
    difference_read = Signal(object)
    """The VersionDifference."""
    difference_failed = Signal(object)
    """The ClinicalcError."""

    def __init__(self, desk: VettingDesk, errands: Errands) -> None:
        super().__init__()
        self._desk, self._errands = desk, errands
        self._wishes: dict[str, _Wish] = {}
        self._running = ""
        self.view: LibraryView | None = None
        errands.ended.connect(self._go_on)

    def read(self) -> None:
        """Read the library again."""
        self._wish_for_view("Reading the library", self._desk.read)

    def read_all(self) -> None:
        """Read the library again with every file in it, however long it takes."""
        self._wish_for_view("Checking every file of the library", self._desk.read_all)

    def read_card(self, fingerprint: str) -> None:
        """Read one model of the library in full; one that is still being read for another model is stopped."""
        if self._running in ("card", "difference"):
            self._errands.stop()
        self._wishes.pop("difference", None)
        self._wish("card", "Reading the model", lambda course: self._card(fingerprint, course), *self._card_ends())

    def look_at(self, path: Path) -> None:
        """Read and prove a file that may be installed."""

        def fail(error: ClinicalcError) -> None:
            self.look_failed.emit(path.name, error)

        self._wish("look", f"Reading {path.name}", lambda c: self._desk.look_at(path, c), self.looked_at.emit, fail)

    def compare(self, old: str, card: ModelCard) -> None:
        """Set an older version and the one on the card side by side."""

        def work(course: Course) -> VersionDifference:
            return self._desk.difference(self._known(), old, card, course)

        self._wish("difference", "Comparing two versions", work, self.difference_read.emit, self._fail_to_compare)

    def forget(self) -> None:
        """Nothing is wished for any more."""
        self._wishes.clear()

    def _wish_for_view(self, title: str, work: Callable[[Course], LibraryView]) -> None:
        self._wish("view", title, work, self._take_view, self._lose_view)

    def _wish(
        self,
        kind: str,
        title: str,
        work: Callable[[Course], Any],
        done: Callable[[Any], None],
        failed: Callable[[ClinicalcError], None],
    ) -> None:
        self._wishes[kind] = (title, work, done, failed)
        self._go_on()

    def _go_on(self) -> None:
        """Begin with the next wish: the library itself, then a file, a model, a difference."""
        if self._errands.is_busy:
            return
        self._running = ""
        for kind in ("view", "look", "card", "difference"):
            if kind in self._wishes:
                self._running = kind
                self._errands.run(*self._wishes.pop(kind))
                return

    def _card(self, fingerprint: str, course: Course) -> ModelCard:
        return self._desk.card(self._known(), fingerprint, course)

    def _known(self) -> LibraryView:
        if self.view is None:
            raise LibraryError("the library is not read.", do="Read it again.")
        return self.view

    def _card_ends(self) -> tuple[Callable[[Any], None], Callable[[ClinicalcError], None]]:
        def take(card: ModelCard) -> None:
            if "card" not in self._wishes:  # otherwise another one is wished for by now
                self.card_read.emit(card)

        def fail(error: ClinicalcError) -> None:
            if "card" not in self._wishes:
                self.card_failed.emit(error)

        return take, fail

    def _take_view(self, view: LibraryView) -> None:
        self.view = view
        self.view_read.emit(view)

    def _lose_view(self, error: ClinicalcError) -> None:
        if not isinstance(error, Stopped):
            self.view = None
        self.view_failed.emit(error)

    def _fail_to_compare(self, error: ClinicalcError) -> None:
        if "card" not in self._wishes:
            self.difference_failed.emit(error)
