"""The row of a measured value: number and unit in one frame, a remark or an offer beside it."""

from collections.abc import Sequence
from datetime import date

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding, Grade
from clinicalc.assessment.numerals import plain_range
from clinicalc.assessment.result import ValueLine
from clinicalc.gui.access_keys import show_ampersands
from clinicalc.gui.held_value import HeldValue, choosable_units, hold, hold_entry, read_as, settle, switch_unit
from clinicalc.gui.labels import make_button, make_field_label, make_label
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.tokens import COLUMN_GAP, FRAME_WIDTH, RING
from clinicalc.gui.typeface import CAPTION, UNIT
from clinicalc.gui.value_frame import ValueFrame
from clinicalc.units.conversion import conversion
from clinicalc.units.unit import unit as unit_of


class NumberRow(FieldRow):
    """Label, frame, remark. Holds what was typed and shows it in the chosen unit."""

    def __init__(self, field: NumberField, marked_label: str) -> None:
        super().__init__(field.id)
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
        self._offer_place = QWidget()
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
        self._held = hold_entry(self._field, typed)
        self._show_held()
        return self._held.typed if self._held.typed.text.strip() else None

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
        self._show_remark()

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
        for widget in (self.remark, self._offer_place):
            widget.setContentsMargins(RING if compact else 0, 0, 0, 0)
        self.offer.setMinimumWidth(FRAME_WIDTH if compact else 0)
        for widget in (self.remark, self._offer_place):
            self._grid.removeWidget(widget)
        place = (1, 1, 1, 2) if compact else (0, 2, 1, 1)
        self._grid.addWidget(self.remark, *place)
        self._grid.addWidget(self._offer_place, *place, Qt.AlignmentFlag.AlignLeft)
        self._show_remark()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Value, unit, offer."""
        chooser = () if self.frame.chooser is None else (self.frame.chooser,)
        return (self.edit, *chooser, self.offer)

    def _lay_out(self) -> None:
        self._compact = False
        beside = QHBoxLayout(self._offer_place)
        beside.setContentsMargins(0, 0, 0, 0)
        beside.addWidget(self.offer)
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(COLUMN_GAP)
        self._grid.setVerticalSpacing(2)
        self._grid.setColumnStretch(2, 1)
        self._grid.addWidget(self.label, 0, 0)
        self._grid.addWidget(self.frame, 0, 1)
        self._grid.addWidget(self.remark, 0, 2)
        self._grid.addWidget(self._offer_place, 0, 2, Qt.AlignmentFlag.AlignLeft)

    def _connect(self) -> None:
        self.edit.textChanged.connect(self._take_text)
        self.edit.returnPressed.connect(self.entered)
        self.edit.left.connect(self._settle)
        self.offer.clicked.connect(self._take_offer)
        if self.frame.chooser is not None:
            self.frame.chooser.setAccessibleName(f"{self._field.label}, unit")
            self.frame.chooser.currentIndexChanged.connect(self._take_unit)
            self.frame.chooser.entered.connect(self.entered)

    def _take_text(self, text: str) -> None:
        self._held = hold(self._field, text, self._held.unit)
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

    def _settle(self) -> None:
        settled = settle(self._field, self._held)
        if settled is not self._held:
            self._held = settled
            self._show_held()
            self._tell()

    def _tell(self) -> None:
        typed = self._held.typed
        self.typed.emit(self.field_id, typed if typed.text.strip() else None)

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

    def _remark_words(self, line: ValueLine | None) -> str:
        if self._held.remark:
            return self._held.remark
        if line is not None and line.worked_out:
            return f"{line.used} worked out"
        if line is not None and line.dated is not None:
            return f"of {line.dated.isoformat()}"
        return "" if self._compact else self._range_words()

    def _range_words(self) -> str:
        low, high = self._field.derivation
        if low is None and high is None:
            return ""
        back = conversion(self._field.quantity, self._field.unit, self._held.unit, self._field.factor)
        return plain_range(None if low is None else back.apply(low), None if high is None else back.apply(high))

    def _show_remark(self) -> None:
        self.remark.setText("" if self._offer else self._remark_words(self._line))
        self.remark.setVisible(not self._offer and bool(self.remark.text() or not self._compact))
