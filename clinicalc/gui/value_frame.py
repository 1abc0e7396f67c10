"""The frame of a measured value: the line a number is typed in, and its unit."""

from PySide6.QtCore import QRectF, Qt, Signal
from PySide6.QtGui import QColor, QFocusEvent, QPainter, QPen
from PySide6.QtWidgets import QHBoxLayout, QLineEdit, QSizePolicy

from clinicalc.gui import theme
from clinicalc.gui.chooser import Chooser
from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import RING, VALUE_WIDTH
from clinicalc.gui.typeface import UNIT, VALUE, face
from clinicalc.units.unit import unit as unit_of


class ValueEdit(QLineEdit):
    """The line a number is typed in."""

    left = Signal()

    def __init__(self) -> None:
        super().__init__()
        self.setFont(face(VALUE, semibold=True))
        self.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)  # the whole frame takes clicks
        self.setAlignment(Qt.AlignmentFlag.AlignRight | Qt.AlignmentFlag.AlignVCenter)
        self.setInputMethodHints(Qt.InputMethodHint.ImhNoPredictiveText | Qt.InputMethodHint.ImhPreferNumbers)

    def focusOutEvent(self, event: QFocusEvent) -> None:
        """Tell that the field was left, for whatever reason but a menu."""
        super().focusOutEvent(event)
        if event.reason() != Qt.FocusReason.PopupFocusReason:
            self.left.emit()


class ValueFrame(FieldFrame):
    """Number, thin line, unit: a number never stands outside its unit's frame."""

    def __init__(self, units: tuple[str, ...], unit: str) -> None:
        super().__init__()
        self.edit = ValueEdit()
        self.chooser = Chooser() if len(units) > 1 else None
        row = QHBoxLayout(self)
        row.setContentsMargins(RING + 2, RING + 1, RING + 1, RING + 1)
        row.setSpacing(0)
        self.watch(self.edit)
        if self.chooser is not None:
            self.chooser.offer([(unit_of(code).spelling, code) for code in units], units.index(unit))
            self.watch(self.chooser)
            self.edit.setFixedWidth(VALUE_WIDTH - 4)
            row.addWidget(self.edit)
            row.addSpacing(4)
            row.addWidget(self.chooser, 1)
        else:
            spelling = unit_of(unit).spelling
            label = make_line(spelling, UNIT, soft=True)
            row.addWidget(self.edit, 1)
            row.addSpacing(10)
            row.addWidget(label)
            row.addSpacing(6)
            room = 108 if label.sizeHint().width() + 16 <= 108 else label.sizeHint().width() + 16
            self.edit.setMaximumWidth(max(46, 166 - room))
            label.setFixedWidth(room - 14)
        self.setFocusProxy(self.edit)

    def paint_inside(self, painter: QPainter, body: QRectF) -> None:
        """The thin line between number and unit."""
        x = self.edit.geometry().right() + 4.5
        painter.setPen(QPen(QColor(theme.tokens().rule), 1))
        painter.drawLine(int(x), int(body.top()) + 7, int(x), int(body.bottom()) - 7)
