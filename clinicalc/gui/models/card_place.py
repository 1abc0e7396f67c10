"""One model on the right side of the Models page, or the sentence that stands in its place until it is read."""

from PySide6.QtCore import QObject, Qt, Signal
from PySide6.QtGui import QKeySequence, QShortcut
from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError, Stopped
from clinicalc.gui.models.card_view import CardView
from clinicalc.gui.models.deeds.given import Given
from clinicalc.gui.models.library_reading import LibraryReading
from clinicalc.gui.models.right_note import RightNote
from clinicalc.gui.right_stack import RightStack
from clinicalc.gui.window_words import replace_commands, sentence_of
from clinicalc.operations.library_view import ModelRow
from clinicalc.operations.model_card import ModelCard


class CardPlace(QObject):
    """Nothing of another model stands beside the one that is chosen: until its card is read only its row is said."""

    came = Signal()
    """Another card is shown, or none."""
    left = Signal()
    """Escape: back to the list."""

    def __init__(self, stack: RightStack, reading: LibraryReading) -> None:
        super().__init__()
        self._stack, self._reading = stack, reading
        self._row: ModelRow | None = None
        self._card: ModelCard | None = None
        self.note = RightNote()
        self.view = CardView()
        reading.card_read.connect(self._take)
        reading.card_failed.connect(self._fail)
        reading.difference_read.connect(self.view.show_difference)
        reading.difference_failed.connect(self._fail_to_compare)
        self.view.difference_asked.connect(self._compare)
        for part in (self.note, self.view):
            stack.addWidget(part)
            keys = QShortcut(QKeySequence(Qt.Key.Key_Escape), part)
            keys.setContext(Qt.ShortcutContext.WidgetWithChildrenShortcut)
            keys.activated.connect(self.left)

    @property
    def shown(self) -> ModelCard | None:
        """The card that is on screen, or is covered by a form; None while a sentence stands in its place."""
        return self._card

    @property
    def is_candidate(self) -> bool:
        """Whether the card is that of a file which nobody installed yet."""
        return self._card is not None and self._row is None

    @property
    def is_shown(self) -> bool:
        """Whether a card or a sentence about a model is what belongs on the right side."""
        return self._stack.base in (self.note, self.view)

    def given(self) -> Given:
        """What somebody entered on the card."""
        return Given(self.view.typed_fingerprint, self.view.compared)

    def want(self, row: ModelRow) -> None:
        """Show a model of the list; the card of the same one stays while it is read again, unless its row changed."""
        if self._card is None or self._row != row:
            self._show_words(f"{row.title} {row.version}", _ended(replace_commands(row.reason or row.says)))
        else:
            self._stack.show_base(self.view)
        self._row = row
        self._reading.read_card(row.fingerprint)

    def show_candidate(self, card: ModelCard) -> None:
        """Show a file that nobody installed yet."""
        self._row = None
        self._show(card)

    def show_words(self, title: str, words: str) -> None:
        """Show no model, but a sentence."""
        self._row = None
        self._show_words(title, words)
        self.came.emit()

    def show_error(self, title: str, error: ClinicalcError) -> None:
        """Show why there is no model to be shown."""
        self._row = None
        self._show_words(title, "")
        self.note.show_error(title, error)
        self.came.emit()

    def leave_candidate(self) -> None:
        """The file that was looked at is of no concern any more."""
        if self.is_candidate:
            self.show_words("", "")

    def focus(self) -> None:
        """The focus into the card, where it was or to its beginning."""
        part = self.view if self._stack.base is self.view else self.note
        inside = part.focusWidget()
        if inside is not None and inside.isVisible() and inside.isEnabled():
            inside.setFocus(Qt.FocusReason.ShortcutFocusReason)
        elif isinstance(part, CardView):
            part.scroller.setFocus(Qt.FocusReason.ShortcutFocusReason)
        else:
            part.setFocus(Qt.FocusReason.ShortcutFocusReason)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Where the tab key stops on the card."""
        return self.view.tab_stops()

    def _take(self, card: ModelCard) -> None:
        if self._row is not None and card.fingerprint == self._row.fingerprint:
            self._show(card)

    def _show(self, card: ModelCard) -> None:
        is_other = self._card is None or _said(card) != _said(self._card)
        self._card = card
        self._stack.show_base(self.view)
        if is_other:  # otherwise what is read there stays as it is
            self.view.show_card(card)
        self.came.emit()

    def _fail(self, error: ClinicalcError) -> None:
        if self._row is None:
            return
        title = f"{self._row.title} {self._row.version}"
        if isinstance(error, Stopped):
            self._show_words(title, "Its reading was stopped. Choose it again to read it.")
            self._row = None
        else:
            self._show_words(title, "")
            self.note.show_error(title, error)
        self.came.emit()

    def _show_words(self, title: str, words: str) -> None:
        self._card = None
        self.view.clear()
        self.note.show_words(title, words)
        self._stack.show_base(self.note)

    def _compare(self, old: str) -> None:
        if self._card is not None:
            self._reading.compare(old, self._card)

    def _fail_to_compare(self, error: ClinicalcError) -> None:
        self.view.show_difference_fault(sentence_of(error))


def _said(card: ModelCard) -> tuple[object, ...]:
    """All of a card that a later reading can change; the file of one fingerprint is always the same."""
    decided = (card.fingerprint, card.row, card.may, card.history, card.faults, card.file_fault, card.others)
    return (*decided, card.checks, card.unconfirmed, card.is_trusted)


def _ended(sentence: str) -> str:
    return sentence if sentence.endswith((".", "?", "!")) else f"{sentence}."
