"""What stands in a table of a study: columns with their headings, and rows of texts, each perhaps with a note."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt

_Index = QModelIndex | QPersistentModelIndex
_NOWHERE = QModelIndex()


@dataclass(frozen=True, slots=True)
class FactColumn:
    """A column: its heading, and whether it holds figures, which stand at the right and never break."""

    heading: str
    is_figures: bool = False


@dataclass(frozen=True, slots=True)
class Fact:
    """A row: a text for each column, and a note over the whole width under them, "" for none.

    `is_marked` sets it off from the others: semibold, on a ground of its own.
    """

    cells: tuple[str, ...]
    note: str = ""
    is_marked: bool = False


class FactRows(QAbstractTableModel):
    """Each fact is one row of the table; its note is a row under it, which cannot be gone to."""

    def __init__(self, columns: Sequence[FactColumn], facts: Sequence[Fact]) -> None:
        super().__init__()
        self.columns = tuple(columns)
        self.facts = tuple(facts)
        self._rows: list[tuple[int, bool]] = []
        for place, fact in enumerate(self.facts):
            self._rows.append((place, False))
            if fact.note:
                self._rows.append((place, True))

    def fact_at(self, row: int) -> int:
        """The place of the fact that a row of the table is of."""
        return self._rows[row][0]

    def row_of(self, fact: int) -> int:
        """The row of the table where a fact stands."""
        return self._rows.index((fact, False))

    def is_note(self, row: int) -> bool:
        """Whether a row of the table is a note."""
        return self._rows[row][1]

    def is_marked(self, row: int) -> bool:
        """Whether a row of the table is set off."""
        return self.facts[self._rows[row][0]].is_marked

    def text(self, row: int, column: int) -> str:
        """What stands in a cell; a note stands in the first."""
        place, is_note = self._rows[row]
        if is_note:
            return self.facts[place].note if column == 0 else ""
        return self.facts[place].cells[column]

    def line(self, row: int) -> str:
        """A fact as text, its cells separated by tabs."""
        return "\t".join(self.facts[self._rows[row][0]].cells)

    def rowCount(self, parent: _Index = _NOWHERE) -> int:
        """Facts and notes."""
        return 0 if parent.isValid() else len(self._rows)

    def columnCount(self, parent: _Index = _NOWHERE) -> int:
        """The columns."""
        return 0 if parent.isValid() else len(self.columns)

    def flags(self, index: _Index) -> Qt.ItemFlag:
        """Facts can be gone to."""
        if self._rows[index.row()][1]:
            return Qt.ItemFlag.NoItemFlags
        return Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemNeverHasChildren

    def data(self, index: _Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """A text; a screen reader hears the heading, and in the first column the note too."""
        if role == Qt.ItemDataRole.DisplayRole:
            return self.text(index.row(), index.column())
        if role == Qt.ItemDataRole.AccessibleTextRole:
            fact = self.facts[self._rows[index.row()][0]]
            said = f"{self.columns[index.column()].heading}: {fact.cells[index.column()] or 'nothing'}"
            return f"{said}. {fact.note}" if fact.note and index.column() == 0 else said
        return None

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """The headings of the columns."""
        if orientation is Qt.Orientation.Horizontal and role == Qt.ItemDataRole.DisplayRole:
            return self.columns[section].heading
        return None
