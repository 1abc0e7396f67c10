"""What differs between two versions as a table of three columns, for a view that asks only for what is in sight."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from enum import IntEnum
from typing import Any

from PySide6.QtCore import QAbstractTableModel, QModelIndex, QPersistentModelIndex, Qt

from clinicalc.gui.models.named_lines import with_minus
from clinicalc.library.aspects import Aspect
from clinicalc.library.difference import Change, ChangeKind

NOT_STATED = "not stated"
Index = QModelIndex | QPersistentModelIndex
_NOWHERE = QModelIndex()
_SET_IN = "\u2003"
_EXAMPLE = "worked example "
_NO_NAMES: Mapping[str, str] = {}


class Column(IntEnum):
    """What stands in a column."""

    WHAT = 0
    OLD = 1
    NEW = 2


@dataclass(frozen=True, slots=True)
class Cell:
    """A text and how it is written; `is_marked` rows stand on wash: only one of the versions says anything there.

    `spoken` is what a screen reader says where a text goes on from the row above it, "" for the text.
    """

    text: str
    is_semibold: bool = False
    is_soft: bool = False
    is_marked: bool = False
    spoken: str = ""


Row = tuple[Cell, ...]


def rows_of(
    changes: Sequence[Change], old_name: str, new_name: str, examples: Mapping[str, str] = _NO_NAMES
) -> tuple[Row, ...]:
    """The heading with both names, then the changes, over each kind of statement its name in a row of one cell.

    `examples` are short names of worked examples by their values; what is spoken keeps the values.
    """
    rows: list[Row] = [tuple(Cell(text, is_soft=True) for text in ("", old_name, new_name))]
    aspect, before = None, ""
    for change in changes:
        if change.aspect is not aspect:
            aspect = change.aspect
            before = ""
            rows.append((Cell(aspect.value.capitalize(), is_soft=True),))
        what, before = _shorten(_named(change, examples), before)
        old, new = _spell(change)
        marked = change.kind is not ChangeKind.CHANGED
        rows.append(
            (
                Cell(what, is_marked=marked, spoken=change.what),
                Cell(old or NOT_STATED, is_soft=not change.old_path, is_marked=marked),
                Cell(
                    new or NOT_STATED,
                    is_semibold=bool(change.new_path),
                    is_soft=not change.new_path,
                    is_marked=marked,
                ),
            )
        )
    return tuple(rows)


def _spell(change: Change) -> tuple[str, str]:
    """Both sides with a true minus, unless that is all they differ in."""
    old, new = with_minus(change.old), with_minus(change.new)
    return (change.old, change.new) if old == new else (old, new)


def _named(change: Change, examples: Mapping[str, str]) -> str:
    """What the change is about, a worked example by its short name."""
    if change.aspect is Aspect.EXAMPLES:
        for values, name in examples.items():
            if change.what.startswith(f"{_EXAMPLE}{values}"):
                return f"{_EXAMPLE}{name}{change.what[len(_EXAMPLE) + len(values) :]}"
    return change.what


def _shorten(what: str, before: str) -> tuple[str, str]:
    """The last part of a statement where the row above has the same first ones, set in; and these first ones."""
    first, parting, last = what.rpartition(": ")
    return (f"{_SET_IN}{last}" if first and first == before else what), (first if parting else "")


class ChangeRows(QAbstractTableModel):
    """The rows for Qt's view. A screen reader hears of each cell which version says it."""

    def __init__(self, rows: Sequence[Row]) -> None:
        super().__init__()
        self.rows = tuple(rows)
        self._names = [cell.text for cell in self.rows[0]]

    def rowCount(self, parent: Index = _NOWHERE) -> int:
        """All rows, the heading among them."""
        return 0 if parent.isValid() else len(self.rows)

    def columnCount(self, parent: Index = _NOWHERE) -> int:
        """Three."""
        return 0 if parent.isValid() else len(Column)

    def cell(self, index: Index) -> Cell:
        """What stands in a cell; nothing in those that the name of a kind reaches over."""
        row = self.rows[index.row()]
        return row[index.column()] if index.column() < len(row) else Cell("")

    def data(self, index: Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """The text; for a screen reader with the version's name before it."""
        if role == Qt.ItemDataRole.DisplayRole:
            return self.cell(index).text
        if role == Qt.ItemDataRole.AccessibleTextRole:
            text = self.cell(index).spoken or self.cell(index).text
            is_version = index.column() != Column.WHAT and index.row() > 0 and bool(text)
            return f"{self._names[index.column()]}: {text}" if is_version else text
        return None

    def headerData(self, section: int, orientation: Qt.Orientation, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """The names of the columns."""
        if role == Qt.ItemDataRole.DisplayRole and orientation is Qt.Orientation.Horizontal:
            return self._names[section] or "What"
        return None

    def flags(self, index: Index) -> Qt.ItemFlag:
        """To be gone to and read, never to be changed."""
        return Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable

    def line(self, row: int) -> str:
        """A row as text, its cells parted by tabs."""
        return "\t".join(cell.spoken or cell.text for cell in self.rows[row])
