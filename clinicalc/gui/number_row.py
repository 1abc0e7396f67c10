"""The row of a measured value: number and unit in one frame, a remark or an offer beside it."""

import re
from collections.abc import Sequence
from dataclasses import replace
from datetime import date

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import shown_limits, words_for
from clinicalc.assessment.numerals import plain
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.access_keys import show_ampersands
from clinicalc.gui.dated_entry import DatedEntry
from clinicalc.gui.held_value import HeldValue, choosable_units, hold, hold_entry, read_as, settle, switch_unit
from clinicalc.gui.labels import make_button, make_field_label, make_label
from clinicalc.gui.range_remark import RangeRemark
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.tokens import COLUMN_GAP, FRAME_WIDTH, RING
from clinicalc.gui.typeface import CAPTION, UNIT
from clinicalc.gui.value_frame import ValueFrame
from clinicalc.report.range_line import WIDTH, RangeOfValues
from clinicalc.units.conversion import conversion
from clinicalc.units.reading import Reading, read_value
from clinicalc.units.unit import unit as unit_of

_GAP_BEFORE_FRAME, _FRAME, _GAP_BEFORE_REMARK, _REMARK, _MARK = range(1, 6)
"""Columns of the row; the label is the first."""
_DATE_AFTER = re.compile(r"\s+on\s.*$", re.IGNORECASE)
"""A date typed after a number, as the reader of values knows it."""


