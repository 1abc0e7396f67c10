"""The spine of a model in the list: where it stands, as a form of ink. The words beside it say the same.

In use: filled. Review overdue: its lower half filled. Waiting: hatched. Withdrawn: empty, in the colour of edges.
Refused: broken in two. Held on this machine: closed by a clasp.
"""

from PySide6.QtCore import QRectF, Qt
from PySide6.QtGui import QColor, QPainter, QPainterPath, QPen

from clinicalc.gui.tokens import Tokens
from clinicalc.library.standing import Standing

WIDTH, HEIGHT = 9, 34
_RADIUS = 1.5
_HATCH_STEP = 4
_LINE = 1.0
_BROKEN, _SHIFT = 13.0, 4.0
"""Height of each half of a broken spine, and how far the lower one has slipped to the right."""
_CLASP = 7.0


def paint_spine(painter: QPainter, x: float, y: float, standing: Standing, tokens: Tokens) -> None:
    """Paint a spine with its upper left corner at x, y."""
    body = QRectF(x, y, WIDTH, HEIGHT)
    outline = body.adjusted(_LINE / 2, _LINE / 2, -_LINE / 2, -_LINE / 2)
    ink = QColor(tokens.edge if standing is Standing.WITHDRAWN else tokens.ink)
    painter.save()
    painter.setRenderHint(QPainter.RenderHint.Antialiasing)
    painter.setPen(QPen(ink, _LINE))
    painter.setBrush(Qt.BrushStyle.NoBrush)
    match standing:
        case Standing.IN_USE:
            painter.setBrush(ink)
            painter.drawRoundedRect(outline, _RADIUS, _RADIUS)
        case Standing.REVIEW_OVERDUE:
            painter.drawRoundedRect(outline, _RADIUS, _RADIUS)
            painter.fillRect(QRectF(x, y + HEIGHT / 2, WIDTH, HEIGHT / 2 - 1), ink)
        case Standing.WAITING:
            painter.drawRoundedRect(outline, _RADIUS, _RADIUS)
            _hatch(painter, outline)
        case Standing.HELD:
            painter.drawRoundedRect(outline, _RADIUS, _RADIUS)
            painter.fillRect(QRectF(x - 2, y + (HEIGHT - _CLASP) / 2, WIDTH + 4, _CLASP), ink)
        case Standing.REFUSED:
            painter.drawRoundedRect(QRectF(outline.left(), outline.top(), WIDTH - 1, _BROKEN), _RADIUS, _RADIUS)
            low = QRectF(outline.left() + _SHIFT, outline.bottom() - _BROKEN, WIDTH - 1, _BROKEN)
            painter.drawRoundedRect(low, _RADIUS, _RADIUS)
        case Standing.WITHDRAWN:
            painter.drawRoundedRect(outline, _RADIUS, _RADIUS)
    painter.restore()


def _hatch(painter: QPainter, body: QRectF) -> None:
    """Slanted lines inside the outline."""
    inside = QPainterPath()
    inside.addRoundedRect(body, _RADIUS, _RADIUS)
    painter.setClipPath(inside)
    bottom = round(body.top() + body.height() + body.width())
    for y in range(round(body.top()), bottom, _HATCH_STEP):
        painter.drawLine(round(body.left() - 1), y, round(body.right() + 1), y - round(body.width() + 2))
