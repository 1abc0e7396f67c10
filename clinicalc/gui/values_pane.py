"""The values pane: exclusions, then the groups of the file, then the name for the print."""

from itertools import groupby

from PySide6.QtCore import QCoreApplication, QEvent, Qt, Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QApplication, QHBoxLayout, QLineEdit, QScrollArea, QSizePolicy, QVBoxLayout, QWidget

from clinicalc.assessment.fields import Field, NumberField
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment
from clinicalc.gui.access_keys import mark_letters
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.index_mark import IndexMark
from clinicalc.gui.labels import Heading, make_field_label
from clinicalc.gui.number_row import NumberRow
from clinicalc.gui.question_row import QuestionRow
from clinicalc.gui.rows import FieldRow
from clinicalc.gui.tokens import COLUMN_GAP, LABEL_WIDTH, PANE_WIDTH, PANE_WIDTH_COMPACT, RING, SIDE_MARGIN
from clinicalc.gui.typeface import BASE, face
from clinicalc.gui.wording import numbered_findings
from clinicalc.gui.worked_out_row import WorkedOutRow

PRINT_LABEL = "Name or number"
_LONGEST_NAME = 120
"""What a print takes, as `report.document` states it: reading it from there would slow every start."""
_ABOVE_AND_BELOW = 12


class LabelRow(QWidget):
    """The name or number that stands on the print and nowhere else."""

    def __init__(self, marked_label: str) -> None:
        super().__init__()
        self.frame = FieldFrame()
        self.edit = QLineEdit()
        self.edit.setFont(face(BASE))
        self.edit.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.edit.setMaxLength(_LONGEST_NAME)
        self.edit.setAccessibleName(PRINT_LABEL)
        inside = QHBoxLayout(self.frame)
        inside.setContentsMargins(RING + 7, RING + 1, RING + 7, RING + 1)
        inside.addWidget(self.edit)
        self.frame.watch(self.edit)
        self.label = make_field_label(marked_label, PRINT_LABEL, self.edit)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(COLUMN_GAP)
        row.addWidget(self.label)
        row.addWidget(self.frame)
        row.addStretch(1)

    def fill(self, label: str) -> None:
        """Show a label without history and without telling anybody."""
        blocked = self.edit.blockSignals(True)
        self.edit.setText(label)
        self.edit.blockSignals(blocked)


class ValuesPane(QScrollArea):
    """Every field of the model in page order; built anew for another model, filled anew for another patient."""

    rebuilt = Signal()
    row_entered = Signal(object)
    """The focus came into this FieldRow or its date, or went elsewhere (None)."""
    mark_pressed = Signal(int)
    """The number of the finding whose mark at a field was pressed."""
    left_last = Signal()
    """Enter was pressed in the last field."""

    def __init__(self, state: EntryState) -> None:
        super().__init__()
        self._state = state
        self._model: Model | None = None
        self._compact = False
        self._age_heading: list[Heading] = []
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
        first = next((stop for stop in self.tab_stops() if _takes_entries(stop)), None)
        if first is not None:
            first.setFocus(Qt.FocusReason.OtherFocusReason)
            self.ensureWidgetVisible(first)

    def focus_field(self, id: str) -> None:
        """Put the cursor in a field and bring it into view; an id that is no field changes nothing."""
        row = self.rows.get(id)
        stops = () if row is None else row.tab_stops()
        stop = next((stop for stop in stops if _takes_entries(stop)), None)
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
        for heading in self._age_heading:
            heading.show_caption(not self._compact)
        if self.label_row is not None:
            wide = room - LABEL_WIDTH - COLUMN_GAP
            self.label_row.frame.setFixedWidth(wide)
        # at once, from the rows upwards, and not some events later: lines would meanwhile break at the width before
        for part in (*self.rows.values(), self.label_row, self.widget()):
            if part is not None:
                QCoreApplication.sendEvent(part, QEvent(QEvent.Type.LayoutRequest))

    def _take_model(self) -> None:
        if self._state.model is not self._model:
            self._model = self._state.model
            self._build()
        typed = self._state.entry.typed
        shown = {id: row.fill(typed.get(id)) for id, row in self.rows.items()}
        self._state.replace_values({id: value for id, value in shown.items() if value is not None})
        if self.label_row is not None:
            self.label_row.fill(self._state.entry.label)
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
        self.rows, self._age_heading, self.label_row = {}, [], None
        column = self._set_body()
        if self._model is None:
            return
        fields = self._model.fields
        marked = mark_letters([*("" if _has_no_letter(f) else f.label for f in fields), PRINT_LABEL])
        labels = {field.id: mark or field.label.replace("&", "&&") for field, mark in zip(fields, marked, strict=False)}
        for group, members in groupby(fields, key=lambda field: field.group):
            content = list(members)
            if group:
                ranged = any(isinstance(f, NumberField) and f.derivation != (None, None) for f in content)
                heading = Heading(group, "derivation range" if ranged and not self._age_heading else "", inset=RING)
                self._age_heading += [heading] if ranged else []
                column.addSpacing(6)
                column.addWidget(heading)
            for field in content:
                column.addWidget(self._add_row(field, labels[field.id]))
        column.addSpacing(6)
        column.addWidget(Heading("For the print only", inset=RING))
        self.label_row = LabelRow(marked[-1])
        self.label_row.edit.textChanged.connect(self._state.type_label)
        self.label_row.edit.returnPressed.connect(self.left_last)
        column.addWidget(self.label_row)
        column.addStretch(1)
        self._fit()
        self.rebuilt.emit()

    def _add_row(self, field: Field, label: str) -> FieldRow:
        row = _make_row(field, label)
        row.typed.connect(self._state.type_value)
        row.mark.pressed_for.connect(self.mark_pressed)
        row.entered.connect(lambda id=field.id: self._go_on_from(id))
        self.rows[field.id] = row
        return row

    def _go_on_from(self, id: str) -> None:
        assert self.label_row is not None  # built together with the rows
        ids = list(self.rows)
        later = [stop for next_id in ids[ids.index(id) + 1 :] for stop in self.rows[next_id].tab_stops()]
        target = next((stop for stop in later if _takes_entries(stop)), self.label_row.edit)
        target.setFocus(Qt.FocusReason.TabFocusReason)
        self.ensureWidgetVisible(target)

    def _follow_focus(self, _: QWidget | None, now: QWidget | None) -> None:
        if now is None:  # another window, or a menu of this one: what is shown stays
            return
        for row in self.rows.values():
            if row.isAncestorOf(now) or (row.dated is not None and row.dated.isAncestorOf(now)):
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
        offering = [row for row in self.rows.values() if isinstance(row, NumberRow) and row.has_offer]
        for row in offering[:1]:
            row.give_offer_its_letter()

    def _show_nothing(self, _: str = "") -> None:
        for row in self.rows.values():
            row.show_remarks(None, ())
            row.mark.show_findings(())


def _make_row(field: Field, label: str) -> FieldRow:
    if not isinstance(field, NumberField):
        return QuestionRow(field, label)
    return NumberRow(field, label) if field.may_be_typed else WorkedOutRow(field)


def _has_no_letter(field: Field) -> bool:
    """Exclusions stand first and are whole sentences; what is never typed is never gone to."""
    return not field.may_be_typed if isinstance(field, NumberField) else bool(field.excludes)


def _is_tab_stop(widget: QWidget) -> bool:
    return bool(widget.focusPolicy() & Qt.FocusPolicy.TabFocus)


def _takes_entries(widget: QWidget) -> bool:
    return _is_tab_stop(widget) and not isinstance(widget, IndexMark)
