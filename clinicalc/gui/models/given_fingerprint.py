"""The fingerprint that somebody was given, typed beside the file's own, with a running verdict in words.

The verdict says how far the two agree, never which digits should have been typed: typed off the screen they would
prove nothing.
"""

from dataclasses import dataclass
from enum import Enum, auto

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QResizeEvent
from PySide6.QtWidgets import QBoxLayout, QHBoxLayout, QLineEdit, QSizePolicy, QStackedLayout, QVBoxLayout

from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_field_label, make_label
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import BASE, UNIT, face
from clinicalc.library.cards import GROUP, ID_DIGITS, compare_id, plain_digits
from clinicalc.units.quoting import visible

NAME = "Fingerprint you were given"
NOT_NEEDED = "A publisher trusted on this machine signed the file; it may be compared all the same."
FROM_ELSEWHERE = "Type it from paper or as it is read to you; copied from here it proves nothing."
"""Both stand where the verdict comes, as long as nothing is typed."""
_HEX = frozenset("0123456789abcdef")
_LONGEST = 400
_LABEL, _FIELD, _NARROW = 176, 640, 520
"""Widths: of the label, of the field where all groups of a fingerprint are in sight, and below which they stack."""


class Agreeing(Enum):
    """How what was typed stands to the fingerprint."""

    NOTHING = auto()
    SO_FAR = auto()
    WHOLE = auto()
    DIFFERS = auto()
    NO_DIGIT = auto()
    TOO_MUCH = auto()


@dataclass(frozen=True, slots=True)
class Verdict:
    """The kind, and the words for it; "" where nothing was typed."""

    kind: Agreeing
    words: str


def compare_given(typed: str, fingerprint: str) -> Verdict:
    """How far what was typed agrees, up to the first character that does not; spaces, hyphens, capitals are nothing."""
    letters = plain_digits(typed)
    found = compare_id(typed, fingerprint)
    if not letters:
        return Verdict(Agreeing.NOTHING, "")
    if found.whole:
        return Verdict(Agreeing.WHOLE, f"Equal: all {ID_DIGITS} characters")
    if found.digits == ID_DIGITS:
        words = f"More than {ID_DIGITS} characters: {len(letters)} were typed"
        return Verdict(Agreeing.TOO_MUCH, words)
    if found.digits == len(letters):
        return Verdict(Agreeing.SO_FAR, f"Equal so far: {found.digits} of {ID_DIGITS} characters")
    letter = letters[found.digits]
    if letter not in _HEX:
        words = f"Character {found.digits + 1}, “{visible(letter)}”, is not a digit: those are 0 to 9 and a to f"
        return Verdict(Agreeing.NO_DIGIT, words)
    return Verdict(Agreeing.DIFFERS, f"Differs from the {_ordinal(found.digits // GROUP + 1)} group")


def _ordinal(place: int) -> str:
    ending = {1: "st", 2: "nd", 3: "rd"}.get(place % 10, "th") if place not in (11, 12, 13) else "th"
    return f"{place}{ending}"


class GivenFingerprint(Block):
    """The field and the verdict under it."""

    changed = Signal()
    """Other characters were typed."""

    def __init__(self, fingerprint: str, *, is_trusted: bool = False, typed: str = "") -> None:
        super().__init__()
        self._fingerprint = fingerprint
        self.edit = QLineEdit()
        self.edit.setFont(face(BASE))
        self.edit.setMaxLength(_LONGEST)
        self.edit.setAccessibleName(NAME)
        self.edit.setInputMethodHints(Qt.InputMethodHint.ImhNoPredictiveText | Qt.InputMethodHint.ImhNoAutoUppercase)
        self.edit.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.frame = FieldFrame()
        self.label = make_field_label(NAME, NAME, self.edit)
        self.verdict = make_label("", BASE, semibold=True)
        self.remark = make_label(NOT_NEEDED if is_trusted else FROM_ELSEWHERE, UNIT, soft=True)
        self._says = QStackedLayout()
        self._lay_out()
        self._kind = Agreeing.NOTHING
        self.edit.setText(typed)
        self._judge()
        self.edit.textChanged.connect(self._take)

    @property
    def typed(self) -> str:
        """What was typed, without spaces at its ends."""
        return self.edit.text().strip()

    @property
    def kind(self) -> Agreeing:
        """How it stands to the fingerprint."""
        return self._kind

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Where there is little room the label stands over the field."""
        super().resizeEvent(event)
        is_narrow = event.size().width() < _NARROW
        way = QBoxLayout.Direction.TopToBottom if is_narrow else QBoxLayout.Direction.LeftToRight
        if way != self._row.direction():
            self._row.setDirection(way)
            self._under.setContentsMargins(RING if is_narrow else _LABEL + RING, 0, 0, 0)

    def _take(self) -> None:
        before = self._kind
        self._judge()
        if self._kind is not before:
            QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self.edit, self.verdict.text()))
        self.changed.emit()

    def _judge(self) -> None:
        verdict = compare_given(self.edit.text(), self._fingerprint)
        self._kind = verdict.kind
        self.verdict.setText(verdict.words)
        self._says.setCurrentWidget(self.verdict if verdict.words else self.remark)
        self.edit.setAccessibleDescription(verdict.words or self.remark.text())

    def _lay_out(self) -> None:
        self.label.setFixedWidth(_LABEL)
        self.frame.setMinimumWidth(0)
        self.frame.setMaximumWidth(_FIELD + 2 * RING)
        self.frame.watch(self.edit)
        inside = QHBoxLayout(self.frame)
        inside.setContentsMargins(RING + 8, RING + 1, RING + 6, RING + 1)
        inside.addWidget(self.edit)
        row = self._row = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        row.setSpacing(0)
        row.addWidget(self.label)
        row.addWidget(self.frame, 1)
        row.addStretch(0)
        under = self._under = QVBoxLayout()
        under.setContentsMargins(_LABEL + RING, 0, 0, 0)
        under.addLayout(self._says)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(2)
        column.addLayout(row)
        column.addLayout(under)
        # one place for both, as high as the higher one: a verdict that comes with the first key moves nothing;
        # filled last, since a widget without a parent would be shown as a window of its own
        for words in (self.remark, self.verdict):
            words.setAlignment(Qt.AlignmentFlag.AlignLeft | Qt.AlignmentFlag.AlignTop)
            self._says.addWidget(words)
