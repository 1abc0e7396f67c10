"""The values pane: exclusions, then the groups of the file, then the name for the print."""

from itertools import groupby

from PySide6.QtCore import QCoreApplication, QEvent, Qt, Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QApplication, QVBoxLayout, QWidget

from clinicalc.assessment.changeable import changeable_fields
from clinicalc.assessment.fields import Field, NumberField
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.gui.access_keys import mark_letters
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.label_row import PRINT_LABEL, LabelRow
from clinicalc.gui.labels import Heading
from clinicalc.gui.number_row import NumberRow
from clinicalc.gui.row_making import has_no_letter, make_row, takes_entries
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.tokens import COLUMN_GAP, LABEL_WIDTH, PANE_WIDTH, PANE_WIDTH_COMPACT, RING, SIDE_MARGIN
from clinicalc.gui.values_heading import ValuesHeading
from clinicalc.gui.wording import numbered_findings
from clinicalc.settings import PreferredUnit

_ABOVE_AND_BELOW = 12


class ValuesPane(Scroller):
    """Every field of the model in page order; built anew for another model, filled anew for another patient."""

    rebuilt = Signal()
    stops_moved = Signal()
    """`tab_stops` come in another order now."""
    row_entered = Signal(object)
    """The focus came into this FieldRow or what is stated beside it, or went elsewhere (None)."""
    mark_pressed = Signal(int)
    """The number of the finding whose mark at a field was pressed."""
    left_last = Signal()
    """Enter was pressed in the last field."""

    def __init__(self, state: EntryState) -> None:
        super().__init__()
        self._state = state
        self._model: Model | None = None
        self._compact = False
        self._changes_shown = False
        self._stops: tuple[QWidget, ...] = ()
        self._headings: list[ValuesHeading] = []
        self._ranged: ValuesHeading | None = None
        self._units: tuple[PreferredUnit, ...] = ()
        self.rows: dict[str, FieldRow] = {}
        self.label_row: LabelRow | None = None
        self.setWidgetResizable(True)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        self.setFixedWidth(PANE_WIDTH)
        self._set_body()
        application = QApplication.instance()
        if isinstance(application, QApplication):
            application.focusChanged.connect(self._follow_focus)
        state.model_changed.connect(self._take_model)
        state.assessed.connect(self._show_assessment)
        state.blanked.connect(self._show_nothing)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Every tab stop of the pane, in order."""
        stops = [stop for row in self.rows.values() for stop in row.tab_stops()]
        return (*stops, *([] if self.label_row is None else [self.label_row.edit]))

    def focus_first(self) -> None:
        """Put the cursor where typing begins."""
        first = next((stop for stop in self.tab_stops() if takes_entries(stop)), None)
        if first is not None:
            first.setFocus(Qt.FocusReason.OtherFocusReason)
            self.ensureWidgetVisible(first)

    def focus_field(self, id: str) -> None:
        """Put the cursor in a field and bring it into view; an id that is no field changes nothing."""
        row = self.rows.get(id)
        stops = () if row is None else row.tab_stops()
        stop = next((stop for stop in stops if takes_entries(stop)), None)
        if stop is not None:
            stop.setFocus(Qt.FocusReason.ShortcutFocusReason)
            self.ensureWidgetVisible(stop)

    def prefer_units(self, units: tuple[PreferredUnit, ...]) -> None:
        """The units in which empty fields begin; what is typed keeps its own."""
        if units == self._units or self._model is None:
            self._units = units
            return
        self._units = units
        for field in self._model.fields:
            row = self.rows.get(field.id)
            if isinstance(row, NumberRow):
                row.prefer(self._preferred(field))

    def show_changes(self, shown: bool) -> None:
        """Show the second fields of a comparison, in which values can be changed, or hide them."""
        if shown == self._changes_shown:
            return
        left = next((row for row in self.rows.values() if row.is_changing), None)
        if left is not None and not shown:
            self.focus_field(left.field_id)  # what is hidden takes no keys
        self._changes_shown = shown
        now = self._state.assessment
        for row in self.rows.values():
            row.show_changes(shown)
            row.show_comparison(None if now is None or now.estimate is None else now.estimate.comparison)
        self._fit()

    @property
    def _is_changing(self) -> bool:
        return self._changes_shown and any(row.is_changeable for row in self.rows.values())

    def focus_change(self, id: str) -> None:
        """Put the cursor in the second field of a value and bring it into view; without one nothing changes."""
        row = self.rows.get(id)
        stops = () if row is None or row.change is None else row.change.tab_stops()
        stop = next((stop for stop in stops if takes_entries(stop) and _is_ready(stop, self)), None)
        if stop is not None:
            stop.setFocus(Qt.FocusReason.ShortcutFocusReason)
            self.ensureWidgetVisible(stop)

    def set_compact(self, compact: bool, width: int | None = None) -> None:
        """The narrow form of the pane, for small windows; a width of its own where it stands in one column."""
        self._compact = compact
        self.setFixedWidth(width or (PANE_WIDTH_COMPACT if compact else PANE_WIDTH))
        self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """A scroll bar that came or went takes its width from the margin, and nothing else moves."""
        super().resizeEvent(event)
        self._keep_margin()

    def _keep_margin(self) -> None:
        body = self.widget()
        layout = None if body is None else body.layout()
        if layout is not None:
            bar = self.width() - self.viewport().width()
            layout.setContentsMargins(SIDE_MARGIN, _ABOVE_AND_BELOW, max(0, SIDE_MARGIN - RING - bar), _ABOVE_AND_BELOW)

    def _fit(self) -> None:
        room = self.width() - 2 * SIDE_MARGIN + RING
        for row in self.rows.values():
            row.fit(room, compact=self._compact)
        for heading in self._headings:
            ranges = heading is self._ranged and not self._compact and not self._changes_shown
            changes = heading is self._headings[0] and not self._compact and self._is_changing
            heading.name_columns(ranges=ranges, changes=changes)
        if self.label_row is not None:
            wide = room - LABEL_WIDTH - COLUMN_GAP
            self.label_row.frame.setFixedWidth(wide)
        # at once, from the rows upwards, and not some events later: lines would meanwhile break at the width before
        for part in (*self.rows.values(), self.label_row, self.widget()):
            if part is not None:
                QCoreApplication.sendEvent(part, QEvent(QEvent.Type.LayoutRequest))
        self._tell_stops()

    def _tell_stops(self) -> None:
        stops = self.tab_stops()
        if self._stops not in ((), stops):
            self.stops_moved.emit()
        self._stops = stops

    def _take_model(self) -> None:
        if self._state.model is not self._model:
            self._model = self._state.model
            self._build()
        typed = self._state.entry.typed
        shown = {id: row.fill(typed.get(id)) for id, row in self.rows.items()}
        changes = self._state.entry.changes
        changed = {id: row.fill_change(changes.get(id)) for id, row in self.rows.items()}
        self._state.replace_values(
            {id: value for id, value in shown.items() if value is not None},
            {**changes, **{id: value for id, value in changed.items() if value is not None}},
        )
        if self.label_row is not None:
            self.label_row.fill(self._state.entry.label)
        self._tell_stops()
        self._show_nothing()

    def _set_body(self) -> QVBoxLayout:
        body = QWidget()
        body.setObjectName("ground")
        column = QVBoxLayout(body)
        column.setSpacing(0)
        self.setWidget(body)
        self._keep_margin()
        return column

    def _build(self) -> None:
        self.rows, self._headings, self._ranged, self.label_row, self._stops = {}, [], None, None, ()
        column = self._set_body()
        if self._model is None:
            self.rebuilt.emit()
            return
        fields = self._model.fields
        marked = mark_letters([*("" if has_no_letter(f) else f.label for f in fields), PRINT_LABEL])
        labels = {field.id: mark or field.label.replace("&", "&&") for field, mark in zip(fields, marked, strict=False)}
        changeable = {field.id for field in changeable_fields(self._model)}
        for group, members in groupby(fields, key=lambda field: field.group):
            content = list(members)
            if group:
                ranged = any(isinstance(f, NumberField) and f.derivation != (None, None) for f in content)
                heading = ValuesHeading(group)
                self._headings.append(heading)
                self._ranged = self._ranged or (heading if ranged else None)
                column.addSpacing(6)
                column.addWidget(heading)
            for field in content:
                column.addWidget(self._add_row(field, labels[field.id], changeable=field.id in changeable))
        column.addSpacing(6)
        column.addWidget(Heading("For the print only", inset=RING))
        self.label_row = LabelRow(marked[-1])
        self.label_row.edit.textChanged.connect(self._state.type_label)
        self.label_row.edit.returnPressed.connect(self.left_last)
        column.addWidget(self.label_row)
        column.addStretch(1)
        self._fit()
        self.rebuilt.emit()

    def _preferred(self, field: Field) -> str:
        quantity = field.quantity.id if isinstance(field, NumberField) else ""
        return next((one.unit for one in self._units if one.quantity == quantity), "")

    def _add_row(self, field: Field, label: str, *, changeable: bool) -> FieldRow:
        row = make_row(field, label, changeable=changeable, preferred=self._preferred(field))
        row.typed.connect(self._state.type_value)
        row.changed.connect(self._state.type_change)
        row.both_typed.connect(self._state.type_both)
        row.change_entered.connect(lambda id=field.id: self._go_on_from_change(id))
        row.show_changes(self._changes_shown)
        row.mark.pressed_for.connect(self.mark_pressed)
        row.entered.connect(lambda id=field.id: self._go_on_from(id))
        self.rows[field.id] = row
        return row

    def _go_on_from(self, id: str) -> None:
        assert self.label_row is not None  # built together with the rows
        ids = list(self.rows)
        later = [stop for next_id in ids[ids.index(id) + 1 :] for stop in self.rows[next_id].tab_stops()]
        target = next((stop for stop in later if takes_entries(stop)), self.label_row.edit)
        target.setFocus(Qt.FocusReason.TabFocusReason)
        self.ensureWidgetVisible(target)

    def _go_on_from_change(self, id: str) -> None:
        """To the next second field that can be typed in; from the last one as from the last value."""
        assert self.label_row is not None  # built together with the rows
        ids = list(self.rows)
        changes = (self.rows[next_id].change for next_id in ids[ids.index(id) + 1 :])
        later = [stop for change in changes if change is not None for stop in change.tab_stops()]
        ready = (stop for stop in later if takes_entries(stop) and _is_ready(stop, self))
        target = next(ready, self.label_row.edit)
        target.setFocus(Qt.FocusReason.TabFocusReason)
        self.ensureWidgetVisible(target)

    def _follow_focus(self, _: QWidget | None, now: QWidget | None) -> None:
        if now is None:  # another window, or a menu of this one: what is shown stays
            return
        for row in self.rows.values():
            if row.isAncestorOf(now) or (row.stated is not None and row.stated.isAncestorOf(now)):
                self.row_entered.emit(row)
                return
        if self.window().isAncestorOf(now):
            self.row_entered.emit(None)

    def _show_assessment(self, assessment: Assessment) -> None:
        lines = {line.id: line for line in assessment.values}
        numbered = numbered_findings(assessment)
        for id, row in self.rows.items():
            row.show_remarks(lines.get(id), [finding for finding in assessment.findings if finding.field == id])
            row.mark.show_findings([(number, finding) for number, finding in numbered if finding.field == id])
            row.show_comparison(None if assessment.estimate is None else assessment.estimate.comparison)
            if row.is_changing:
                self.row_entered.emit(row)  # what is said about a change is said in the note
        offering = [row for row in self.rows.values() if isinstance(row, NumberRow) and row.has_offer]
        for row in offering[:1]:
            row.give_offer_its_letter()

    def _show_nothing(self, _: str = "") -> None:
        for row in self.rows.values():
            row.show_remarks(None, ())
            row.mark.show_findings(())
            row.show_comparison(None)


def _is_ready(stop: QWidget, pane: QWidget) -> bool:
    return stop.isEnabled() and stop.isVisibleTo(pane)
