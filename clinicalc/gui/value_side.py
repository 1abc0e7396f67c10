"""What stands beside a value or under it: an offer, the button for what was not measured, a change, range or words."""

from dataclasses import dataclass

from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.access_keys import show_ampersands
from clinicalc.gui.changed_number import ChangedNumber
from clinicalc.gui.changed_place import BESIDE_WIDTH, UNDER_WIDTH, make_change_caption
from clinicalc.gui.held_value import HeldValue
from clinicalc.gui.labels import make_button, make_label
from clinicalc.gui.not_measured_button import NotMeasuredButton
from clinicalc.gui.range_remark import RangeRemark
from clinicalc.gui.row_places import RowPlaces
from clinicalc.gui.tokens import FRAME_WIDTH, RING, ROW_PITCH
from clinicalc.gui.typeface import CAPTION, UNIT
from clinicalc.gui.value_remarks import ValueRemarks
from clinicalc.report.range_line import WIDTH

_BESIDE, _UNDER, _UNDER_THAT = range(3)
"""Lines of the row: beside the frame, and two of their own under it."""


@dataclass(frozen=True, slots=True)
class SideState:
    """What decides what stands there.

    `offered` says whether a likely unit is offered, `inside` whether the assessment found the value inside its range.
    """

    held: HeldValue
    line: ValueLine | None
    offered: bool
    inside: bool
    compact: bool
    changes_shown: bool


class ValueSide:
    """The widgets beside one value. Offer, button and second field take turns in one place, so that no row moves."""

    def __init__(self, field: NumberField, parent: QWidget) -> None:
        self._field = field
        self._remarks = ValueRemarks(field)
        self.remark = make_label("", CAPTION, soft=True)
        self.offer = make_button("", name="offer", pixels=UNIT)
        self.range = RangeRemark()
        self.not_measured = NotMeasuredButton(field.label) if field.may_be_missing else None
        self._change: ChangedNumber | None = None
        self._caption: QWidget | None = None
        self._offer_place = QWidget(parent)
        self._offer_place.hide()
        beside = QHBoxLayout(self._offer_place)
        beside.setContentsMargins(0, 0, 0, 0)
        beside.addWidget(self.offer)
        beside.addStretch(1)
        self._aside = QWidget(parent)
        aside = QVBoxLayout(self._aside)
        aside.setContentsMargins(0, 0, 0, 0)
        aside.setSpacing(0)
        for widget in (self.not_measured, self.range, self.remark):
            if widget is not None:
                aside.addWidget(widget)

    def lie_in(self, places: RowPlaces) -> None:
        """Take places in the row."""
        self._places = places

    def make_change(self) -> ChangedNumber:
        """The second field of a comparison, which finds its place when the rest settles next."""
        self._change, self._caption = ChangedNumber(self._field), make_change_caption()
        self._places.place_caption(self._caption, _UNDER_THAT)
        return self._change

    def show_offer(self, words: str) -> None:
        """Offer to read the value so, "" for no offer."""
        words = show_ampersands(words)
        self.offer.setText(f"Use {words}" if words else "")  # hidden, it keeps no digits of another value or patient
        self.offer.setAccessibleName(f"{self._field.label}: use {words}" if words else "")
        self._offer_place.setVisible(bool(words))

    def settle(self, state: SideState) -> None:
        """Show one of offer, button, second field, words and range; only a date stands under the range: both fit."""
        words = "" if state.offered else self._remarks.words(state.held, state.line)
        askable = self._is_askable(state)
        span = self._remarks.range_in(state.held.unit) if self._is_ranged(state) and not askable else None
        number = self._remarks.number(state.held, state.line, inside=state.inside)
        self.range.show_range(span, number, inside=state.inside)
        self.remark.setText(words)
        self.remark.setVisible(bool(words))
        if self.not_measured is not None:
            self.not_measured.setVisible(askable)
        self._aside.setVisible(span is not None or bool(words) or askable)
        changed_beside = self._place_change(state, askable=askable)
        self._place_aside(under=state.compact or (changed_beside and bool(words)))
        wide = self.offer.sizeHint().width() > WIDTH
        swapped = state.changes_shown and self._lies_under(state)
        self._place_offer(_UNDER_THAT if swapped else _UNDER if state.compact or wide else _BESIDE)

    def _is_askable(self, state: SideState) -> bool:
        """Its place is that of the range, which says nothing before a number is typed; the narrow form keeps it."""
        if self.not_measured is None:
            return False
        if state.compact:
            return state.changes_shown or not state.offered
        return not state.offered and not state.held.text.strip()

    def _is_ranged(self, state: SideState) -> bool:
        only_dated = not state.held.remark and not (state.line is not None and state.line.worked_out)
        room = not state.compact and not state.offered and not state.changes_shown
        return room and (only_dated or not state.inside)

    def _lies_under(self, state: SideState) -> bool:
        """Whether the second field has its place on a line of its own."""
        return self._change is not None and (state.compact or not self._change.fits_beside())

    def _place_change(self, state: SideState, *, askable: bool) -> bool:
        """Show the second field or hide it; whether it is shown beside the frame."""
        if self._change is None or self._caption is None:
            return False
        under = self._lies_under(state)
        shown = state.changes_shown and not state.offered and (under or not askable)
        if self._places.place(self._change, _UNDER_THAT if under else _BESIDE):
            self._change.set_width(UNDER_WIDTH if under else BESIDE_WIDTH)
        if shown:
            self._change.catch_up()
        self._change.setVisible(shown)
        self._caption.setVisible(shown and under)
        return shown and not under

    def _place_aside(self, *, under: bool) -> None:
        ringed = self.not_measured is not None  # a button keeps room for its own ring
        self._places.place(self._aside, _UNDER if under else _BESIDE, indent=0 if ringed else RING, below=2)

    def _place_offer(self, line: int) -> None:
        swapped = line == _UNDER_THAT
        if self._places.place(self._offer_place, line, indent=RING, below=0 if swapped else 2):
            self.offer.setMinimumWidth(FRAME_WIDTH if line else 0)
            self._offer_place.setMinimumHeight(ROW_PITCH if swapped else 0)
