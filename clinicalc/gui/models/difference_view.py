"""How a version differs from another one: what changed, what is the same, what that does to the numbers."""

from collections.abc import Sequence

from PySide6.QtCore import Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.gui.chooser import FramedChooser
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import Heading, make_button, make_field_label, make_label
from clinicalc.gui.models.card_words import version_words
from clinicalc.gui.models.change_rows import ChangeRows, rows_of
from clinicalc.gui.models.change_table import ChangeTable
from clinicalc.gui.models.effect_view import EffectView
from clinicalc.gui.typeface import UNIT
from clinicalc.operations.effect_on_ruler import names_by_values
from clinicalc.operations.library_view import ModelRow
from clinicalc.operations.version_difference import VersionDifference

CHOOSE = "Other version"
COMPARE, SAVE = "Compare", "Save PDF…"
WAITING = "The two versions are being compared."
ALIKE = "Every statement of the two is the same."
_CHOOSER, _LEAST_CHOOSER = 260, 110


class DifferenceView(QWidget):
    """Chooser of the other version, and what was found; a difference is asked for, and shown when it comes."""

    asked = Signal(str)
    """The difference from the version with this fingerprint is wanted."""
    stops_changed = Signal()
    """`tab_stops` may be others now."""
    row_reached = Signal(int, int)
    """Top and height of a row of the table that was gone to, from the top of this view."""

    print_asked = Signal()
    """What is shown is to be saved as PDF."""

    def __init__(self, others: Sequence[ModelRow], *, prints: bool = False) -> None:
        super().__init__()
        self._others = tuple(others)
        self.difference: VersionDifference | None = None
        self.heading = Heading("")
        self.chooser = FramedChooser(_CHOOSER)
        self.chooser.chooser.setAccessibleName(CHOOSE)
        self.button = make_button(COMPARE, pixels=UNIT)
        self.save = make_button(SAVE, pixels=UNIT)
        self.save.hide()
        self._prints = prints
        self.state = make_label("", UNIT, soft=True)
        self.table: ChangeTable | None = None
        self.effect: EffectView | None = None
        self._found: QWidget | None = None
        self._lay_out()
        self.chooser.chooser.offer([(version_words(row, self._others), row.fingerprint) for row in self._others], 0)
        self.chooser.chooser.activated.connect(lambda _: self.ask())
        self.button.clicked.connect(self.ask)
        self.save.clicked.connect(self.print_asked)
        self._name_heading()

    @property
    def other(self) -> ModelRow | None:
        """The version that is chosen."""
        place = self.chooser.chooser.currentIndex()
        return self._others[place] if 0 <= place < len(self._others) else None

    def ask(self) -> None:
        """Ask for the difference from the version that is chosen, unless it is there already."""
        other = self.other
        if other is None or (self.difference is not None and self.difference.old.fingerprint == other.fingerprint):
            return
        self._clear()
        self._name_heading()
        self._say(WAITING)
        self.asked.emit(other.fingerprint)

    def show_difference(self, difference: VersionDifference) -> None:
        """Show what was found; one from another version than the chosen one is let go: a later one is under way."""
        other = self.other
        if other is None or other.fingerprint != difference.old.fingerprint:
            return
        self._clear()
        self.difference = difference
        self._name_heading()
        self._say("")
        self._show_found(difference)
        self.save.setVisible(self._prints)
        self.stops_changed.emit()

    def show_fault(self, sentence: str) -> None:
        """Say why there is no difference; it can be asked for again."""
        self._clear()
        self._say(sentence)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Chooser and button, then what is in the difference."""
        found = (() if self.table is None else (self.table,), () if self.effect is None else self.effect.tab_stops())
        return (self.chooser.chooser, self.button, self.save, *(stop for stops in found for stop in stops))

    def _lay_out(self) -> None:
        row = QHBoxLayout()
        row.setSpacing(10)
        row.addWidget(make_field_label(CHOOSE, CHOOSE, self.chooser.chooser))
        self.chooser.setMinimumWidth(_LEAST_CHOOSER)
        row.addWidget(self.chooser, 1)
        row.addWidget(self.button)
        row.addWidget(self.save)
        row.addStretch(0)
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(4)
        self._column.addWidget(self.heading)
        self._column.addLayout(row)
        self._column.addWidget(self.state)
        self.state.hide()

    def _name_heading(self) -> None:
        other = self.other
        self.heading.label.setText("" if other is None else f"Difference from {version_words(other, self._others)}")
        self.button.setEnabled(self.difference is None)

    def _say(self, sentence: str) -> None:
        self.state.setText(sentence)
        self.state.setVisible(bool(sentence))
        if sentence:
            QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, sentence))

    def _clear(self) -> None:
        self.difference = self.table = self.effect = None
        self.save.hide()
        if self._found is not None:
            self._column.removeWidget(self._found)
            self._found.hide()
            self._found.deleteLater()
            self._found = None
            self.stops_changed.emit()
        self.button.setEnabled(True)

    def _show_found(self, found: VersionDifference) -> None:
        self._found = Block()
        column = QVBoxLayout(self._found)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        old, new = found.old.version, found.new_version
        if old == new:
            old, new = f"{old} ({found.old.fingerprint[:4]})", f"{new} ({found.new_fingerprint[:4]})"
        if found.difference.changes:
            rows = rows_of(found.difference.changes, old, new, names_by_values(found.effect))
            self.table = ChangeTable(ChangeRows(rows), self.heading.label.text())
            self.table.row_reached.connect(self._tell_row)
            column.addWidget(self.table)
        else:
            column.addWidget(make_label(ALIKE))
        column.addWidget(make_label(found.difference.say_same(), UNIT, soft=True))
        column.addSpacing(4)
        self.effect = EffectView(found.effect, old, new, _labels(found))
        column.addWidget(self.effect)
        # at their height before they are first arranged, or they would be painted once in each other's place
        if self.table is not None:
            self.table.fit(self.width())
        self.effect.figure.fit(self.width())
        self._column.addWidget(self._found)
        self._found.show()  # now: Qt would do it by an event

    def _tell_row(self, top: int, height: int) -> None:
        if self.table is not None:
            at = self.table.mapTo(self, self.table.rect().topLeft())
            self.row_reached.emit(at.y() + top, height)


def _labels(found: VersionDifference) -> dict[str, str]:
    """What the values are called; standard patients are never excluded, so that goes without saying."""
    contents = (found.old_model.content, found.new_model.content)
    excluded = {one.id: "" for content in contents for one in content.exclusions}
    asked = {one.id: one.label for content in contents for one in content.predictors}
    return excluded | {id: _within(label) for id, label in asked.items()}


def _within(label: str) -> str:
    """A label within a sentence: without its capital, unless it begins with an abbreviation."""
    return f"{label[:1].lower()}{label[1:]}" if label[1:2].islower() else label
