"""The chooser of the model line: the title of the model in use, and a menu of the files opened lately.

A menu and not a list that arrow keys turn through: another model clears the patient, so it is chosen outright.
"""

from collections.abc import Sequence
from pathlib import Path

from PySide6.QtCore import QPoint, QPointF, QRectF, Qt, Signal
from PySide6.QtGui import QAction, QColor, QFontMetrics, QKeyEvent, QKeySequence, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractButton, QMenu, QSizePolicy

from clinicalc.gui import theme
from clinicalc.gui.access_keys import show_ampersands
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import UNIT, VALUE, face
from clinicalc.operations.recent_titles import RecentFile

_HEIGHT = 32
_WIDTH, _WIDEST = 322, 560
_NARROWEST = 200
_BESIDE_TITLE = 40
_NONE = "No coefficient file is open"
_LONGEST = 72
_OPENING_KEYS = (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Down, Qt.Key.Key_Up, Qt.Key.Key_Space)


class ModelChooser(QAbstractButton):
    """Shows one title; its menu is asked for afresh every time it opens."""

    about_to_open = Signal()
    """The menu is about to be shown: `offer` is due."""
    file_chosen = Signal(object)
    """The path of one of the files offered."""

    def __init__(self) -> None:
        super().__init__()
        self.title = ""
        self.menu = QMenu(self)
        self.menu.setFont(face(UNIT))
        self.open_action = QAction("&Open file…", self)
        self.open_action.setShortcuts([QKeySequence("Ctrl+O"), QKeySequence("Alt+O")])
        self.menu.addAction(self.open_action)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setFixedHeight(_HEIGHT + 2 * RING)
        self.setMinimumWidth(_NARROWEST)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.clicked.connect(self.open_menu)
        self.show_title("")

    def show_title(self, title: str) -> None:
        """Show which model is in use, "" for none."""
        self.title = title
        self.setAccessibleName(f"Model: {title or _NONE}")
        text = QFontMetrics(face(VALUE, semibold=True)).horizontalAdvance(title) + _BESIDE_TITLE + 2
        self.setMaximumWidth(min(max(text, _WIDTH), _WIDEST) + 2 * RING)
        self.update()

    def offer(self, files: Sequence[RecentFile]) -> None:
        """Replace the files in the menu."""
        self.menu.clear()
        for file in files:
            action = self.menu.addAction(show_ampersands(_shortened(file.title)))
            action.setToolTip("")
            action.triggered.connect(lambda _=False, path=file.path: self.file_chosen.emit(Path(path)))
        if files:
            self.menu.addSeparator()
        self.menu.addAction(self.open_action)

    def open_menu(self) -> None:
        """Show the menu under the frame."""
        self.about_to_open.emit()
        self.menu.setMinimumWidth(self.width() - 2 * RING)
        self.menu.setActiveAction(self.menu.actions()[0])
        self.menu.popup(self.mapToGlobal(QPoint(RING, self.height() - RING)))

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter, space and arrows open the menu; none of them changes the model."""
        if event.key() in _OPENING_KEYS:
            self.open_menu()
            return
        super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Frame, title, chevron, and the ring."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        colours = theme.tokens()
        body = QRectF(self.rect()).adjusted(RING, RING, -RING, -RING)
        if self.hasFocus():
            painter.setPen(QPen(QColor(colours.accent), 2))
            painter.drawRoundedRect(body.adjusted(-2, -2, 2, 2), 5, 5)
        painter.setBrush(QColor(colours.field))
        painter.setPen(QPen(QColor(colours.edge), 1))
        painter.drawRoundedRect(body.adjusted(0.5, 0.5, -0.5, -0.5), 3, 3)
        painter.setFont(face(VALUE, semibold=bool(self.title)))
        painter.setPen(QColor(colours.ink if self.title else colours.soft))
        room = body.adjusted(10, 0, 10 - _BESIDE_TITLE, 0)
        fitted = painter.fontMetrics().elidedText(
            self.title or "Choose a model", Qt.TextElideMode.ElideRight, int(room.width())
        )
        painter.drawText(room, Qt.AlignmentFlag.AlignVCenter | Qt.TextFlag.TextSingleLine, fitted)
        painter.setPen(QPen(QColor(colours.ink), 1.5))
        x, y = body.right() - 15, body.center().y() - 2
        painter.drawPolyline([QPointF(x - 4, y), QPointF(x, y + 4), QPointF(x + 4, y)])
        painter.end()


def _shortened(title: str) -> str:
    """The title for one line of a menu, where a tabulator would start the column of keys."""
    line = " ".join(title.split())
    return line if len(line) <= _LONGEST else f"{line[: _LONGEST - 1]}…"
