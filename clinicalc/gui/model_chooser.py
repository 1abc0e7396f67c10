"""The chooser of the model line: the title of the model in use, and a menu of the files opened lately.

A menu and not a list that arrow keys turn through: another model clears the patient, so it is chosen outright.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from PySide6.QtCore import QEvent, QPoint, QPointF, QRectF, Qt, Signal
from PySide6.QtGui import (
    QAction,
    QColor,
    QFontMetrics,
    QHelpEvent,
    QKeyEvent,
    QKeySequence,
    QPainter,
    QPaintEvent,
    QPen,
)
from PySide6.QtWidgets import QAbstractButton, QMenu, QSizePolicy, QToolTip

from clinicalc.gui import theme
from clinicalc.gui.access_keys import show_ampersands
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import CAPTION, UNIT, VALUE, face

if TYPE_CHECKING:
    from clinicalc.gui.model_library import OfferedModel
    from clinicalc.operations.recent_titles import RecentFile

_HEIGHT = 32
_WIDTH, _NARROWEST = 322, 200
_BEFORE_TITLE, _AFTER_TITLE = 10, 30
_LINE_PITCH = 14
_NONE = "No coefficient file is open"
_LONGEST, _LONGEST_END = 72, 28
_OPENING_KEYS = (Qt.Key.Key_Return, Qt.Key.Key_Enter, Qt.Key.Key_Down, Qt.Key.Key_Up, Qt.Key.Key_Space)


class ModelChooser(QAbstractButton):
    """Shows one title; its menu is asked for afresh every time it opens."""

    about_to_open = Signal()
    """The menu is about to be shown: `offer` is due."""
    file_chosen = Signal(object)
    """The path of one of the files offered."""
    model_chosen = Signal(str)
    """The fingerprint of one of the approved models offered."""
    hold_asked = Signal()
    """The model in use is to be held on this machine."""
    release_asked = Signal(str)
    """The fingerprint of a model whose hold is to end."""

    def __init__(self) -> None:
        super().__init__()
        self.title = ""
        self._before_file = ""
        self.menu = QMenu(self)
        self.menu.setFont(face(UNIT))
        self.open_action = QAction("&Open file…", self)
        self.open_action.setShortcuts([QKeySequence("Ctrl+O"), QKeySequence("Alt+O")])
        self.menu.addAction(self.open_action)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        self.setFixedHeight(_HEIGHT + 2 * RING)
        self.setMinimumWidth(_NARROWEST)
        self.setMaximumWidth(_WIDTH + 2 * RING)
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
        self.clicked.connect(self.open_menu)
        self.show_title("")

    def show_title(self, title: str) -> None:
        """Show which model is in use, "" for none."""
        self.title = title
        self.setAccessibleName(f"Model: {title or _NONE}")
        self.update()

    @property
    def shown_lines(self) -> tuple[str, ...]:
        """The title as it is shown: on one line or two, or with its middle left out; () for no title."""
        return self._set_title()[1]

    @property
    def tip(self) -> str:
        """The whole title over one whose middle is left out, else ""; as markup, for Qt guesses whether a tip is."""
        if " ".join(self.shown_lines) == self.title:
            return ""
        import html  # a table of all of its names for letters comes with it

        return f"<qt>{html.escape(self.title)}</qt>"

    def name_trials(self) -> None:
        """There is a library, so a file that is opened by its name is only tried out."""
        self.open_action.setText("&Open a file to try out…")
        self._before_file = "Try out: "

    def offer(
        self,
        files: Sequence[RecentFile],
        approved: Sequence[OfferedModel] = (),
        *,
        can_hold: bool = False,
        held: Sequence[OfferedModel] = (),
    ) -> None:
        """Replace what is in the menu: the approved models, the files opened lately, hold and release."""
        self.menu.clear()
        for model in approved:
            self._add(model.title, lambda _=False, chosen=model.fingerprint: self.model_chosen.emit(chosen))
        if approved:
            self.menu.addSeparator()
        for file in files:
            words = f"{self._before_file}{file.title}"
            self._add(words, lambda _=False, path=file.path: self.file_chosen.emit(Path(path)))
        if files:
            self.menu.addSeparator()
        self.menu.addAction(self.open_action)
        if can_hold or held:
            self.menu.addSeparator()
        if can_hold:
            self._add("Hold this model on this machine…", lambda _=False: self.hold_asked.emit())
        for model in held:
            release = f"Release on this machine: {model.title}"
            self._add(release, lambda _=False, chosen=model.fingerprint: self.release_asked.emit(chosen))

    def _add(self, words: str, verb: Callable[..., None]) -> None:
        # made here and then added: one that Qt makes may be taken by PySide for an object that is gone
        action = QAction(show_ampersands(_shortened(words)), self.menu)
        self.menu.addAction(action)
        action.setToolTip("")
        action.triggered.connect(verb)

    def open_menu(self) -> None:
        """Show the menu under the frame."""
        self.about_to_open.emit()
        self.menu.setMinimumWidth(self.width() - 2 * RING)
        self.menu.setActiveAction(self.menu.actions()[0])
        self.menu.popup(self.mapToGlobal(QPoint(RING, self.height() - RING)))

    def event(self, event: QEvent) -> bool:
        """The tip is worked out when it is asked for."""
        if event.type() == QEvent.Type.ToolTip and isinstance(event, QHelpEvent):
            QToolTip.showText(event.globalPos(), self.tip, self)
            return True
        return super().event(event)

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
        painter.setPen(QColor(colours.ink if self.title else colours.soft))
        self._paint_title(painter, body.left() + _BEFORE_TITLE, body.center().y())
        painter.setPen(QPen(QColor(colours.ink), 1.5))
        x, y = body.right() - 15, body.center().y() - 2
        painter.drawPolyline([QPointF(x - 4, y), QPointF(x, y + 4), QPointF(x + 4, y)])
        painter.end()

    def _set_title(self) -> tuple[int, tuple[str, ...]]:
        """The size of the title's letters in pixels, and its lines.

        On one line, smaller where need be, else on two; of a title too long for that the middle is left out, since
        titles differ most often at their ends.
        """
        room = self.width() - 2 * RING - _BEFORE_TITLE - _AFTER_TITLE
        for pixels in (VALUE, UNIT):
            if QFontMetrics(face(pixels, semibold=True)).horizontalAdvance(self.title) <= room:
                return pixels, (self.title,) if self.title else ()
        small = QFontMetrics(face(CAPTION, semibold=True))
        words = self.title.split(" ")
        ends = range(len(words) - 1, 0, -1)
        end = next((n for n in ends if small.horizontalAdvance(" ".join(words[:n])) <= room), 0)
        first, second = " ".join(words[:end]), " ".join(words[end:])
        if not first or small.horizontalAdvance(second) > room:
            return CAPTION, (small.elidedText(self.title, Qt.TextElideMode.ElideMiddle, room),)
        return CAPTION, (first, second)

    def _paint_title(self, painter: QPainter, x: float, middle: float) -> None:
        pixels, lines = self._set_title()
        painter.setFont(face(pixels, semibold=bool(self.title)))
        top = middle + painter.fontMetrics().capHeight() / 2 - _LINE_PITCH * (max(len(lines), 1) - 1) / 2
        for place, line in enumerate(lines or ("Choose a model",)):
            painter.drawText(QPointF(x, round(top + place * _LINE_PITCH)), line)


def _shortened(title: str) -> str:
    """The title for one line of a menu, where a tabulator would start the column of keys.

    Of a long one the middle is left out: its version stands at the end.
    """
    line = " ".join(title.split())
    return line if len(line) <= _LONGEST else f"{line[: _LONGEST - _LONGEST_END - 1]}…{line[-_LONGEST_END:]}"
