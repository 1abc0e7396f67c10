"""A form in the window: a title, fields under each other, why it was refused, the deed and the way out.

Deeds of the practice (install, approve, withdraw, found, join) are forms in the place of the page they belong to, not
windows over it. What is refused is said over the buttons, the field concerned has the focus, and nothing typed is lost.
"""

from collections.abc import Callable, Sequence
from pathlib import Path

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import (
    QKeySequence,
    QResizeEvent,
    QShortcut,
    QShowEvent,
)
from PySide6.QtWidgets import QBoxLayout, QHBoxLayout, QLabel, QLineEdit, QPushButton, QVBoxLayout, QWidget

from clinicalc.assessment.fields import AnswerOption
from clinicalc.errors import ClinicalcError
from clinicalc.gui.chooser import Chooser, FramedChooser
from clinicalc.gui.form_fields import DayField, PlaceField, SecretField, TextField
from clinicalc.gui.labels import Heading, make_button, make_label, make_question_label
from clinicalc.gui.refusal_strip import RefusalStrip
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.segments import Segments
from clinicalc.gui.tokens import RING, SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE, UNIT

LABELS = 200
"""Width of the labels, in pixels."""
FIELD = 420
"""Width of the fields that hold words."""
_DAY = 190
_GAP = 12
_UNDER_WORDS = 6
_BESIDE = 100
"""Room for what stands beside a field: the button of a place, the day as it was read."""
_SCROLL_BAR = 10
_Field = TextField | SecretField | PlaceField | DayField | FramedChooser | Segments
_YES_NO = (AnswerOption("yes", "Yes"), AnswerOption("no", "No"))


