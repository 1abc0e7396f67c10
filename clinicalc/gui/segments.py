"""Answers side by side, none chosen at first: a question has three states, and none of them is a default."""

from PySide6.QtCore import QPoint, QRectF, Qt, Signal
from PySide6.QtGui import QColor, QFocusEvent, QFontMetrics, QKeyEvent, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QBoxLayout, QButtonGroup, QRadioButton, QSizePolicy

from clinicalc.assessment.fields import AnswerOption
from clinicalc.coefficients.answers import find_answer
from clinicalc.gui import theme
from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.tokens import FRAME_HEIGHT, FRAME_WIDTH, RING
from clinicalc.gui.typeface import BASE, face

_BACK = (Qt.Key.Key_Left, Qt.Key.Key_Up)
_ON = (Qt.Key.Key_Right, Qt.Key.Key_Down)
_PADDING = 12


class Segment(QRadioButton):
    """One answer, painted as a segment."""

    stepped = Signal(int)
    lettered = Signal(str)
    entered = Signal()

    def __init__(self, option: AnswerOption, question: str) -> None:
        super().__init__()
        self.option = option
        self.is_soft = False
        """Whether an answer chosen here is none of its own, but stands for one given elsewhere."""
        self.setAccessibleName(f"{question}: {option.label}")
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)

    def hitButton(self, pos: QPoint) -> bool:
        """The whole segment can be clicked."""
        return self.rect().contains(pos)

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Arrows choose, first letters choose, Enter goes on; the space bar is the button's own."""
        if event.key() in _BACK or event.key() in _ON:
            self.stepped.emit(-1 if event.key() in _BACK else 1)
        elif event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.entered.emit()
        elif event.text().isalpha() and event.modifiers() in (
            Qt.KeyboardModifier.NoModifier,
            Qt.KeyboardModifier.ShiftModifier,
        ):
            self.lettered.emit(event.text())
        else:
            super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Chosen: ground, frame and weight; not chosen: soft text only; chosen elsewhere: soft text in a thin frame."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        chosen = self.isChecked() and not self.is_soft
        if self.isChecked() and self.is_soft:
            painter.setPen(QPen(QColor(theme.tokens().edge), 1))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(2.5, 2.5, -2.5, -2.5), 2, 2)
        if chosen:
            painter.setBrush(QColor(theme.tokens().sel))
            painter.setPen(QPen(QColor(theme.tokens().accent), 1.5))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(1.75, 1.75, -1.75, -1.75), 2, 2)
        painter.setFont(face(BASE, semibold=chosen))
        painter.setPen(QColor(theme.tokens().ink if chosen else theme.tokens().soft))
        painter.drawText(self.rect(), Qt.AlignmentFlag.AlignCenter | Qt.TextFlag.TextSingleLine, self.option.label)
        painter.end()


