"""The one place where labels, buttons and headings are made: plain text, one typeface, two inks."""

from PySide6.QtCore import Qt
from PySide6.QtGui import QKeyEvent
from PySide6.QtWidgets import QFrame, QHBoxLayout, QLabel, QPushButton, QSizePolicy, QWidget

from clinicalc.gui.tokens import LABEL_WIDTH
from clinicalc.gui.typeface import BASE, CAPTION, UNIT, face

_HIDDEN = Qt.WidgetAttribute.WA_WState_Hidden


class Label(QLabel):
    """A label that measures a text at a width once: layouts ask for it many times at every change around it.

    Other words in the same room ask for no layout: Qt would arrange everything above them anew at every key.
    """

    _asked: tuple[object, ...] = ()
    _heights: dict[int, int]

    def heightForWidth(self, width: int) -> int:
        """What Qt measures; anew for other words, letters or margins, and once style rules have been looked up.

        A layout asks for the room it has, which may be wider than the label may become.
        """
        width = min(width, self.maximumWidth())
        polished = self.testAttribute(Qt.WidgetAttribute.WA_WState_Polished)
        asked = (self.text(), self.font(), self.contentsMargins(), self.wordWrap(), polished)
        if asked != self._asked:
            self._asked, self._heights = asked, {}
        height = self._heights.get(width)
        if height is None:
            height = self._heights[width] = super().heightForWidth(width)
        return height

    def setText(self, text: str) -> None:
        """Show other words; only where they take another height, or in one line another size, is that told around."""
        if text == self.text():
            return
        if not self.isVisible():
            super().setText(text)
            return
        room = self._room()
        # Qt hears nothing of the room that a hidden widget wants; what is painted does not go by this
        self.setAttribute(_HIDDEN, True)
        super().setText(text)
        self.setAttribute(_HIDDEN, False)
        if self._room() != room:
            self.updateGeometry()

    def _room(self) -> object:
        return self.heightForWidth(self.width()) if self.wordWrap() else self.sizeHint()


def make_label(text: str = "", pixels: int = BASE, *, semibold: bool = False, soft: bool = False) -> QLabel:
    """A label that wraps and shows its text letter for letter, whatever stands in it."""
    label = Label()
    label.setTextFormat(Qt.TextFormat.PlainText)
    label.setFont(face(pixels, semibold=semibold))
    label.setWordWrap(True)
    if soft:
        label.setProperty("ink", "soft")
    label.setText(text)
    return label


def make_line(text: str = "", pixels: int = BASE, *, semibold: bool = False, soft: bool = False) -> QLabel:
    """A label of one line."""
    label = make_label(text, pixels, semibold=semibold, soft=soft)
    label.setWordWrap(False)
    return label


def make_field_label(text: str, name: str, buddy: QWidget) -> QLabel:
    """The label of a field: `text` may hold one access mark (`access_keys`), `name` is what a screen reader says."""
    label = make_row_label(text)
    label.setBuddy(buddy)
    label.setAccessibleName(name)
    return label


def make_question_label(text: str, name: str, buddy: QWidget) -> QLabel:
    """A question of any length whose first line stands level with its answers."""
    label = make_label(text)
    label.setBuddy(buddy)
    label.setAccessibleName(name)
    label.setContentsMargins(0, 8, 0, 4)
    return label


def make_row_label(text: str) -> QLabel:
    """The label at the left of a row; a long one takes two smaller lines."""
    label = make_label(text)
    label.setFixedWidth(LABEL_WIDTH)
    label.setContentsMargins(0, 2, 0, 2)
    if label.fontMetrics().horizontalAdvance(text.replace("&", "")) > LABEL_WIDTH:
        label.setFont(face(UNIT))
    return label


class CommandButton(QPushButton):
    """A push button that Enter presses too, in any window."""

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter like the space bar."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.click()
            return
        super().keyPressEvent(event)


def make_button(text: str, *, name: str = "", pixels: int = BASE) -> CommandButton:
    """A push button; `name` picks a style ("primary", "offer")."""
    button = CommandButton(text)
    button.setFont(face(pixels))
    button.setAutoDefault(False)
    if name:
        button.setObjectName(name)
    return button


def make_rule() -> QFrame:
    """A thin line between parts; decoration, never the only sign of anything."""
    rule = QFrame()
    rule.setObjectName("rule")
    rule.setFixedHeight(1)
    rule.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Fixed)
    return rule


class Heading(QWidget):
    """A small heading with a rule to the right edge."""

    def __init__(self, text: str, *, inset: int = 0) -> None:
        super().__init__()
        self.label = make_line(text, CAPTION, semibold=True)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, inset, 0)
        row.setSpacing(10)
        row.addWidget(self.label)
        row.addWidget(make_rule(), 1)
        self.setFixedHeight(24)
