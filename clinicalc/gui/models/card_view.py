"""The right side of the Models page for one model of the library, or for a file that is looked at."""

from collections.abc import Iterator
from contextlib import contextmanager
from itertools import pairwise

from PySide6.QtCore import QCoreApplication, QEvent, Qt, Signal
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.gui.models.card_sheet import CardSheet
from clinicalc.gui.models.card_words import is_to_be_decided, strip_words
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.vetting_strip import VettingStrip
from clinicalc.library.records import Compared
from clinicalc.operations.model_card import ModelCard
from clinicalc.operations.version_difference import VersionDifference

_ROUNDS = 3
"""What is inside may ask for more room once it knows its own."""


class CardView(QWidget):
    """Shows one card, or nothing. What was typed stays as long as it is about the same file."""

    difference_asked = Signal(str)
    """The difference from the version with this fingerprint is wanted; it comes by `show_difference`."""
    given_changed = Signal()
    """The fingerprint that was given, or a name of who compared a figure, is another one."""
    stops_changed = Signal()
    """`tab_stops` may be others now."""
    print_asked = Signal()
    """The approval record of the model is to be saved as PDF."""
    difference_print_asked = Signal()
    """The difference that is shown is to be saved as PDF."""

    def __init__(self) -> None:
        super().__init__()
        self._prints = False
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.card: ModelCard | None = None
        self.sheet: CardSheet | None = None
        self._typed_before = ("", "")
        self.strip = VettingStrip("")
        self.strip.hide()
        self.scroller = Scroller()
        self.scroller.setObjectName("sheet_scroll")
        self.scroller.setAccessibleName("Model")
        self.scroller.setWidgetResizable(True)
        self.scroller.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.scroller.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        whole = QVBoxLayout(self)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.setSpacing(0)
        whole.addWidget(self.strip)
        whole.addWidget(self.scroller, 1)

    @property
    def typed_fingerprint(self) -> str:
        """What was typed as the fingerprint that somebody was given, "" where nothing was."""
        given = None if self.sheet is None else self.sheet.given
        return "" if given is None else given.typed

    @property
    def difference(self) -> VersionDifference | None:
        """The difference that is shown."""
        return None if self.sheet is None or self.sheet.difference is None else self.sheet.difference.difference

    @property
    def compared(self) -> tuple[Compared, ...]:
        """The unconfirmed figures that have the name of who compared them."""
        listed = None if self.sheet is None else self.sheet.unconfirmed
        return () if listed is None else listed.compared

    def offer_prints(self) -> None:
        """Offer from the next card on what can be saved as PDF: somebody listens to the two signals."""
        self._prints = True

    def show_card(self, card: ModelCard) -> None:
        """Show a card from its top. The same file again keeps what was typed, the difference, and the place.

        Asks for the difference from the version in use where the file waits for a decision.
        """
        before, old = self.card, self.sheet
        again = before is not None and old is not None and before.fingerprint == card.fingerprint
        kept_for, kept = self._typed_before
        typed = self.typed_fingerprint if again else kept if kept_for == card.fingerprint else ""
        self._typed_before = ("", "")
        names = dict(old.unconfirmed.names) if again and old is not None and old.unconfirmed is not None else None
        difference = self.difference if again else None
        place = self.scroller.verticalScrollBar().value() if again else 0
        sheet = CardSheet(card, typed=typed, names=names, prints=self._prints)
        with self._settled():
            self._take(card, sheet)
        if difference is not None and difference.old.fingerprint in {row.fingerprint for row in card.others}:
            self.show_difference(difference)
        self.scroller.verticalScrollBar().setValue(place)
        if sheet.difference is not None and sheet.difference.difference is None and is_to_be_decided(card):
            sheet.difference.ask()

    def show_difference(self, difference: VersionDifference) -> None:
        """Show a difference that was asked for; one that is about another file is let go."""
        if self.card is None or self.sheet is None or self.sheet.difference is None:
            return
        if difference.new_fingerprint == self.card.fingerprint:
            with self._settled():
                self.sheet.difference.show_difference(difference)

    def show_difference_fault(self, sentence: str) -> None:
        """Say why a difference that was asked for does not come; it can be asked for again."""
        if self.sheet is not None and self.sheet.difference is not None:
            self.sheet.difference.show_fault(sentence)

    def clear(self) -> None:
        """Show nothing, and hold nothing of what was typed but the fingerprint given of a file that nobody installed.

        That file is most often shown next as installed, and nobody should have to type its 64 digits a second time.
        """
        if self.card is not None and self.card.row is None:
            self._typed_before = (self.card.fingerprint, self.typed_fingerprint)
        self.card = self.sheet = None
        self.strip.hide()
        self._let_go()
        self.stops_changed.emit()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Where the tab key stops, from top to bottom: the sheet itself, which the arrow keys move, then its parts."""
        return (self.scroller, *(() if self.sheet is None else self.sheet.tab_stops()))

    def focus_given(self) -> None:
        """The focus to the field of the fingerprint that was given."""
        if self.sheet is not None and self.sheet.given is not None:
            self.sheet.given.edit.setFocus(Qt.FocusReason.OtherFocusReason)

    def focus_open_figure(self) -> None:
        """The focus to the first unconfirmed figure that nobody compared."""
        if self.sheet is not None and self.sheet.unconfirmed is not None:
            self.sheet.unconfirmed.focus_open()

    def _take(self, card: ModelCard, sheet: CardSheet) -> None:
        self._let_go()
        self.card, self.sheet = card, sheet
        words = strip_words(card)
        self.strip.label.setText(words)
        self.strip.setVisible(bool(words))
        if sheet.given is not None:
            sheet.given.changed.connect(self.given_changed)
        if sheet.unconfirmed is not None:
            sheet.unconfirmed.changed.connect(self.given_changed)
        if sheet.difference is not None:
            sheet.difference.asked.connect(self.difference_asked)
            sheet.difference.row_reached.connect(self._follow)
            sheet.difference.print_asked.connect(self.difference_print_asked)
        if sheet.save is not None:
            sheet.save.clicked.connect(self.print_asked)
        sheet.stops_changed.connect(self._chain)
        self.scroller.setWidget(sheet)
        sheet.show()  # now: Qt would do it by an event
        self._chain()

    @contextmanager
    def _settled(self) -> Iterator[None]:
        """Paint nothing of what is changed until everything has found its place."""
        self.setUpdatesEnabled(False)
        try:
            yield
            for _ in range(_ROUNDS):
                QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)
        finally:
            self.setUpdatesEnabled(True)

    def _let_go(self) -> None:
        old = self.scroller.takeWidget()
        if old is not None:
            old.hide()
            old.deleteLater()

    def _chain(self) -> None:
        """Tab goes from top to bottom, also to what came later."""
        stops = self.tab_stops()
        for before, after in pairwise(stops):
            QWidget.setTabOrder(before, after)
        self.stops_changed.emit()

    def _follow(self, top: int, height: int) -> None:
        """Keep the row in sight that an arrow key led to."""
        if self.sheet is None or self.sheet.difference is None:
            return
        at = self.sheet.difference.mapTo(self.sheet, self.sheet.difference.rect().topLeft())
        middle = at.y() + top + height // 2
        self.scroller.ensureVisible(0, middle, 0, height // 2 + 8)
