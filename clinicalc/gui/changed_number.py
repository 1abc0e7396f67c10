"""The second field of a measured value: digits in the unit of the patient's own, read as those are."""

from datetime import date

from PySide6.QtWidgets import QWidget

from clinicalc.assessment.changed_values import is_same_number
from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.gui.changed_place import BESIDE_WIDTH, ChangedPlace
from clinicalc.gui.held_value import HeldValue, choosable_units, digits_on_screen, hold, hold_entry, settle, switch_unit
from clinicalc.gui.value_frame import ValueFrame, show_digits
from clinicalc.units.reading import Reading, read_value
from clinicalc.units.unit import unit as unit_of


class ChangedNumber(ChangedPlace):
    """Holds the changed value; while nothing is typed the patient's own stands there, in soft ink."""

    def __init__(self, field: NumberField) -> None:
        frame = ValueFrame((field.unit,), field.unit, BESIDE_WIDTH)
        super().__init__(field.label, frame, (frame.edit,))
        self._field = field
        self._value_frame, self.edit = frame, frame.edit
        self._own = self._held = hold(field, "", field.unit)
        self._lags = False
        spellings = (unit_of(code).spelling for code in choosable_units(field))
        self._fits_beside = all(frame.has_room_for(spelling) for spelling in spellings)
        self.edit.setAccessibleName(f"{field.label}, with changes")
        self.edit.set_soft(True)
        self.edit.textChanged.connect(self._take_text)
        self.edit.returnPressed.connect(self.entered)
        self.edit.left.connect(self._settle)

    @property
    def typed(self) -> Typed | None:
        """The changed value, None where there is none."""
        return self._held.typed if self._held.typed.text.strip() else None

    def fill(self, typed: Typed | None) -> None:
        """Show a changed value or none, without history and without telling anybody."""
        self._held = hold_entry(self._field, typed)
        self._show_held()

    def stand_beside(self, own: HeldValue) -> None:
        """Follow the patient's own value: its unit, and whether the changed value differs from it.

        A hidden field shows that when it is to be shown (`catch_up`): it would only cost time at every key.
        """
        self._own = own
        self._follow_unit()
        if self.isHidden():
            self._lags = True
        else:
            self._show_held()

    def catch_up(self) -> None:
        """Show what came while the field was hidden."""
        if self._lags:
            self._show_held()

    def words(self) -> str:
        """The patient's own value in the unit on screen, and how typed digits are read where they are converted."""
        own = digits_on_screen(self._own)
        spelling = "" if self._field.is_bare or self._field.unit == "1" else f" {unit_of(self._own.unit).spelling}"
        as_entered = f"As entered {own}{spelling}." if own else "No value is entered yet."
        back = " Escape goes back to it." if own and self.typed is not None else ""
        return f"{f'{self._held.remark}. ' if self._held.remark else ''}{as_entered}{back}"

    def describe(self) -> None:
        """What the note says, without the name."""
        self.edit.setAccessibleDescription(self.note() if self._said or self._open else self.words())

    def give_up(self) -> None:
        """Empty the field; its history stays, so that the keys for it bring the digits back."""
        if self.edit.text():
            self.edit.clear()

    def fits_beside(self) -> bool:
        """Whether every unit in which the value can be shown has room in the narrow frame."""
        return self._fits_beside

    def set_width(self, width: int) -> None:
        """Give the frame another width, in pixels without the ring."""
        self._value_frame.set_width(width)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The line that is typed in."""
        return (self.edit,)

    def _take_text(self, text: str) -> None:
        self._held = hold(self._field, text, self._own.unit)
        self._show_state()
        self.retyped.emit()

    def _settle(self) -> None:
        """A unit typed after the number goes when the field is left, and the digits stand in the patient's own unit."""
        before = self._held
        self._held = settle(self._field, before)
        self._follow_unit()
        if self._held is before:
            return
        self._show_held()
        if self._held.typed != before.typed:
            self.retyped.emit()

    def _follow_unit(self) -> None:
        if self._held.unit == self._own.unit:
            return
        if self.typed is None:
            self._held = hold(self._field, "", self._own.unit)
        else:
            self._held = switch_unit(self._field, self._held, self._own.unit, date.today())

    def _show_held(self) -> None:
        show_digits(self.edit, self._held.text)
        self._show_state()

    def _show_state(self) -> None:
        """Ink, weight and arrow of a change, or soft ink for what is none; the unit, unless the text has its own."""
        self._lags = False
        typed = self.typed
        differs = typed is not None and not is_same_number(self._field, self._own.typed, typed, date.today())
        self.arrow.point(differs)
        self.edit.set_soft(not differs)
        reading = read_value(self._held.text)
        self._value_frame.show_unit(None if isinstance(reading, Reading) and reading.unit else self._own.unit)
        self._value_frame.show_in_its_place(digits_on_screen(self._own))
        self.describe()
