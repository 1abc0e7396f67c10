"""The frame of a measured value: the line a number is typed in, and its unit."""

from PySide6.QtCore import QEvent, QObject, QPoint, QRect, QRectF, Qt, Signal
from PySide6.QtGui import QColor, QFocusEvent, QFontMetrics, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QHBoxLayout, QLineEdit, QSizePolicy

from clinicalc.gui import theme
from clinicalc.gui.chooser import Chooser
from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import FRAME_WIDTH, RING, VALUE_WIDTH
from clinicalc.gui.typeface import UNIT, VALUE, face
from clinicalc.units.unit import unit as unit_of

CUT = "…"
"""Stands where characters of a text have no room: what is seen of a number is never taken for the whole of it."""
_SMALLEST = 12
"""The smallest size of a long number, in pixels."""
_ROUND_TEXT = 6
"""What a line needs beside its text: its own edges and the cursor."""
_ROUND_UNIT = 34
"""What a chooser needs beside the words of its unit: its edge and its chevron."""
_EDGES = 3
"""What the edges of a frame take of its width."""
_UNIT = 108
"""The usual room of a unit without a choice, in a frame of the usual width."""
_LEAST_NUMBER = 42
_GAP, _GAP_WITHOUT_CHOICE = 4, 10


def show_digits(edit: QLineEdit, text: str) -> None:
    """Put `text` in a field without telling anybody, and without an undo history that would lead back."""
    if edit.text() != text or edit.isUndoAvailable() or edit.isRedoAvailable():
        blocked = edit.blockSignals(True)
        edit.setText(text)  # forgets the undo history too
        edit.blockSignals(blocked)
    if not edit.hasFocus():
        edit.setCursorPosition(0)


