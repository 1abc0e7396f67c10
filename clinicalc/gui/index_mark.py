"""The mark of a finding, at its field and in the list: its number, and its grade as the amount of ink."""

from collections.abc import Sequence

from PySide6.QtCore import QPointF, QRectF, QSize, Qt, Signal
from PySide6.QtGui import QColor, QFontMetrics, QKeyEvent, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QAbstractButton

from clinicalc.assessment.findings import Finding, Grade
from clinicalc.gui import theme
from clinicalc.gui.typeface import CAPTION, face

SIDE = 24
"""Width and height of the button, in pixels; the square it paints is 20."""
_INSET = 2.0
_WITH_OTHERS, _OTHERS_BASELINE = 36, 33
"""Its height with the numbers of other findings under the square: that of a row, so that nothing moves."""
_BETWEEN = "\u202f"


class IndexMark(QAbstractButton):
    """A button. At a field it keeps its place while there is nothing to mark, so that nothing moves when there is."""

    pressed_for = Signal(int)
    """The number of the finding that somebody wants to read."""

    def __init__(self) -> None:
        super().__init__()
        self._number = 0
        self._grade = Grade.NOTE
        self._others = ""
        self.setFixedSize(QSize(SIDE, SIDE))
        self.setAccessibleName("Finding")
        policy = self.sizePolicy()
        policy.setRetainSizeWhenHidden(True)
        self.setSizePolicy(policy)
        self.clicked.connect(lambda: self.pressed_for.emit(self._number))
        self.hide()

    @property
    def number(self) -> int:
        """The number it shows; 0 for none."""
        return self._number

    @property
    def others(self) -> str:
        """The numbers under the square: of the field's other findings, as many as there is room for."""
        return self._others

    @property
    def grade(self) -> Grade:
        """The grade it shows."""
        return self._grade

    def show_mark(self, number: int, grade: Grade, name: str, *, leads: bool = True) -> None:
        """Show a number; `name` is for a screen reader. What leads nowhere is no button and takes no focus."""
        self._number, self._grade = number, grade
        self.setAccessibleName(name)
        self.setEnabled(leads)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus if leads else Qt.FocusPolicy.NoFocus)
        self.setVisible(True)
        self.update()

    def show_findings(self, numbered: Sequence[tuple[int, Finding]]) -> None:
        """Mark the gravest of a field's findings, the others' numbers under it, and name all; none hides the mark.

        They come in the order of the list.
        """
        self._others = _fitting([number for number, _ in numbered[1:]])
        height = _WITH_OTHERS if self._others else SIDE
        if height != self.height():
            self.setFixedHeight(height)
        if not numbered:
            self._number = 0
            self.setAccessibleName("Finding")
            self.setAccessibleDescription("")  # its words may name a number that is no longer there
            self.setVisible(False)
            return
        number, gravest = numbered[0]
        said = ", ".join(f"{finding.grade.value} {place}" for place, finding in numbered)
        self.show_mark(number, gravest.grade, f"Finding: {said}")
        self.setAccessibleDescription(" ".join(finding.message for _, finding in numbered))

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter like the space bar."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.click()
            return
        super().keyPressEvent(event)

    def paintEvent(self, event: QPaintEvent) -> None:
        """Stop: filled. Caution: outlined. Note: a bare digit with a short line under it."""
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        colours = theme.tokens()
        ink = QColor(colours.ink)
        square = QRectF(_INSET, 0.0 if self._others else _INSET, SIDE - 2 * _INSET, SIDE - 2 * _INSET)
        painter.setBrush(Qt.BrushStyle.NoBrush)
        if self._grade is Grade.STOP:
            painter.setPen(Qt.PenStyle.NoPen)
            painter.setBrush(ink)
            painter.drawRoundedRect(square, 2, 2)
        elif self._grade is Grade.CAUTION:
            painter.setPen(QPen(ink, 1.6))
            painter.drawRoundedRect(square.adjusted(0.8, 0.8, -0.8, -0.8), 2, 2)
        else:
            painter.fillRect(QRectF(square.left() + 3, square.bottom() - 1, square.width() - 6, 1), ink)
        if self.hasFocus():
            painter.setBrush(Qt.BrushStyle.NoBrush)
            painter.setPen(QPen(QColor(colours.accent), 2))
            painter.drawRoundedRect(QRectF(self.rect()).adjusted(1, 1, -1, -1), 4, 4)
        painter.setPen(QColor(colours.sheet) if self._grade is Grade.STOP else ink)
        painter.setFont(face(CAPTION, semibold=True))
        painter.drawText(square, Qt.AlignmentFlag.AlignCenter, str(self._number or ""))
        if self._others:
            painter.setPen(ink)
            wide = painter.fontMetrics().horizontalAdvance(self._others)
            painter.drawText(QPointF((SIDE - wide) / 2, _OTHERS_BASELINE), self._others)
        painter.end()


def _fitting(numbers: Sequence[int]) -> str:
    """The numbers beside each other, or as many as have room, and dots for the rest."""
    if not numbers:
        return ""
    metrics = QFontMetrics(face(CAPTION, semibold=True))
    for shown in range(len(numbers), 0, -1):
        words = _BETWEEN.join(map(str, numbers[:shown])) + ("" if shown == len(numbers) else "…")
        if metrics.horizontalAdvance(words) <= SIDE:
            return words
    return "…"
