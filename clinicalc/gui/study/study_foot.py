"""The foot of the Study page: open, begin, read again; at the right what comes next."""

from enum import Enum

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QResizeEvent
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.gui.labels import make_button, make_line, make_rule
from clinicalc.gui.tokens import SIDE_MARGIN
from clinicalc.gui.typeface import UNIT


class Next(Enum):
    """What the button at the right does: the words on it."""

    TO_MODEL = "On to the &model"
    FIT = "&Fit the model"
    TO_PACKAGE = "On to the &package"
    SAVE = "&Save the study file…"
    VALIDATE = "&Validate"
    TO_VALIDATION = "On to the &validation"
    TO_UPDATE = "On to the &update"
    UPDATE = "&Update the model…"
    WRITE_VERSION = "&Write the new version…"
    INSTALL = "&Install it on the Models page"
    WRITE = "&Write file…"
    TRY = "&Try it on the Patient page"


_STAYS = "The data stay in the file they came from."
_ROOM_FOR_WORDS, _ROOM_FOR_ALL = 1000, 900


class StudyFoot(QWidget):
    """It does nothing itself."""

    open_asked = Signal()
    begin_asked = Signal()
    again_asked = Signal()
    next_asked = Signal(object)
    """The Next."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("ground")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.open = make_button("&Open study…")
        self.begin = make_button("&Begin from data…")
        self.again = make_button("&Read again")
        self.says = make_line(_STAYS, UNIT, soft=True)
        self.also = make_button("")
        self.next = make_button("", name="primary")
        self._next: Next | None = None
        self._also: Next | None = None
        self._again, self._opens = False, True
        row = QHBoxLayout()
        row.setContentsMargins(SIDE_MARGIN, 8, SIDE_MARGIN + 4, 8)
        row.setSpacing(10)
        for widget in (self.open, self.begin, self.again, self.says):
            row.addWidget(widget)
        row.addStretch(1)
        row.addWidget(self.also)
        row.addWidget(self.next)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(make_rule())
        column.addLayout(row)
        self.open.clicked.connect(self.open_asked)
        self.begin.clicked.connect(self.begin_asked)
        self.again.clicked.connect(self.again_asked)
        self.next.clicked.connect(lambda: self.next_asked.emit(self._next))
        self.also.clicked.connect(lambda: self.next_asked.emit(self._also))
        self.offer(None, may=False)

    @property
    def comes_next(self) -> Next | None:
        """What the button at the right does; None where there is none."""
        return self._next

    def offer(
        self, what: Next | None, *, may: bool, also: Next | None = None, again: bool = False, opens: bool = True
    ) -> None:
        """What comes next, and whether it may be done now.

        `again` says whether something can be read again, `opens` whether another study may take the place of this one.
        """
        self._next, self._also, self._again, self._opens = what, also, again, opens
        for button, wanted in ((self.next, what), (self.also, also)):
            if wanted is not None:
                button.setText(wanted.value)
            button.setVisible(wanted is not None and self.parentWidget() is not None)
        self.next.setEnabled(may)
        self._arrange()

    def allow(self, allowed: bool) -> None:
        """Whether anything can be begun: not while something is being done."""
        for button in (self.open, self.begin, self.again, self.also):
            button.setEnabled(allowed)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The sentence takes no room from the buttons."""
        super().resizeEvent(event)
        self._arrange()

    def _arrange(self) -> None:
        placed = self.parentWidget() is not None
        has_room = self.width() >= _ROOM_FOR_ALL or self._also is None
        self.open.setVisible(self._opens and placed)
        self.begin.setVisible(self._opens and has_room and placed)
        self.again.setVisible(self._opens and self._again and has_room and placed)
        self.says.setVisible(self.width() >= _ROOM_FOR_WORDS and placed)