class NumberRow(FieldRow):
    """Label, frame, remark. Holds what was typed and shows it in the chosen unit."""

    def __init__(self, field: NumberField, marked_label: str) -> None:
        super().__init__(field.id, field.meaning)
        self._field = field
        self._held: HeldValue = hold(field, "", field.unit)
        self._offer = ""
        self._line: ValueLine | None = None
        self.frame = ValueFrame(choosable_units(field), field.unit)
        self.edit = self.frame.edit
        self.edit.setAccessibleName(field.label)
        self.label = make_field_label(marked_label, field.label, self.edit)
        self.remark = make_label("", CAPTION, soft=True)
        self.offer = make_button("", name="offer", pixels=UNIT)
        self.range = RangeRemark()
        self.dated = DatedEntry(field.label) if field.valid_days is not None else None
        self._came_dated = False  # the date in the date field came with the number, and goes with it
        self._inside = True
        self._under: dict[QWidget, bool] = {}
        self._offer_place = QWidget(self)
        self._offer_place.hide()
        if field.meaning:
            self.edit.setAccessibleDescription(field.meaning)
        self._lay_out()
        self._connect()

    @property
    def held(self) -> HeldValue:
        """What the field holds and how it is shown."""
        return self._held

    def fill(self, typed: Typed | None) -> Typed | None:
        """Show a value or none in its unit (the file's own for none)."""
        if self.dated is not None:
            self.dated.fill(None if typed is None else typed.dated)
            self._came_dated = typed is not None and typed.dated is not None
            typed = None if typed is None else replace(typed, dated=None)
        self._held = hold_entry(self._field, typed)
        self._part_from_date()
        self._show_held()
        return self._as_typed()

    def show_remarks(self, line: ValueLine | None, findings: Sequence[Finding]) -> None:
        """The offer of a likely unit, or how the value is to be read, or what was worked out, or the range."""
        self.frame.set_stopped(any(f.grade is Grade.STOP and f.code != "missing" for f in findings))
        offers = [code for finding in findings for code in finding.offer if code in choosable_units(self._field)]
        self._offer = offers[0] if offers else ""
        if self._offer:
            digits = read_as(self._field, self._held, self._offer).text.partition(" on ")[0]
            words = show_ampersands(f"{digits} {unit_of(self._offer).spelling}")
            self.offer.setText(f"Use {words}")
            self.offer.setAccessibleName(f"{self._field.label}: use {words}")
        had_focus = self.offer.hasFocus()
        self._offer_place.setVisible(bool(self._offer))
        if had_focus and not self._offer:
            self.edit.setFocus(Qt.FocusReason.OtherFocusReason)
        self._line = line
        self._inside = all(f.code is not FindingCode.OUTSIDE_DERIVATION for f in findings)
        self._place_remarks()

    @property
    def has_offer(self) -> bool:
        """Whether a likely unit is offered."""
        return bool(self._offer)

    def give_offer_its_letter(self) -> None:
        """Let the access letter of offers press this one."""
        self.offer.setText(f"&{self.offer.text()}")

    def fit(self, room: int, *, compact: bool) -> None:
        """Compact: remark or offer under the frame, and no range."""
        self._compact = compact
        if self.dated is not None:
            self.dated.set_compact(compact)
        self._place_remarks()

    def note(self) -> str:
        """What the file means by the field; where ranges do not stand beside values, the range as well."""
        low, high = self._field.derivation
        if not self._compact or (low is None and high is None):
            return super().note()
        words = words_for(self._field, self._field.derivation, self._held.unit)
        return f"{super().note()} Derivation range {words}.".strip()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Value, unit, date, offer, mark."""
        chooser = () if self.frame.chooser is None else (self.frame.chooser,)
        dated = () if self.dated is None else (self.dated.edit,)
        return (self.edit, *chooser, *dated, self.offer, self.mark)

    def _lay_out(self) -> None:
        self._compact = False
        beside = QHBoxLayout(self._offer_place)
        beside.setContentsMargins(0, 0, 0, 0)
        beside.addWidget(self.offer)
        beside.addStretch(1)
        self._aside = QWidget(self)  # shown without a parent it would be a window of its own
        aside = QVBoxLayout(self._aside)
        aside.setContentsMargins(0, 0, 0, 0)
        aside.setSpacing(0)
        aside.addWidget(self.range)
        aside.addWidget(self.remark)
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(0)
        self._grid.setVerticalSpacing(0)
        self._grid.setColumnMinimumWidth(_GAP_BEFORE_FRAME, COLUMN_GAP)
        self._grid.setColumnMinimumWidth(_GAP_BEFORE_REMARK, RING)
        self._grid.setColumnStretch(_REMARK, 1)
        self._grid.addWidget(self.label, 0, 0)
        self._grid.addWidget(self.frame, 0, _FRAME)
        self._grid.addWidget(self.mark, 0, _MARK, Qt.AlignmentFlag.AlignVCenter)
        self._place_remarks()

    def _connect(self) -> None:
        self.edit.textChanged.connect(self._take_text)
        self.edit.returnPressed.connect(self.entered)
        self.edit.left.connect(self._settle)
        self.offer.clicked.connect(self._take_offer)
        if self.dated is not None:
            self.dated.changed.connect(self._take_date)
            self.dated.entered.connect(self.entered)
        if self.frame.chooser is not None:
            self.frame.chooser.setAccessibleName(f"{self._field.label}, unit")
            self.frame.chooser.currentIndexChanged.connect(self._take_unit)
            self.frame.chooser.entered.connect(self.entered)

    def _take_text(self, text: str) -> None:
        self._held = hold(self._field, text, self._held.unit)
        if self.dated is not None and self._came_dated:
            self.dated.fill(None)  # the day of another number
            self._came_dated = False
        self._show_unit()
        self._tell()

    def _take_date(self) -> None:
        """A date that was typed in its own field is the person's, whatever number stands there later."""
        self._came_dated = False
        self._tell()

    def _take_unit(self, place: int) -> None:
        chooser = self.frame.chooser
        assert chooser is not None
        unit = str(chooser.itemData(place))
        if unit == self._held.unit:
            return
        self._held = switch_unit(self._field, self._held, unit, date.today())
        self._show_held()
        self._tell()

    def _take_offer(self) -> None:
        if not self._offer:
            return
        self._held = read_as(self._field, self._held, self._offer)
        self._show_held()
        self._tell()
        self.edit.setFocus(Qt.FocusReason.OtherFocusReason)

    def _settle(self) -> None:
        before = self._held
        self._held = settle(self._field, self._held)
        self._part_from_date()
        if self._held is not before:
            self._show_held()
            self._tell()

    def _part_from_date(self) -> None:
        """A date typed after the number goes to the date field, where there is one."""
        reading = read_value(self._held.typed.text)
        if self.dated is None or not isinstance(reading, Reading) or reading.dated is None:
            return
        self.dated.fill(reading.dated)
        self._came_dated = True
        held = self._held
        typed, by_hand = (replace(t, text=_without_date(t.text)) for t in (held.typed, held.by_hand))
        self._held = replace(held, typed=typed, by_hand=by_hand, text=_without_date(held.text))

    def _tell(self) -> None:
        self.typed.emit(self.field_id, self._as_typed())

    def _as_typed(self) -> Typed | None:
        """The value with its date. What is no date is put after the number, where it is refused in words."""
        typed = self._held.typed
        if not typed.text.strip():
            return None
        if self.dated is None or not self.dated.text:
            return typed
        if self.dated.day is None:
            return replace(typed, text=f"{typed.text} on {self.dated.text}")
        return replace(typed, dated=self.dated.day)

    def _show_held(self) -> None:
        if self.edit.text() != self._held.text or self.edit.isUndoAvailable() or self.edit.isRedoAvailable():
            blocked = self.edit.blockSignals(True)
            self.edit.setText(self._held.text)  # forgets the undo history too
            self.edit.blockSignals(blocked)
        if not self.edit.hasFocus():
            self.edit.setCursorPosition(0)
        self._show_unit()

    def _show_unit(self) -> None:
        if self.frame.chooser is not None:
            self.frame.chooser.show_place(self.frame.chooser.findData(self._held.unit))
        self.frame.fit_text()

    def _remark_words(self) -> str:
        """What is to be said in words: how the value is read, or what was worked out, or of which day it is."""
        line = self._line
        if self._held.remark:
            return self._held.remark
        if line is not None and line.worked_out:
            digits = "" if line.number is None else plain(line.number)  # as many as the findings name
            unit = "" if self._field.is_bare or self._field.unit == "1" else f" {self._field.spelling}"
            return f"{digits}{unit} worked out"
        return "" if line is None or line.dated is None else f"of {line.dated.isoformat()}"

    def _range_on_screen(self) -> RangeOfValues | None:
        low, high = self._field.derivation
        if low is None and high is None:
            return None
        texts = ("" if end is None else plain(end) for end in shown_limits(self._field, (low, high), self._held.unit))
        return RangeOfValues(self._on_screen(low), self._on_screen(high), *texts)

    def _on_screen(self, value: float | None) -> float | None:
        """A value of the file's unit in the unit on screen."""
        if value is None:
            return None
        return conversion(self._field.quantity, self._field.unit, self._held.unit, self._field.factor).apply(value)

    def _number_on_screen(self) -> float | None:
        """The value in the unit on screen; where the model refuses it for its range, as it was typed."""
        if self._line is not None and self._line.number is not None:
            return self._on_screen(self._line.number)
        reading = None if self._inside else read_value(self._held.typed.text)
        if not isinstance(reading, Reading):
            return None
        code = reading.unit or self._held.typed.unit or self._field.unit
        return conversion(self._field.quantity, code, self._held.unit, self._field.factor).apply(reading.number)

    def _place_remarks(self) -> None:
        """One of offer, words and range; only a date stands under the range, since both fit."""
        words = "" if self._offer else self._remark_words()
        only_dated = not self._held.remark and not (self._line is not None and self._line.worked_out)
        ranged = not self._compact and not self._offer and (only_dated or not self._inside)
        span = self._range_on_screen() if ranged else None
        number = self._number_on_screen()
        self.range.show_range(span, number, inside=self._inside)
        self.remark.setText(words)
        self.remark.setVisible(bool(words))
        self._aside.setVisible(span is not None or bool(words))
        self._place(self._aside, under=self._compact)
        self._place(self._offer_place, under=self._compact or self.offer.sizeHint().width() > WIDTH)

    def _place(self, widget: QWidget, *, under: bool) -> None:
        """Beside the frame, or on a line of its own under it."""
        if self._under.get(widget) == under:
            return
        self._under[widget] = under
        place = (1, _FRAME, 1, _MARK - _FRAME + 1) if under else (0, _REMARK, 1, 1)
        self._grid.removeWidget(widget)
        self._grid.addWidget(widget, *place, Qt.AlignmentFlag.AlignVCenter if not under else Qt.AlignmentFlag(0))
        widget.setContentsMargins(RING if under else 0, 0, 0, 2 if under else 0)
        if widget is self._offer_place:
            self.offer.setMinimumWidth(FRAME_WIDTH if under else 0)


def _without_date(text: str) -> str:
    return _DATE_AFTER.sub("", text)
