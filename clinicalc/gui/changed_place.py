"""The second field of a comparison: what stands in place of a patient's own value, with an arrow once it differs."""

from collections.abc import Sequence

from PySide6.QtCore import QEvent, QObject, QPointF, Qt, Signal
from PySide6.QtGui import QColor, QKeyEvent, QPainter, QPaintEvent, QPen
from PySide6.QtWidgets import QHBoxLayout, QLabel, QWidget

from clinicalc.assessment.findings import Finding, Grade
from clinicalc.gui import theme
from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.labels import make_line
from clinicalc.gui.tokens import FRAME_WIDTH, RING, ROW_PITCH
from clinicalc.gui.typeface import CAPTION

ARROW_ROOM = 14
"""Width kept before the frame for the arrow, in pixels."""
BESIDE_WIDTH = 108
"""The frame's width beside the patient's own."""
UNDER_WIDTH = FRAME_WIDTH - ARROW_ROOM
"""The frame's width on a line of its own, where it ends where the patient's own does."""
BESIDE_ROOM = ARROW_ROOM + BESIDE_WIDTH + 2 * RING
"""What the second field takes beside the first, with the room for its ring."""
_OPEN = "Not measured, so there is nothing to compare with. Type the patient’s own value first."


def make_change_caption() -> QLabel:
    """The words at the left of a second field that stands on a line of its own."""
    caption = make_line("with changes", CAPTION, soft=True)
    caption.hide()
    return caption


class ChangeArrow(QWidget):
    """A small arrow, or its empty place."""

    def __init__(self) -> None:
        super().__init__()
        self.points = False
        self.setFixedSize(ARROW_ROOM, ROW_PITCH)

    def point(self, points: bool) -> None:
        """Show the arrow or leave its place empty."""
        if points != self.points:
            self.points = points
            self.update()

    def paintEvent(self, event: QPaintEvent) -> None:
        """A shaft and a head."""
        if not self.points:
            return
        painter = QPainter(self)
        painter.setRenderHint(QPainter.RenderHint.Antialiasing)
        painter.setPen(QPen(QColor(theme.tokens().accent), 2))
        right, middle = self.width() - 2.5, self.height() / 2
        painter.drawLine(QPointF(1.0, middle), QPointF(right, middle))
        painter.drawPolyline(
            [QPointF(right - 4.5, middle - 4.5), QPointF(right, middle), QPointF(right - 4.5, middle + 4.5)]
        )
        painter.end()


class ChangedPlace(QWidget):
    """Arrow and frame. Subclasses hold the value; empty means the patient's own, which Escape brings back."""

    retyped = Signal()
    """Another changed value, or none any more."""
    entered = Signal()

    def __init__(self, label: str, frame: FieldFrame, controls: Sequence[QWidget]) -> None:
        super().__init__()
        self.frame, self.arrow = frame, ChangeArrow()
        self._label = label
        self._said: tuple[Finding, ...] = ()
        self._open = False
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        row.addWidget(self.arrow)
        row.addWidget(frame)
        row.addStretch(1)
        for control in controls:
            control.installEventFilter(self)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """Escape gives the change up."""
        if isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress and event.key() == Qt.Key.Key_Escape:
            self.give_up()
            return True
        return super().eventFilter(watched, event)

    @property
    def has_focus(self) -> bool:
        """Whether what is typed now goes in here."""
        focused = self.window().focusWidget()
        return focused is not None and self.isAncestorOf(focused)

    def show_findings(self, findings: Sequence[Finding]) -> None:
        """What the comparison says about the changed value: a heavy frame where it cannot be used."""
        if tuple(findings) == self._said:
            return
        self._said = tuple(findings)
        self.frame.set_stopped(any(finding.grade is Grade.STOP for finding in findings))
        self.describe()

    def show_open(self, open_: bool) -> None:
        """Whether the patient's own value was not measured: then there is nothing to change."""
        if open_ == self._open:
            return
        self._open = open_
        self.frame.setEnabled(not open_)
        self.describe()

    def note(self) -> str:
        """What is to be said about the field in focus: why it cannot be used, or what it stands in for."""
        if self._open:
            return _OPEN
        said = " ".join(dict.fromkeys(finding.message for finding in self._said))
        return said or f"{self._label}, with changes. {self.words()}".strip()

    def words(self) -> str:
        """The patient's own value and how the change is read, in sentences."""
        raise NotImplementedError

    def describe(self) -> None:
        """Say to a screen reader what is to be said."""
        raise NotImplementedError

    def give_up(self) -> None:
        """Back to the patient's own value."""
        raise NotImplementedError

    def fits_beside(self) -> bool:
        """Whether the narrow frame has room for all that may stand in it."""
        raise NotImplementedError

    def set_width(self, width: int) -> None:
        """Give the frame another width, in pixels without the ring."""
        raise NotImplementedError

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The widgets the tab key stops at, in order."""
        raise NotImplementedError
