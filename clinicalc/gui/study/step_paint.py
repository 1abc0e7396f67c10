"""Paints a step: its number in a circle, the thread that joins them, its name, and what is said of it."""

from PySide6.QtCore import QModelIndex, QPersistentModelIndex, QPointF, QRect, QRectF, QSize, Qt
from PySide6.QtGui import QColor, QFontMetrics, QPainter, QPen
from PySide6.QtWidgets import QStyle, QStyledItemDelegate, QStyleOptionViewItem

from clinicalc.gui import theme
from clinicalc.gui.study.steps import Step, StepLine
from clinicalc.gui.typeface import CAPTION, UNIT, VALUE, face

STEP = Qt.ItemDataRole.UserRole
"""The role of a step: it and its line."""
STEP_HIGH = 58
LINE_HIGH = 40
"""The height of a step that stands beside the others."""
_LEFT, _RIGHT, _BAR = 12, 20, 3
_CENTRE, _RADIUS = 33, 10.5
_TEXT_LEFT = 58
_BESIDE_CENTRE, _BESIDE_TEXT, _BESIDE_END = 22, 38, 8
_BESIDE_LETTERS = 15
_LEVEL = Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine


class StepPaint(QStyledItemDelegate):
    """`sizes` are those of the steps, `is_row` says whether they stand side by side."""

    def __init__(self) -> None:
        super().__init__()
        self.sizes = [QSize(256, STEP_HIGH)] * len(Step)
        self.is_row = False

    def sizeHint(self, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex) -> QSize:
        """As the list says."""
        return self.sizes[index.row()]

    def paint(
        self, painter: QPainter, option: QStyleOptionViewItem, index: QModelIndex | QPersistentModelIndex
    ) -> None:
        """One step."""
        step, line = index.data(STEP)
        rect: QRect = option.rect
        state: QStyle.StateFlag = option.state
        chosen = bool(state & QStyle.StateFlag.State_Selected)
        focused = chosen and bool(state & QStyle.StateFlag.State_HasFocus)
        painter.save()
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        if self.is_row:
            self._paint_beside(painter, rect, step, line, chosen=chosen, focused=focused)
        else:
            self._paint_under(painter, rect, step, line, chosen=chosen, focused=focused)
        painter.restore()

    def _paint_under(
        self, painter: QPainter, rect: QRect, step: Step, line: StepLine, *, chosen: bool, focused: bool
    ) -> None:
        tokens = theme.tokens()
        if chosen:
            _paint_choice(painter, rect.adjusted(_LEFT, 2, -_RIGHT, -2), focused=focused)
        middle = QPointF(_CENTRE, rect.center().y() + 1.0)
        painter.setPen(QPen(QColor(tokens.edge), 1))
        if step is not Step.DATA:
            painter.drawLine(QPointF(_CENTRE, rect.top()), QPointF(_CENTRE, middle.y() - _RADIUS))
        if step is not list(Step)[-1]:
            painter.drawLine(QPointF(_CENTRE, middle.y() + _RADIUS), QPointF(_CENTRE, rect.bottom() + 1))
        _paint_number(painter, middle, step, line, chosen=chosen)
        first = QFontMetrics(face(VALUE)).height()
        second = QFontMetrics(face(UNIT)).height()
        top = rect.top() + (rect.height() - first - second) // 2
        room = rect.width() - _RIGHT - 6 - _TEXT_LEFT
        painter.setFont(face(VALUE, semibold=chosen))
        painter.setPen(QColor(tokens.ink))
        painter.drawText(QRect(_TEXT_LEFT, top, room, first), _LEVEL, step.title)
        painter.setFont(face(UNIT))
        painter.setPen(QColor(tokens.ink if chosen else tokens.soft))
        says = QFontMetrics(face(UNIT)).elidedText(line.says, Qt.TextElideMode.ElideRight, room)
        painter.drawText(QRect(_TEXT_LEFT, top + first, room, second), _LEVEL, says)

    def _paint_beside(
        self, painter: QPainter, rect: QRect, step: Step, line: StepLine, *, chosen: bool, focused: bool
    ) -> None:
        tokens = theme.tokens()
        if chosen:
            _paint_choice(painter, rect.adjusted(4, 2, -4, -2), focused=focused)
        middle = QPointF(rect.left() + _BESIDE_CENTRE, rect.center().y() + 0.5)
        _paint_number(painter, middle, step, line, chosen=chosen)
        painter.setFont(face(_BESIDE_LETTERS, semibold=chosen))
        painter.setPen(QColor(tokens.ink))
        painter.drawText(rect.adjusted(_BESIDE_TEXT, 0, -_BESIDE_END, 0), _LEVEL, step.title)


def share_row(width: int) -> list[QSize]:
    """Sizes of the steps side by side over a width: each as wide as its name needs, and what is left shared."""
    metrics = QFontMetrics(face(_BESIDE_LETTERS, semibold=True))
    needs = [_BESIDE_TEXT + metrics.horizontalAdvance(step.title) + _BESIDE_END for step in Step]
    more = max(0, width - sum(needs)) // len(needs)
    return [QSize(need + more, LINE_HIGH) for need in needs]


def _paint_number(painter: QPainter, middle: QPointF, step: Step, line: StepLine, *, chosen: bool) -> None:
    """Filled for the chosen step, in ink for one that is done, in edge and soft for the others."""
    tokens = theme.tokens()
    painter.setBrush(QColor(tokens.accent if chosen else tokens.ground))
    ring = tokens.accent if chosen else tokens.ink if line.is_done else tokens.edge
    painter.setPen(QPen(QColor(ring), 1.6 if line.is_done else 1))
    painter.drawEllipse(middle, _RADIUS, _RADIUS)
    painter.setFont(face(CAPTION, semibold=chosen or line.is_done))
    painter.setPen(QColor(tokens.on_accent if chosen else tokens.ink if line.is_done else tokens.soft))
    box = QRectF(middle.x() - _RADIUS, middle.y() - _RADIUS, 2 * _RADIUS, 2 * _RADIUS)
    painter.drawText(box, Qt.AlignmentFlag.AlignCenter, str(step + 1))


def _paint_choice(painter: QPainter, body: QRect, *, focused: bool) -> None:
    tokens = theme.tokens()
    painter.fillRect(body, QColor(tokens.sel))
    painter.fillRect(body.left(), body.top(), _BAR, body.height(), QColor(tokens.accent))
    if focused:
        painter.setBrush(Qt.BrushStyle.NoBrush)
        painter.setPen(QPen(QColor(tokens.accent), 2))
        painter.drawRoundedRect(QRectF(body).adjusted(1, 1, -1, -1), 3, 3)
