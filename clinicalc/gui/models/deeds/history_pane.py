"""The face of a history: a day to look back on, the entries, what went wrong, and the ways to save it."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QKeySequence, QShortcut
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.form_fields import DayField
from clinicalc.gui.labels import make_button, make_label, make_question_label
from clinicalc.gui.models.deeds.entry_list import EntryList
from clinicalc.gui.refusal_strip import RefusalStrip
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE, UNIT

_DAY = 190
_LABEL = 48


class HistoryPane(QWidget):
    """Read-only but for the day."""

    left = Signal()
    day_asked = Signal()
    all_asked = Signal()
    csv_asked = Signal()
    pdf_asked = Signal()

    def __init__(self, title: str) -> None:
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self.title = make_label(title, TITLE, semibold=True)
        self.says = make_label("", UNIT, soft=True)
        self.day = DayField(_DAY)
        self.day.edit.setAccessibleName("As of")
        self.day.edit.setAccessibleDescription("A day that is past: which model answered at its end")
        self.look_back = make_button("&Look back", pixels=UNIT)
        self.show_all = make_button("All &records", pixels=UNIT)
        self.entries = EntryList(title)
        self._refused = RefusalStrip()
        self.refusal = self._refused.words
        self.busy = make_label("", UNIT, semibold=True)
        self.leave = make_button("&Back")
        self.csv = make_button("Save as &CSV…")
        self.pdf = make_button("Save as &PDF…")
        self._lay_out()
        self._connect()

    def settle(self) -> None:
        """Nothing is refused and nothing being done."""
        self._refused.clear()
        self.busy.setText("")
        self._enable(True)

    def refuse(self, error: ClinicalcError, field: QWidget | None = None) -> None:
        """Say why it was not done."""
        self.settle()
        self._refused.say(error)
        (field or self.entries).setFocus(Qt.FocusReason.OtherFocusReason)

    def wait(self, words: str) -> None:
        """What is being done; nothing else can be asked for meanwhile."""
        self._refused.hide()
        self.busy.setText(words)
        self._enable(False)

    def tell(self, words: str) -> None:
        """What was done."""
        self.busy.setText(words)
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, words))

    def forget(self) -> None:
        """Nothing secret is typed here."""

    def focus_first(self) -> None:
        """The focus to the entries."""
        self.entries.setFocus(Qt.FocusReason.OtherFocusReason)

    def _enable(self, on: bool) -> None:
        for button in (self.look_back, self.show_all, self.csv, self.pdf):
            button.setEnabled(on)

    def _connect(self) -> None:
        self.leave.clicked.connect(self.left)
        self.look_back.clicked.connect(self.day_asked)
        self.day.edit.returnPressed.connect(self.day_asked)
        self.show_all.clicked.connect(self.all_asked)
        self.csv.clicked.connect(self.csv_asked)
        self.pdf.clicked.connect(self.pdf_asked)
        QShortcut(QKeySequence(Qt.Key.Key_Escape), self, self.left.emit, Qt.ShortcutContext.WidgetWithChildrenShortcut)

    def _lay_out(self) -> None:
        asking = QHBoxLayout()
        asking.setSpacing(10)
        label = make_question_label("As &of", "As of", self.day.edit)
        label.setFixedWidth(_LABEL)
        asking.addWidget(label)
        asking.addWidget(self.day, 1)
        asking.addWidget(self.look_back)
        asking.addWidget(self.show_all)
        foot = QHBoxLayout()
        foot.setSpacing(10)
        foot.addWidget(self.leave)
        foot.addStretch(1)
        foot.addWidget(self.csv)
        foot.addWidget(self.pdf)
        whole = QVBoxLayout(self)
        whole.setContentsMargins(SHEET_MARGIN, 24, SHEET_MARGIN_RIGHT, 12)
        whole.setSpacing(8)
        whole.addWidget(self.title)
        whole.addLayout(asking)
        whole.addWidget(self.says)
        whole.addWidget(self.entries, 1)
        whole.addWidget(self._refused)
        whole.addWidget(self.busy)
        whole.addLayout(foot)