class Form(QWidget):
    """Fields are added from top to bottom, which is the order of the tab key too; the deed stands at the end."""

    asked = Signal()
    """The deed was asked for, by its button or by Enter in the last field."""
    left = Signal()
    """The form was left by its second button or by Escape; what was typed is to be forgotten."""

    def __init__(self, title: str, says: str, deed: str, *, leave: str = "&Back") -> None:
        super().__init__()
        self.setObjectName("sheet")
        self.setAttribute(Qt.WidgetAttribute.WA_StyledBackground)
        self._secrets: list[SecretField] = []
        self._first: QWidget | None = None
        self._labelled: list[tuple[QBoxLayout, QLabel]] = []
        self._fields: list[tuple[_Field, int]] = []
        self._follows_words = False
        self._parts: dict[QWidget, tuple[QWidget, ...]] = {}
        self._rows = QVBoxLayout()
        self.title = make_label(title, TITLE, semibold=True)
        self.says = make_label(says)
        if not says:
            self.says.hide()  # to show it here would open a window of its own: it has no parent yet
        self.deed = make_button(deed, name="primary")
        self.leave = make_button(leave)
        self._refused = RefusalStrip()
        self.refusal = self._refused.words
        self.busy = make_label("", UNIT, semibold=True)
        self._lay_out()
        self.deed.clicked.connect(self.asked)
        self.leave.clicked.connect(self.left)
        QShortcut(QKeySequence(Qt.Key.Key_Escape), self, self.left.emit, Qt.ShortcutContext.WidgetWithChildrenShortcut)

    def add_heading(self, words: str) -> None:
        """A heading over the fields that follow."""
        self._rows.addSpacing(10)
        self._rows.addWidget(Heading(words))

    def add_words(self, words: str, *, soft: bool = False, semibold: bool = False) -> QLabel:
        """A sentence over the whole width; other words can be set later."""
        label = make_label(words, soft=soft, semibold=semibold)
        label.setMaximumWidth(LABELS + FIELD + 160)
        self._rows.addWidget(label)
        self._follows_words = True
        return label

    def add_text(self, name: str, *, says: str = "", width: int = FIELD, longest: int = 400) -> TextField:
        """A field for one line of words; `name` may hold an access mark, `says` stands under it."""
        field = TextField(width, longest)
        self._add_row(name, field, field.edit, says)
        return field

    def add_secret(self, name: str, *, says: str = "") -> SecretField:
        """A field for a passphrase; it is emptied by `forget`, and says when the caps lock hides in it."""
        field = SecretField(FIELD)
        self._secrets.append(field)
        self._add_row(name, field, field.edit, says)
        return field

    def add_day(self, name: str, *, says: str = "") -> DayField:
        """A field for a day of the calendar."""
        field = DayField(_DAY)
        self._add_row(name, field, field.edit, says)
        return field

    def add_place(self, name: str, choose: Callable[[QWidget], Path | None], *, says: str = "") -> PlaceField:
        """A field for a file or folder, typed or chosen with the button beside it."""
        field = PlaceField(FIELD, choose)
        self._add_row(name, field, field.edit, says)
        return field

    def add_choice(self, name: str, entries: Sequence[tuple[str, str | None]], *, says: str = "") -> FramedChooser:
        """A chooser of entries (text, data); the first is shown."""
        field = FramedChooser(FIELD)
        field.chooser.offer(entries, 0)
        self._add_row(name, field, field.chooser, says)
        return field

    def add_question(self, question: str, options: Sequence[AnswerOption] = _YES_NO, *, says: str = "") -> Segments:
        """A question with answers side by side, none chosen at first."""
        field = Segments(tuple(options), question.replace("&", ""))
        field.fit(FIELD)
        self._add_row(question, field, field, says)
        return field

    def add_widget(self, widget: QWidget) -> None:
        """Anything else, over the whole width."""
        self._rows.addWidget(widget)

    def show_field(self, field: QWidget, shown: bool) -> None:
        """Show or hide a field with its label and what stands under it."""
        for part in self._parts[field]:
            part.setVisible(shown)

    def say_under(self, field: TextField, says: str) -> None:
        """Other words under a field that has some."""
        under = self._parts[field][-1]
        assert isinstance(under, QLabel)
        under.setText(says)
        field.edit.setAccessibleDescription(says)

    def refuse(self, error: ClinicalcError, field: QWidget | None = None) -> None:
        """Say why it was not done, with the focus at the field concerned, or at the deed."""
        self.settle()
        self._refused.say(error)
        (field or self.deed).setFocus(Qt.FocusReason.OtherFocusReason)
        if field is not None:
            self.scroller.ensureWidgetVisible(field)

    def settle(self) -> None:
        """Nothing is refused and nothing being done."""
        self._refused.clear()
        self.busy.setText("")
        self.deed.setEnabled(True)

    def wait(self, words: str) -> None:
        """What is being done; the deed cannot be asked for a second time meanwhile."""
        self._refused.hide()
        self.busy.setText(words)
        self.deed.setEnabled(False)

    def forget(self) -> None:
        """Empty the passphrases: they are kept nowhere longer than the deed takes."""
        for secret in self._secrets:
            secret.edit.setText("")  # clear() would leave it in what can be undone

    def focus_first(self) -> None:
        """The focus to the first field."""
        first = self._first if self._first is not None else self.deed
        first.setFocus(Qt.FocusReason.OtherFocusReason)

    def showEvent(self, event: QShowEvent) -> None:
        """The way out and the deed come last for the tab key, whatever was added."""
        super().showEvent(event)
        last: QWidget = self.scroller
        following: QWidget | None = self.scroller.nextInFocusChain()
        while following is not None and following is not self.scroller:
            if self.scroller.isAncestorOf(following) and following.focusPolicy() != Qt.FocusPolicy.NoFocus:
                last = following
            following = following.nextInFocusChain()
        QWidget.setTabOrder(last, self.leave)
        QWidget.setTabOrder(self.leave, self.deed)

    def resizeEvent(self, event: QResizeEvent) -> None:
        """In a narrow form the labels stand over their fields, which become as narrow as they must."""
        super().resizeEvent(event)
        room = event.size().width() - SHEET_MARGIN - SHEET_MARGIN_RIGHT - _SCROLL_BAR
        beside = room >= LABELS + _GAP + FIELD + 2 * RING + _BESIDE
        for row, label in self._labelled:
            way = QBoxLayout.Direction.LeftToRight if beside else QBoxLayout.Direction.TopToBottom
            row.setDirection(way)
            row.setSpacing(_GAP if beside else 0)
            label.setFixedWidth(LABELS if beside else room)
        for field, width in self._fields:
            _fit(field, width, room - 2 * RING)
        # else it may keep the width that the wider form needed
        self._inside.invalidate()
        self._inside.activate()

    def _add_row(self, name: str, field: _Field, control: QWidget, says: str) -> None:
        plain = name.replace("&", "")
        label = make_question_label(name, plain, control)
        label.setFixedWidth(LABELS)
        control.setAccessibleName(plain)
        control.setAccessibleDescription(says)
        row = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        row.setSpacing(_GAP)
        self._labelled.append((row, label))
        self._fields.append((field, field.minimumWidth() - 2 * RING))
        row.addWidget(label, 0, Qt.AlignmentFlag.AlignTop)
        column = QVBoxLayout()
        column.setSpacing(0)
        column.addWidget(field, 0, Qt.AlignmentFlag.AlignLeft)
        self._parts[field] = (label, field)
        if says:
            under = make_label(says, UNIT, soft=True)
            under.setContentsMargins(RING, 0, 0, 2)
            column.addWidget(under)
            self._parts[field] = (label, field, under)
        row.addLayout(column, 1)
        if self._follows_words:
            self._rows.addSpacing(_UNDER_WORDS)
            self._follows_words = False
        self._rows.addLayout(row)
        if self._first is None:
            self._first = control
        if isinstance(control, QLineEdit):
            control.returnPressed.connect(lambda: self._go_on(control))
        elif isinstance(control, Chooser):
            control.entered.connect(lambda: self._go_on(control))
        elif isinstance(field, Segments):
            field.entered.connect(lambda: self._go_on(field.segments[-1]))

    def _go_on(self, control: QWidget) -> None:
        """Enter goes to the next field, past the buttons between them, and from the last field to the deed."""
        following: QWidget | None = control.nextInFocusChain()
        while following is not None and following is not control:
            is_stop = following.focusPolicy() & Qt.FocusPolicy.TabFocus and following.isVisible()
            if is_stop and following.isEnabled() and not _is_between(following, self.leave, self.deed):
                break
            following = following.nextInFocusChain()
        if following in (self.leave, self.deed):
            self.asked.emit()
        elif following is not None:
            following.setFocus(Qt.FocusReason.TabFocusReason)
            self.scroller.ensureWidgetVisible(following)

    def _lay_out(self) -> None:
        inside = QWidget()
        inside.setObjectName("sheet")
        self._rows.setSpacing(6)
        column = self._inside = QVBoxLayout(inside)
        column.setContentsMargins(SHEET_MARGIN, 24, SHEET_MARGIN_RIGHT, 12)
        column.setSpacing(12)
        column.addWidget(self.title)
        column.addWidget(self.says)
        column.addLayout(self._rows)
        column.addStretch(1)
        self.scroller = Scroller()
        self.scroller.setWidgetResizable(True)
        self.scroller.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.scroller.setFocusPolicy(Qt.FocusPolicy.NoFocus)  # it follows the field that has the focus
        self.scroller.setWidget(inside)
        foot = QHBoxLayout()
        foot.setSpacing(10)
        foot.addWidget(self.busy, 1)
        foot.addWidget(self.leave)
        foot.addWidget(self.deed)
        whole = QVBoxLayout(self)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.setSpacing(0)
        whole.addWidget(self.scroller, 1)
        below = QVBoxLayout()
        below.setContentsMargins(SHEET_MARGIN, 8, SHEET_MARGIN_RIGHT, 12)
        below.setSpacing(8)
        below.addWidget(self._refused)
        below.addLayout(foot)
        whole.addLayout(below)


def _is_between(widget: QWidget, leave: QWidget, deed: QWidget) -> bool:
    """Whether it is a button among the fields: "Choose…", or one that adds a row."""
    return isinstance(widget, QPushButton) and widget not in (leave, deed)


def _fit(field: _Field, width: int, room: int) -> None:
    """Give the field's frame its usual width, or what there is of room, in pixels without the rings."""
    if isinstance(field, Segments):
        field.fit(min(FIELD, room))
    elif isinstance(field, PlaceField):
        field.field.setFixedWidth(min(FIELD, room - _BESIDE) + 2 * RING)
    elif not isinstance(field, DayField):
        field.setFixedWidth(min(width, room) + 2 * RING)
