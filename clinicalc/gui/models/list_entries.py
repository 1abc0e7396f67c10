"""What stands in the list of models, in its order: group headings and rows, all of them or those that words name."""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from PySide6.QtCore import QAbstractListModel, QModelIndex, QObject, QPersistentModelIndex, Qt

from clinicalc.operations.library_view import LibraryView, ModelRow
from clinicalc.operations.library_words import Shelf

ENTRY = Qt.ItemDataRole.UserRole
"""The role of the entry itself, a ModelRow or a GroupHeading."""
_Index = QModelIndex | QPersistentModelIndex
_NOWHERE = QModelIndex()
_SHORTEST_FINGERPRINT = 4


@dataclass(frozen=True, slots=True)
class GroupHeading:
    """The heading of a group; it cannot be chosen."""

    words: str


@dataclass(frozen=True, slots=True)
class _Sought:
    """A row with everything that may be typed to find it."""

    row: ModelRow
    text: str


class ListEntries(QAbstractListModel):
    """The rows of one reading. A filter keeps those in which every word stands; a group without rows has no heading."""

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._all: tuple[_Sought, ...] = ()
        self._entries: list[ModelRow | GroupHeading] = []
        self._words = ""

    @property
    def rows(self) -> tuple[ModelRow, ...]:
        """The models that are listed now, in order."""
        return tuple(entry for entry in self._entries if isinstance(entry, ModelRow))

    @property
    def count(self) -> int:
        """How many models there are, listed or not."""
        return len(self._all)

    def take(self, view: LibraryView) -> None:
        """List another reading."""
        ids = {state.fingerprint: state.id for state in view.opened.models}
        self._all = tuple(_Sought(row, _text_of(row, ids.get(row.fingerprint, ""))) for row in view.rows)
        self._fill()

    def keep(self, words: str) -> bool:
        """List those in which all of these words stand; whether that lists others than before."""
        before = self._entries
        self._words = words
        kept = self._find()
        if kept == before:
            return False
        self._reset(kept)
        return True

    def place_of(self, fingerprint: str) -> QModelIndex:
        """Where a model stands in the list; an index that is not valid where it is not listed."""
        for place, entry in enumerate(self._entries):
            if isinstance(entry, ModelRow) and entry.fingerprint == fingerprint:
                return self.index(place)
        return QModelIndex()

    def rowCount(self, parent: _Index = _NOWHERE) -> int:
        """Headings and models."""
        return 0 if parent.isValid() else len(self._entries)

    def flags(self, index: _Index) -> Qt.ItemFlag:
        """Models can be chosen, headings are passed over."""
        if isinstance(self._entry(index), ModelRow):
            return Qt.ItemFlag.ItemIsEnabled | Qt.ItemFlag.ItemIsSelectable | Qt.ItemFlag.ItemNeverHasChildren
        return Qt.ItemFlag.NoItemFlags

    def data(self, index: _Index, role: int = Qt.ItemDataRole.DisplayRole) -> Any:
        """The entry, its words, or what a screen reader says of it."""
        entry = self._entry(index)
        if role == ENTRY:
            return entry
        if isinstance(entry, GroupHeading):
            return entry.words if role in (Qt.ItemDataRole.DisplayRole, Qt.ItemDataRole.AccessibleTextRole) else None
        if entry is None:
            return None
        if role == Qt.ItemDataRole.DisplayRole:
            return f"{entry.title} {entry.version}".strip()
        if role == Qt.ItemDataRole.AccessibleTextRole:
            version = f", version {entry.version}" if entry.version else ""
            return f"{entry.title}{version}. {_ended(entry.says)} {entry.shelf.value}."
        return None

    def _entry(self, index: _Index) -> ModelRow | GroupHeading | None:
        return self._entries[index.row()] if index.isValid() and index.row() < len(self._entries) else None

    def _fill(self) -> None:
        self._reset(self._find())

    def _reset(self, entries: list[ModelRow | GroupHeading]) -> None:
        self.beginResetModel()
        self._entries = entries
        self.endResetModel()

    def _find(self) -> list[ModelRow | GroupHeading]:
        words = self._words.casefold().split()
        digits = "".join(words)
        is_fingerprint = len(digits) >= _SHORTEST_FINGERPRINT and all(c in "0123456789abcdef" for c in digits)
        kept = [
            one.row
            for one in self._all
            if all(word in one.text for word in words) or (is_fingerprint and one.row.fingerprint.startswith(digits))
        ]
        return _grouped(kept)


def _grouped(rows: Sequence[ModelRow]) -> list[ModelRow | GroupHeading]:
    entries: list[ModelRow | GroupHeading] = []
    for shelf in Shelf:
        inside = [row for row in rows if row.shelf is shelf]
        if inside:
            entries += [GroupHeading(shelf.value), *inside]
    return entries


def _text_of(row: ModelRow, id: str) -> str:
    return f"{row.title} {id} {row.version} {row.says} {row.shelf.value}".casefold()


def _ended(sentence: str) -> str:
    return sentence if sentence.endswith((".", "?", "!")) else f"{sentence}."
