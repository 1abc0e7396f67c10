"""The left side of the Models page: what the library is, what is wrong with it, the filter, the list, what is done."""

from PySide6.QtCore import QEvent, QObject, Qt, Signal
from PySide6.QtGui import QKeyEvent, QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.form_fields import TextField
from clinicalc.gui.labels import make_label, make_line
from clinicalc.gui.models.models_list import ModelsList
from clinicalc.gui.progress_strip import ProgressStrip
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.tokens import RING, SIDE_MARGIN
from clinicalc.gui.typeface import TITLE, UNIT
from clinicalc.gui.window_words import replace_commands, sentence_of
from clinicalc.operations.library_view import LibraryView

_FAULTS = 150
"""The most height that sentences over the list take; more of them scroll."""
_LONGEST = 200


class LibrarySide(QWidget):
    """Shows one reading of the library, or a sentence in its place."""

    left_filter = Signal()
    """Enter or the down key in the filter: on to the list."""

    def __init__(self, errands: Errands) -> None:
        super().__init__()
        self.setObjectName("ground")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.title = make_line("Model library", TITLE, semibold=True)
        self.count = make_line("", UNIT, soft=True)
        self.place = make_label("", UNIT, soft=True)
        self.filter = TextField(400 - 2 * SIDE_MARGIN, _LONGEST)
        self.list = ModelsList()
        self.note = make_label("")
        self.note.setAlignment(Qt.AlignmentFlag.AlignTop)
        self.strip = ProgressStrip(errands)
        self._faults = Scroller()
        self._sentences = QVBoxLayout()
        self._stack = QStackedWidget()
        self._lay_out()
        edit = self.filter.edit
        edit.setAccessibleName("Filter")
        edit.setAccessibleDescription("Key: Ctrl+F. Words of title, id, version or state, or how a fingerprint begins.")
        edit.setPlaceholderText("Filter (Ctrl+F)")
        edit.textChanged.connect(self._filter)
        edit.installEventFilter(self)

    def show_view(self, view: LibraryView) -> None:
        """List the models of a reading under what is to be said of all of them."""
        self._name_place(view.place)
        said = (view.caution, *view.faults) if view.caution else view.faults
        self._say_of_all(tuple(replace_commands(sentence) for sentence in said))
        self.list.show_view(view)
        if view.rows:
            self._stack.setCurrentWidget(self.list)
        else:
            self._show_note("The library holds no file yet.")
        self.filter.setVisible(bool(view.rows))
        self._count()

    def show_error(self, error: ClinicalcError) -> None:
        """Why there is nothing to list."""
        self.show_sentence(sentence_of(error))

    def show_sentence(self, sentence: str) -> None:
        """A sentence in place of the list."""
        self._name_place("")
        self._say_of_all(())
        self.count.setText("")
        self.filter.hide()
        self._show_note(sentence)

    def set_free(self, free: bool) -> None:
        """Whether another model can be chosen: not beside an open form, which is about the one that is."""
        self.list.setEnabled(free)
        self.filter.setEnabled(free)

    def focus_list(self) -> None:
        """The focus to the list, or to the filter where the list is empty because of it; nowhere without a library."""
        there = self.list if self.list.entries.rows else self.filter.edit
        if there is self.list or self.filter.isVisibleTo(self):
            there.setFocus(Qt.FocusReason.ShortcutFocusReason)

    def focus_filter(self) -> None:
        """The focus to the filter, with what is typed there ready to be replaced."""
        if self.filter.isVisible():
            self.filter.edit.setFocus(Qt.FocusReason.ShortcutFocusReason)
            self.filter.edit.selectAll()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """In the filter Escape empties it, Enter and the down key go on to the list."""
        if isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress:
            if event.key() == Qt.Key.Key_Escape and self.filter.edit.text():
                self.filter.edit.clear()
                return True
            if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Down) and self.list.entries.rows:
                self.focus_list()
                self.left_filter.emit()
                return True
        return super().eventFilter(watched, event)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The filter goes as far as the margins."""
        super().resizeEvent(event)
        self.filter.setFixedWidth(self.width() - 2 * SIDE_MARGIN + 2 * RING + 4)

    def _lay_out(self) -> None:
        head = QHBoxLayout()
        head.addWidget(self.title, 1)
        head.addWidget(self.count, 0, Qt.AlignmentFlag.AlignBottom)
        top = QVBoxLayout()
        top.setContentsMargins(SIDE_MARGIN, 16, SIDE_MARGIN - 4, 0)
        top.setSpacing(2)
        top.addLayout(head)
        top.addWidget(self.place)
        row = QHBoxLayout()
        row.setContentsMargins(SIDE_MARGIN - RING, 8, 0, 0)
        row.addWidget(self.filter)
        row.addStretch(1)
        inside = QWidget()
        inside.setObjectName("ground")
        self._sentences = QVBoxLayout(inside)
        self._sentences.setContentsMargins(SIDE_MARGIN, 10, SIDE_MARGIN - 4, 0)
        self._sentences.setSpacing(6)
        self._faults.setWidgetResizable(True)
        self._faults.setWidget(inside)
        self._faults.setAccessibleName("What is to be said of the whole library")
        self._faults.hide()
        note = QWidget()
        around = QVBoxLayout(note)
        around.setContentsMargins(SIDE_MARGIN, 12, SIDE_MARGIN - 4, 0)
        around.addWidget(self.note)
        around.addStretch(1)
        self._stack.addWidget(self.list)
        self._stack.addWidget(note)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(top)
        column.addWidget(self._faults)
        column.addLayout(row)
        column.addSpacing(4)
        column.addWidget(self._stack, 1)
        column.addWidget(self.strip)

    def _show_note(self, sentence: str) -> None:
        self.note.setText(sentence)
        self._stack.setCurrentIndex(1)

    def _say_of_all(self, sentences: tuple[str, ...]) -> None:
        while (item := self._sentences.takeAt(0)) is not None:
            widget = item.widget()
            if widget is not None:
                widget.hide()
                widget.deleteLater()
        for sentence in sentences:
            self._sentences.addWidget(make_label(sentence, UNIT))
        self._faults.setVisible(bool(sentences))
        if sentences:
            wide = max(200, self.width() - 2 * SIDE_MARGIN)
            needed = self._sentences.totalHeightForWidth(wide) + 4
            self._faults.setFixedHeight(min(_FAULTS, needed))
            self._faults.setFocusPolicy(Qt.FocusPolicy.StrongFocus if needed > _FAULTS else Qt.FocusPolicy.NoFocus)

    def _filter(self, words: str) -> None:
        self.list.keep(words)
        self._count()
        if self.list.entries.count and not self.list.entries.rows:
            self._show_note("No model has all of these words. Escape in the filter shows all again.")
        else:
            self._stack.setCurrentWidget(self.list)

    def _count(self) -> None:
        entries = self.list.entries
        listed, all_of_them = len(entries.rows), entries.count
        noun = "file" if all_of_them == 1 else "files"
        part = "" if listed == all_of_them else f"{listed} of "
        self.count.setText(f"{part}{all_of_them} {noun}")

    def _name_place(self, place: str) -> None:
        # it may be broken after each folder
        self.place.setText(place.replace("/", "/\u200b").replace("\\", "\\\u200b"))
        self.place.setAccessibleName(f"The library lies in {place}" if place else "")
        self.place.setVisible(bool(place))
