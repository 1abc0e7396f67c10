"""The row of a measured value: number and unit in one frame, a remark or an offer beside it."""

from collections.abc import Sequence
from datetime import date

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import words_for
from clinicalc.assessment.not_measured import says_not_measured
from clinicalc.assessment.result import ValueLine
from clinicalc.coefficients.answers import NOT_MEASURED, NOT_MEASURED_WORDS
from clinicalc.gui.averaged_entry import AveragedEntry
from clinicalc.gui.changed_number import ChangedNumber
from clinicalc.gui.dated_entry import DatedEntry
from clinicalc.gui.held_value import (
    HeldValue,
    choosable_units,
    digits_on_screen,
    first_unit,
    hold,
    hold_entry,
    read_as,
    settle,
    switch_unit,
    without_stated,
)
from clinicalc.gui.labels import make_field_label
from clinicalc.gui.row_places import RowPlaces
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.stated_entry import StatedEntry
from clinicalc.gui.value_frame import ValueFrame, show_digits
from clinicalc.gui.value_side import SideState, ValueSide
from clinicalc.units.reading import Reading, read_value
from clinicalc.units.unit import unit as unit_of


class NumberRow(FieldRow):
    """Label, frame, remark. Holds what was typed and shows it in the chosen unit.

    In the place of the remark stands one of: an offer, the button for what was not measured, the second field of a
    comparison, the range or words.
    """

    def __init__(self, field: NumberField, marked_label: str, *, changeable: bool = False, preferred: str = "") -> None:
        """`preferred`: the unit in which the field begins while it is empty, where it is one of the field's."""
        super().__init__(field.id, field.meaning, changeable=changeable)
        self._field = field
        self._first_unit = first_unit(field, preferred)
        self._held: HeldValue = hold(field, "", self._first_unit)
        self._offer = ""
        self._line: ValueLine | None = None
        self.frame = ValueFrame(choosable_units(field), self._first_unit)
        self.edit = self.frame.edit
        self.edit.setAccessibleName(field.label)
        self.label = make_field_label(marked_label, field.label, self.edit)
        self._side = ValueSide(field, self)
        self.remark, self.range, self.offer = self._side.remark, self._side.range, self._side.offer
        self.not_measured = self._side.not_measured
        self._change: ChangedNumber | None = None
        self.dated = DatedEntry(field.label) if field.valid_days is not None else None
        averaged = AveragedEntry(field.label) if field.within_person is not None else None
        self.stated = StatedEntry(averaged, self.dated) if averaged is not None or self.dated is not None else None
        self._inside, self._compact = True, False
        if field.meaning:
            self.edit.setAccessibleDescription(field.meaning)
        self._side.lie_in(RowPlaces(self, self.label, self.frame, self.mark))
        self._settle_side()
        self._connect()

    @property
    def held(self) -> HeldValue:
        """What the field holds and how it is shown."""
        return self._held

    def fill(self, typed: Typed | None) -> Typed | None:
        """Show a value in its unit, or none in the one that the practice prefers, else in the file's own."""
        if self.stated is not None:
            typed = self.stated.fill(typed)
        open_ = typed is not None and self._says_open(typed.text)
        if typed is None or open_:
            self._held = hold(self._field, "", self._first_unit)
        else:
            self._held = hold_entry(self._field, typed)
        self._show_open(open_)
        self._part_from_stated()
        self._show_held()
        self._keep_beside()
        return self._as_typed()

    def prefer(self, unit: str) -> None:
        """Another unit is preferred, "" for none: an empty field takes it at once, one with a value keeps its own."""
        first = first_unit(self._field, unit)
        if first == self._first_unit:
            return
        self._first_unit = first
        changed = self._change is not None and self._change.typed is not None
        if not self._held.text and not changed:
            self._held = hold(self._field, "", first)
            self._show_unit()
            self._keep_beside()
            self._settle_side()

    def fill_change(self, typed: Typed | None) -> Typed | None:
        """Show a changed value or none, in the unit of the patient's own."""
        if typed is not None:
            self._have_change()
        if self._change is None:
            return typed
        self._change.fill(typed)
        self._keep_beside()
        return self._change.typed

    def show_remarks(self, line: ValueLine | None, findings: Sequence[Finding]) -> None:
        """The offer of a likely unit, or how the value is to be read, or what was worked out, or the range."""
        self.frame.set_stopped(any(f.grade is Grade.STOP and f.code != "missing" for f in findings))
        offers = [code for finding in findings for code in finding.offer if code in choosable_units(self._field)]
        self._offer = offers[0] if offers else ""
        had_focus = self.offer.hasFocus()
        self._side.show_offer(self._offer and self._offer_words())
        if had_focus and not self._offer:
            self.edit.setFocus(Qt.FocusReason.OtherFocusReason)
        self._line = line
        self._inside = all(f.code is not FindingCode.OUTSIDE_DERIVATION for f in findings)
        self._settle_side()

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
        if self.stated is not None:
            self.stated.set_compact(compact)
        self._settle_side()

    def note(self) -> str:
        """What the file means by the field; where ranges do not stand beside values, the range as well."""
        low, high = self._field.derivation
        if not (self._compact or self.changes_shown) or (low is None and high is None):
            return super().note()
        words = words_for(self._field, self._field.derivation, self._held.unit)
        return f"{super().note()} Derivation range {words}.".strip()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Value, unit, what is stated beside it, offer, second field, mark."""
        chooser = () if self.frame.chooser is None else (self.frame.chooser,)
        stated = () if self.stated is None else self.stated.tab_stops()
        open_ = () if self.not_measured is None else (self.not_measured,)
        change = () if self._change is None else self._change.tab_stops()
        return (self.edit, *chooser, *stated, self.offer, *open_, *change, self.mark)

    def _connect(self) -> None:
        self.edit.textChanged.connect(self._take_text)
        self.edit.returnPressed.connect(self.entered)
        self.edit.left.connect(self._settle)
        self.offer.clicked.connect(self._take_offer)
        if self.not_measured is not None:
            self.not_measured.clicked.connect(self._take_open)
        if self.stated is not None:
            self.stated.changed.connect(self._tell)
            self.stated.entered.connect(self.entered)
        if self.frame.chooser is not None:
            self.frame.chooser.setAccessibleName(f"{self._field.label}, unit")
            self.frame.chooser.currentIndexChanged.connect(self._take_unit)
            self.frame.chooser.entered.connect(self.entered)

    def _take_text(self, text: str) -> None:
        self._held = hold(self._field, text, self._held.unit)
        self._show_open(False)
        if self.stated is not None:
            self.stated.let_go_of_what_came()
        self._show_unit()
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

    def _take_open(self, pressed: bool) -> None:
        """The button was pressed: nothing is typed any more, and that is said of the value or taken back."""
        self._held = hold(self._field, "", self._held.unit)
        self._show_open(pressed)
        self._show_held()
        self._tell()

    def _says_open(self, text: str) -> bool:
        return self.not_measured is not None and says_not_measured(self._field, text)

    def _show_open(self, open_: bool) -> None:
        """The frame reads "not measured" for as long as that is said of the value."""
        if self.not_measured is None:
            return
        self.not_measured.show_pressed(open_)
        self.frame.show_in_its_place(NOT_MEASURED_WORDS if open_ else "")
        self.edit.setAccessibleDescription(NOT_MEASURED_WORDS if open_ else self._field.meaning)

    def _settle(self) -> None:
        before = self._held
        if self._says_open(before.typed.text):
            self._take_open(True)
            return
        self._held = settle(self._field, self._held)
        self._part_from_stated()
        if self._held is not before:
            self._show_held()
            self._tell()

    def _part_from_stated(self) -> None:
        """A mean and a date typed after the number go to their own fields, where there are such."""
        reading = read_value(self._held.typed.text)
        if self.stated is None or not isinstance(reading, Reading):
            return
        mean, day = self.stated.take_over(reading)
        if mean or day:
            self._held = without_stated(self._held, mean=mean, day=day)

    def _offer_words(self) -> str:
        digits = digits_on_screen(read_as(self._field, self._held, self._offer))
        return f"{digits} {unit_of(self._offer).spelling}"

    def _tell(self) -> None:
        """The value was typed or read anew, and a change that stands in another unit now may be read anew with it."""
        before = None if self._change is None else self._change.typed
        self._keep_beside()
        after = None if self._change is None else self._change.typed
        if after != before:
            self.both_typed.emit(self.field_id, self._as_typed(), after)
        else:
            self.typed.emit(self.field_id, self._as_typed())

    def _make_change(self) -> ChangedNumber:
        self._change = self._side.make_change()
        self._change.retyped.connect(self._tell_change)
        self._change.entered.connect(self.change_entered)
        self._keep_beside()
        self._settle_side()
        return self._change

    def _tell_change(self) -> None:
        self.changed.emit(self.field_id, None if self._change is None else self._change.typed)

    def _keep_beside(self) -> None:
        if self._change is not None:
            self._change.stand_beside(self._held)
            self._change.show_open(self.not_measured is not None and self.not_measured.isChecked())

    def _as_typed(self) -> Typed | None:
        """The value with what is stated beside it."""
        if self.not_measured is not None and self.not_measured.isChecked():
            return Typed(NOT_MEASURED)
        typed = self._held.typed
        if not typed.text.strip():
            return None
        return typed if self.stated is None else self.stated.with_stated(typed)

    def _show_held(self) -> None:
        show_digits(self.edit, self._held.text)
        self._show_unit()

    def _show_unit(self) -> None:
        if self.frame.chooser is not None:
            self.frame.chooser.show_place(self.frame.chooser.findData(self._held.unit))
        self.frame.fit_text()

    def _settle_side(self) -> None:
        self._side.settle(
            SideState(self._held, self._line, bool(self._offer), self._inside, self._compact, self.changes_shown)
        )
