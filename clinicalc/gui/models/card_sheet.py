"""Everything that one card says, from top to bottom: made for a card, and let go with it."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.assessment.findings import Grade
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import Heading, make_button, make_label, make_line
from clinicalc.gui.models.card_words import (
    approval_heading,
    approval_lines,
    graded_faults,
    is_to_be_decided,
    outcome_words,
    recalibration_line,
    standing_words,
)
from clinicalc.gui.models.difference_view import DifferenceView
from clinicalc.gui.models.fingerprint_plate import PLATE_WIDTH, FingerprintPlate
from clinicalc.gui.models.given_fingerprint import GivenFingerprint
from clinicalc.gui.models.named_lines import NamedLine, NamedLines, check_lines
from clinicalc.gui.models.stated_entry import StatedEntry
from clinicalc.gui.models.unconfirmed_list import UnconfirmedList
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE, UNIT
from clinicalc.operations.model_card import Deed, ModelCard

SAVE_RECORD = "Save this record as PDF…"
_TWO_COLUMNS = PLATE_WIDTH + 320
"""From this width on the checks stand beside the plate."""
_GAP = 24
_BESIDE_PLATE = 4
"""How many of the checks stand there: those with few words; where the file comes from takes the whole width."""


class TitleLine(Block):
    """Title in semibold and version beside it; a long title wraps, and the version keeps its place at the right."""

    def __init__(self, title: str, version: str) -> None:
        super().__init__()
        self.title = make_label(title, TITLE, semibold=True)
        self.version = make_line(version, TITLE)
        self._wanted = self.title.fontMetrics().horizontalAdvance(title) + 4
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(14)
        row.addWidget(self.title)
        row.addWidget(self.version, 0, Qt.AlignmentFlag.AlignTop)
        row.addStretch(1)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """As wide as the title is, or as there is room."""
        super().resizeEvent(event)
        room = event.size().width() - self.version.sizeHint().width() - 28
        self.title.setFixedWidth(max(80, min(self._wanted, room)))


class CardSheet(QWidget):
    """The parts are public; those that a card has nothing for are None."""

    stops_changed = Signal()
    """`tab_stops` may be others now."""

    def __init__(
        self, card: ModelCard, *, typed: str = "", names: dict[int, str] | None = None, prints: bool = False
    ) -> None:
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        asks = Deed.APPROVE in card.may
        self._is_to_be_decided = is_to_be_decided(card)
        has_plate = bool(card.fingerprint)
        self.title = TitleLine(card.title, card.version)
        self.outcome = make_label(outcome_words(card), soft=True)
        self.standing = make_label(standing_words(card), UNIT, semibold=True)
        self.faults = [StatedEntry(grade, sentence) for grade, sentence in graded_faults(card)]
        self.plate = FingerprintPlate(card.fingerprint) if has_plate else None
        self.checks = NamedLines(check_lines(card.checks[:_BESIDE_PLATE]))
        self.origin = NamedLines(_origin(card))
        self.given = GivenFingerprint(card.fingerprint, is_trusted=card.is_trusted, typed=typed) if has_plate else None
        self.cautions = [StatedEntry(Grade.CAUTION, sentence) for sentence in card.cautions]
        self.unconfirmed = UnconfirmedList(card.unconfirmed, asks=asks, names=names) if card.unconfirmed else None
        has_difference = bool(card.others) and card.candidate is not None
        self.difference = DifferenceView(card.others, prints=prints) if has_difference else None
        self.save = make_button(SAVE_RECORD, pixels=UNIT) if prints and card.state is not None else None
        self._rows = QVBoxLayout(self)
        self._rows.setContentsMargins(SHEET_MARGIN, 16, SHEET_MARGIN_RIGHT, 24)
        self._rows.setSpacing(8)
        self._is_wide: bool | None = None
        self._lay_out_head()
        self._lay_out_decision(card)
        self._lay_out_rest(card)
        for part in (self.unconfirmed, self.difference):
            if part is not None:
                part.stops_changed.connect(self.stops_changed)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Where the tab key stops, from top to bottom."""
        given = () if self.given is None else (self.given.edit,)
        unconfirmed = () if self.unconfirmed is None else self.unconfirmed.tab_stops()
        difference = () if self.difference is None else self.difference.tab_stops()
        between = (*difference, *unconfirmed) if self._is_to_be_decided else (*unconfirmed, *difference)
        return (*given, *between, *(() if self.save is None else (self.save,)))

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The checks beside the plate, or under it where there is no room."""
        super().resizeEvent(event)
        room = event.size().width() - SHEET_MARGIN - SHEET_MARGIN_RIGHT
        self._place_checks(is_wide=room >= _TWO_COLUMNS)

    def _lay_out_head(self) -> None:
        self._rows.addWidget(self.title)
        for label in (self.outcome, self.standing):
            self._rows.addWidget(label)
            label.setVisible(bool(label.text()))
        for fault in self.faults:
            self._rows.addWidget(fault)
        self._facts = QWidget()  # no Block: without checks nothing in it wraps, and a Block would have no height then
        self._grid = QGridLayout(self._facts)
        self._grid.setContentsMargins(0, 4, 0, 0)
        self._grid.setHorizontalSpacing(_GAP)
        self._grid.setVerticalSpacing(10)
        self._place_checks(is_wide=True)
        self._rows.addWidget(self._facts)
        if self.given is not None:
            self._rows.addWidget(self.given)

    def _place_checks(self, *, is_wide: bool) -> None:
        if is_wide == self._is_wide:
            return
        self._is_wide = is_wide
        top = Qt.AlignmentFlag.AlignTop
        if self.plate is not None:
            self._grid.removeWidget(self.plate)
            self._grid.addWidget(self.plate, 0, 0, top)
        self._grid.removeWidget(self.checks)
        beside = is_wide and self.plate is not None
        self._grid.addWidget(self.checks, 0 if beside else 1, 1 if beside else 0)
        self._grid.setColumnMinimumWidth(0, PLATE_WIDTH if beside else 0)
        self._grid.setColumnStretch(0, 0 if beside else 1)
        self._grid.setColumnStretch(1, 1 if beside else 0)
        self._grid.setHorizontalSpacing(_GAP if beside else 0)

    def _lay_out_decision(self, card: ModelCard) -> None:
        """What an approver goes by: cautions, figures to be compared, the difference from what is in use."""
        if self.difference is not None and is_to_be_decided(card):
            self._part(self.difference)  # what would change comes first
        if self.cautions:
            self._head("Cautions of the file")
            for caution in self.cautions:
                self._rows.addWidget(caution)
        if card.approval is not None:
            self._head(approval_heading(card))
            self.approval = NamedLines(tuple(approval_lines(card, card.approval)))
            self._rows.addWidget(self.approval)
        for part in (self.unconfirmed, None if is_to_be_decided(card) else self.difference):
            if part is not None:
                self._part(part)

    def _part(self, part: QWidget) -> None:
        self._rows.addSpacing(8)
        self._rows.addWidget(part)

    def _lay_out_rest(self, card: ModelCard) -> None:
        if self.origin.rows:
            self._head("Where it comes from")
            self._rows.addWidget(self.origin)
        if card.documentation:
            self._head("Documentation")
            lines = [NamedLine(item, text) for item, text in card.documentation]
            self._rows.addWidget(NamedLines(lines, name_width=200))
        if card.history:
            self._head("History")
            self.history = make_label("\n".join(card.history), UNIT)
            self.history.setTextInteractionFlags(Qt.TextInteractionFlag.TextSelectableByMouse)
            self._rows.addWidget(self.history)
        if self.save is not None:
            self._rows.addSpacing(4)
            self._rows.addWidget(self.save, 0, Qt.AlignmentFlag.AlignLeft)
        self._rows.addStretch(1)

    def _head(self, words: str) -> QLabel:
        heading = Heading(words)
        self._rows.addSpacing(8)
        self._rows.addWidget(heading)
        return heading.label


def _origin(card: ModelCard) -> tuple[NamedLine, ...]:
    """Where the file comes from, what it offers to choose, and its id."""
    offered = recalibration_line(card)
    id = (NamedLine("Id", card.id),) if card.id else ()
    return (*check_lines(card.checks[_BESIDE_PLATE:]), *((offered,) if offered else ()), *id)