class Segments(FieldFrame):
    """The answers of one question in one frame: side by side where they fit, else one under the other."""

    chosen = Signal(str)
    entered = Signal()

    def __init__(self, options: tuple[AnswerOption, ...], question: str, width: int = FRAME_WIDTH) -> None:
        super().__init__(width)
        self._narrowest = width
        self._group = QButtonGroup(self)
        self._row = QBoxLayout(QBoxLayout.Direction.LeftToRight, self)
        self._row.setContentsMargins(RING + 1, RING + 1, RING + 1, RING + 1)
        self._row.setSpacing(0)
        self.segments = tuple(Segment(option, question) for option in options)
        for place, segment in enumerate(self.segments):
            self._group.addButton(segment, place)
            self._row.addWidget(segment)
            self.watch(segment)
            segment.stepped.connect(self._step)
            segment.lettered.connect(self._choose_by_letter)
            segment.entered.connect(self.entered)
        self._group.idToggled.connect(self._toggled)
        self.setAccessibleName(question)
        self.setFocusPolicy(Qt.FocusPolicy.ClickFocus)
        self._settle_focus()

    def focusInEvent(self, event: QFocusEvent) -> None:
        """Hand the focus on: a proxy would be a second stop of the tab key, out of order."""
        self._stop.setFocus(event.reason())

    @property
    def answer(self) -> str | None:
        """The id of the chosen answer, None while unanswered."""
        place = self._group.checkedId()
        return None if place < 0 else self.segments[place].option.id

    def answer_meant(self, text: str) -> str | None:
        """The id of the answer that a text says, None where it says none."""
        place = find_answer(text, ((s.option.id, s.option.label) for s in self.segments))
        return None if place is None else self.segments[place].option.id

    def choose(self, id: str | None) -> None:
        """Choose an answer, or none at all. Says nothing to anybody."""
        blocked = self._group.blockSignals(True)
        self._group.setExclusive(False)
        for segment in self.segments:
            segment.setChecked(segment.option.id == id)
        self._group.setExclusive(True)
        self._group.blockSignals(blocked)
        self._settle_focus()
        self.update()

    def set_soft(self, soft: bool) -> None:
        """Whether the chosen answer only stands for one that was given elsewhere."""
        for segment in self.segments:
            segment.is_soft = soft
            segment.update()

    def fits_in(self, width: int) -> bool:
        """Whether all answers stand whole side by side in a frame of this width."""
        metrics = QFontMetrics(face(BASE, semibold=True))
        return sum(metrics.horizontalAdvance(s.option.label) + 2 * _PADDING for s in self.segments) <= width

    def set_narrowest(self, width: int) -> None:
        """The width of the frame where the answers need no more."""
        self._narrowest = width

    def fit(self, room: int) -> None:
        """Take the narrowest form that shows every answer whole in `room` pixels."""
        metrics = QFontMetrics(face(BASE, semibold=True))
        widest = max(metrics.horizontalAdvance(s.option.label) for s in self.segments) + 2 * _PADDING
        count = len(self.segments)
        sums = sum(metrics.horizontalAdvance(s.option.label) + 2 * _PADDING for s in self.segments)
        even, beside = widest * count <= self._narrowest, sums <= room
        if even or beside:
            self._row.setDirection(QBoxLayout.Direction.LeftToRight)
            width, lines = (self._narrowest if even else max(self._narrowest, sums)), 1
            for place, s in enumerate(self.segments):
                self._row.setStretch(place, 1 if even else metrics.horizontalAdvance(s.option.label) + 2 * _PADDING)
        else:
            self._row.setDirection(QBoxLayout.Direction.TopToBottom)
            width, lines = max(self._narrowest, min(widest, room)), count
            for place in range(count):
                self._row.setStretch(place, 1)
        self.setFixedSize(width + 2 * RING, FRAME_HEIGHT * lines + 2 * RING)

    def paint_inside(self, painter: QPainter, body: QRectF) -> None:
        """Thin lines between answers while none beside them is chosen."""
        painter.setPen(QPen(QColor(theme.tokens().rule), 1))
        for left, right in zip(self.segments, self.segments[1:], strict=False):
            if left.isChecked() or right.isChecked():
                continue
            edge = right.geometry()
            if left.y() == right.y():
                painter.drawLine(edge.left(), edge.top() + 7, edge.left(), edge.bottom() - 7)
            else:
                painter.drawLine(edge.left() + 8, edge.top(), edge.right() - 8, edge.top())

    def _toggled(self, place: int, on: bool) -> None:
        self.update()
        if on:
            self._settle_focus()
            self.chosen.emit(self.segments[place].option.id)

    def _step(self, by: int) -> None:
        now = self._group.checkedId()
        # unanswered: an arrow to the left means the first answer, one to the right the second
        place = (0 if by < 0 else 1) if now < 0 else now + by
        if 0 <= place < len(self.segments):
            self.segments[place].setChecked(True)
            self.segments[place].setFocus(Qt.FocusReason.OtherFocusReason)

    def _choose_by_letter(self, letter: str) -> None:
        meant = [s for s in self.segments if s.option.label[:1].casefold() == letter.casefold()]
        if len(meant) == 1:
            meant[0].setChecked(True)
            meant[0].setFocus(Qt.FocusReason.OtherFocusReason)

    def _settle_focus(self) -> None:
        """One stop for the tab key: the chosen answer, or the first while none is chosen."""
        self._stop = self.segments[max(0, self._group.checkedId())]
        for segment in self.segments:
            policy = Qt.FocusPolicy.StrongFocus if segment is self._stop else Qt.FocusPolicy.ClickFocus
            segment.setFocusPolicy(policy)