class ValueEdit(QLineEdit):
    """The line a number is typed in."""

    left = Signal()

    def __init__(self) -> None:
        super().__init__()
        self.setFont(face(VALUE, semibold=True))
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)  # the whole frame takes clicks
        self.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.setInputMethodHints(Qt.InputMethodHint.ImhNoPredictiveText | Qt.InputMethodHint.ImhPreferNumbers)
        self.is_soft = False

    def set_soft(self, soft: bool) -> None:
        """Soft ink and the regular weight, for a number that says nothing of its own."""
        if soft != self.is_soft:
            self.is_soft = soft
            self.setProperty("ink", "soft" if soft else "")
            if self.testAttribute(Qt.WidgetAttribute.WA_WState_Polished):
                self.style().polish(self)  # style rules go by the property; they bring back the font before
            self.setFont(face(self.font().pixelSize(), semibold=not soft))

    @property
    def is_cut(self) -> bool:
        """Whether the text has more characters than there is room for."""
        return self.fontMetrics().horizontalAdvance(self.text()) + _ROUND_TEXT > self.width()

    @property
    def words_on_screen(self) -> str:
        """What is to be read once the field is left: the text, or its beginning with the sign that it is cut."""
        if not self.is_cut:
            return self.text()
        room = self.width() - _ROUND_TEXT
        return self.fontMetrics().elidedText(self.text(), Qt.TextElideMode.ElideRight, room)

    def paintEvent(self, event: QPaintEvent) -> None:
        """A text that does not fit shows its beginning once it is left, and while it is typed where it is cut."""
        if not self.is_cut:
            super().paintEvent(event)
            return
        if self.hasFocus():
            super().paintEvent(event)
            if self.cursorPositionAt(QPoint(_ROUND_TEXT, self.height() // 2)) <= 1:
                return
        painter = QPainter(self)
        painter.setFont(self.font())
        painter.setPen(QColor(theme.tokens().soft if self.is_soft else theme.tokens().ink))
        alignment = Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine
        if self.hasFocus():
            sign = QRect(0, 0, self.fontMetrics().horizontalAdvance(CUT) + 2, self.height())
            painter.fillRect(sign, QColor(theme.tokens().field))
            painter.drawText(sign, alignment, CUT)
        else:
            painter.drawText(self.rect().adjusted(2, 0, -2, 0), alignment, self.words_on_screen)
        painter.end()

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Tell that the field was left, for whatever reason but a menu."""
        super().focusOutEvent(event)
        if event.reason() != Qt.FocusReason.PopupFocusReason:
            self.left.emit()


class ValueFrame(FieldFrame):
    """Number, thin line, unit: a number never stands outside its unit's frame."""

    def __init__(self, units: tuple[str, ...], unit: str, width: int = FRAME_WIDTH) -> None:
        super().__init__(width)
        self._inside = width - _EDGES
        self.edit = ValueEdit()
        self.chooser = Chooser() if len(units) > 1 else None
        self._label = make_line(unit_of(unit).spelling, UNIT, soft=True)
        row = QHBoxLayout(self)
        row.setContentsMargins(RING + 2, RING + 1, RING + 1, RING + 1)
        row.setSpacing(0)
        self.watch(self.edit)
        row.addWidget(self.edit)
        if self.chooser is not None:
            self.chooser.offer([(unit_of(code).spelling, code) for code in units], units.index(unit))
            self.watch(self.chooser)
            row.addSpacing(_GAP)
            row.addWidget(self.chooser)
            self._label.setParent(self)
            self._label.hide()
        else:
            row.addSpacing(_GAP_WITHOUT_CHOICE)
            row.addWidget(self._label)
        row.addStretch(1)
        self.edit.textChanged.connect(self.fit_text)
        self.fit_text()

    def fit_text(self) -> None:
        """Share the frame out between number and unit.

        A long number takes what its unit does not need, then a smaller size; while it is typed the whole frame.
        """
        usual, beside_unit = self._rooms()
        rooms = [(usual, VALUE), *((beside_unit, size) for size in range(VALUE, _SMALLEST - 1, -1))]
        if self.edit.hasFocus():
            rooms += [(self._inside, size) for size in range(VALUE, _SMALLEST - 1, -1)]
        text = self.edit.text() or self.edit.placeholderText()
        bold = not self.edit.is_soft
        fitting = ((room, size) for room, size in rooms if _width_of(text, size, bold) + _ROUND_TEXT <= room)
        room, size = next(fitting, rooms[-1])
        if self.edit.font().pixelSize() != size:
            self.edit.setFont(face(size, semibold=bold))
        self.edit.setFixedWidth(room)
        self._give_unit(max(0, self._inside - room - self._gap))
        self.update()

    def show_unit(self, unit: str | None) -> None:
        """Another unit in a frame without a choice; None where the text itself says it."""
        words = "" if unit is None else unit_of(unit).spelling
        if words != self._label.text():
            self._label.setText(words)
            self.fit_text()

    def set_width(self, width: int) -> None:
        """Give the frame another width, in pixels without the ring."""
        self._inside = width - _EDGES
        self.setFixedWidth(width + 2 * RING)
        self.fit_text()

    def has_room_for(self, spelling: str) -> bool:
        """Whether a unit stands whole beside the least room of a number."""
        unit = self._label.fontMetrics().horizontalAdvance(spelling)
        return _LEAST_NUMBER + self._gap + unit <= self._inside

    def show_in_its_place(self, words: str) -> None:
        """Words that stand where the number would, while none is typed; "" for none."""
        self.edit.setPlaceholderText(words)
        self.fit_text()

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """The number has the whole frame only while it is typed."""
        if watched is self.edit and event.type() in (QEvent.Type.FocusIn, QEvent.Type.FocusOut):
            self.fit_text()
        return super().eventFilter(watched, event)

    @property
    def _gap(self) -> int:
        return _GAP if self.chooser is not None else _GAP_WITHOUT_CHOICE

    def _rooms(self) -> tuple[int, int]:
        """The usual width of the number, and the widest that leaves its unit whole."""
        if self.chooser is not None:
            usual = VALUE_WIDTH - 4
            unit = self.chooser.fontMetrics().horizontalAdvance(self.chooser.currentText()) + _ROUND_UNIT
        else:
            unit = self._label.fontMetrics().horizontalAdvance(self._label.text()) + 4
            usual_unit = _UNIT - (FRAME_WIDTH - _EDGES - self._inside)
            usual = max(_LEAST_NUMBER, self._inside - _EDGES - max(usual_unit, unit + 14))
        return usual, max(usual, self._inside - self._gap - unit)

    def _give_unit(self, room: int) -> None:
        """A unit without room stands in nobody's way, and stays where the Tab key finds it."""
        part = self.chooser or self._label
        part.setFixedWidth(max(1, room))

    def paint_inside(self, painter: QPainter, body: QRectF) -> None:
        """The thin line between number and unit."""
        if self.edit.width() >= self._inside or (self.chooser is None and not self._label.text()):
            return
        x = self.edit.geometry().right() + 4.5
        painter.setPen(QPen(QColor(theme.tokens().rule), 1))
        painter.drawLine(int(x), int(body.top()) + 7, int(x), int(body.bottom()) - 7)


def _width_of(text: str, size: int, bold: bool) -> int:
    return QFontMetrics(face(size, semibold=bold)).horizontalAdvance(text)
