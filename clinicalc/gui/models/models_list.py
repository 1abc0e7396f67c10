"""The list of the models of the library: one is chosen, and stays chosen when the library is read again."""

from PySide6.QtCore import QItemSelectionModel, QModelIndex, Qt, Signal
from PySide6.QtGui import QFocusEvent, QKeyEvent, QMouseEvent
from PySide6.QtWidgets import QAbstractItemView, QFrame, QListView

from clinicalc.gui.models.list_entries import ENTRY, ListEntries
from clinicalc.gui.models.model_row_paint import ModelRowPaint
from clinicalc.operations.library_view import LibraryView, ModelRow

_Move = QAbstractItemView.CursorAction


class ModelsList(QListView):
    """Tells which model is chosen; what is chosen by the program itself is not told."""

    chosen = Signal(str)
    """The fingerprint of the model that somebody chose."""
    entered = Signal()
    """Enter, or a double click: on to the model that is chosen."""

    def __init__(self) -> None:
        super().__init__()
        self.entries = ListEntries(self)
        self._paint = ModelRowPaint()
        self._chosen = ""
        self._is_placing = False
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.viewport().setAutoFillBackground(False)  # the ground of the side it stands on
        self.setModel(self.entries)
        self.setItemDelegate(self._paint)
        self.setAccessibleName("Models of the library")
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setVerticalScrollMode(QAbstractItemView.ScrollMode.ScrollPerPixel)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setResizeMode(QListView.ResizeMode.Adjust)
        self.verticalScrollBar().setSingleStep(self._paint.row_height // 2)
        self.selectionModel().currentChanged.connect(self._tell)

    @property
    def fingerprint(self) -> str:
        """The model that is chosen, listed or not; "" for none."""
        return self._chosen

    def show_view(self, view: LibraryView) -> None:
        """List another reading; the model that is chosen and the place of the scroll bar stay, if they still can."""
        scrolled = self.verticalScrollBar().value()
        self._is_placing = True
        self.entries.take(view)
        self._is_placing = False
        if view.row(self._chosen) is None:
            self._chosen = ""
        self._place()
        self.doItemsLayout()
        self.verticalScrollBar().setValue(scrolled)

    def keep(self, words: str) -> None:
        """List the models in which all of these words stand; the chosen one stays chosen, also where it is left out."""
        self._is_placing = True
        others = self.entries.keep(words)
        self._is_placing = False
        if others:
            self._place()
            index = self.currentIndex()
            if index.isValid():
                self.scrollTo(index)

    def choose(self, fingerprint: str) -> None:
        """Choose a model without telling; "" chooses none."""
        self._chosen = fingerprint
        self._place()
        index = self.currentIndex()
        if index.isValid():
            self.scrollTo(index)

    def first(self) -> str:
        """The fingerprint of the first model that is listed, "" for none."""
        rows = self.entries.rows
        return rows[0].fingerprint if rows else ""

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter goes on to the chosen model; with none chosen an arrow key chooses the first."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            if self.currentIndex().isValid():
                self.entered.emit()
            return
        if event.key() in (Qt.Key.Key_Up, Qt.Key.Key_Down) and not self.currentIndex().isValid():
            first = self.entries.place_of(self.first())
            if first.isValid():
                self.setCurrentIndex(first)
            return
        super().keyPressEvent(event)

    def moveCursor(self, action: _Move, modifiers: Qt.KeyboardModifier) -> QModelIndex:
        """Where a key leads; one that would end at a heading goes on to a model."""
        index = super().moveCursor(action, modifiers)
        if action is _Move.MoveHome or (index.isValid() and not isinstance(index.data(ENTRY), ModelRow)):
            rows = range(0 if action is _Move.MoveHome else index.row(), self.entries.rowCount())
            places = (self.entries.index(row) for row in rows)
            return next((place for place in places if isinstance(place.data(ENTRY), ModelRow)), self.currentIndex())
        return index

    def focusInEvent(self, event: QFocusEvent) -> None:
        """The focus alone chooses nothing; Qt would make the first model the current one."""
        self._is_placing = True
        super().focusInEvent(event)
        self._is_placing = False
        if self.currentIndex().isValid() and not self.selectionModel().hasSelection():
            self._place()

    def mouseDoubleClickEvent(self, event: QMouseEvent) -> None:
        """Like Enter, on a model."""
        super().mouseDoubleClickEvent(event)
        if isinstance(self.indexAt(event.position().toPoint()).data(ENTRY), ModelRow):
            self.entered.emit()

    def _place(self) -> None:
        """Show the chosen model as chosen."""
        self._is_placing = True
        index = self.entries.place_of(self._chosen) if self._chosen else QModelIndex()
        if index.isValid():
            self.selectionModel().setCurrentIndex(index, QItemSelectionModel.SelectionFlag.ClearAndSelect)
        else:
            self.selectionModel().clear()
        self._is_placing = False

    def _tell(self, now: QModelIndex, _: QModelIndex) -> None:
        if self._is_placing:
            return
        entry = now.data(ENTRY)
        if isinstance(entry, ModelRow) and entry.fingerprint != self._chosen:
            self._chosen = entry.fingerprint
            self.chosen.emit(self._chosen)
