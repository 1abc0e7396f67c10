"""The preview of a print: its pages as the PDF has them, what can be chosen about them, and the way to a printer.

It shows and prints one assessment, and asks whenever its window comes to the front or goes behind another, and before
every painting, whether that is still the one on screen. Once it is not, the pages are covered by the sentence that says
so, and nothing can be printed any more.
"""

from typing import Protocol

from PySide6.QtCore import QEvent, QSize, Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent, QKeySequence, QResizeEvent, QShortcut
from PySide6.QtWidgets import QBoxLayout, QDialog, QHBoxLayout, QLabel, QStackedWidget, QVBoxLayout, QWidget

from clinicalc.assessment.fields import AnswerOption
from clinicalc.errors import ClinicalcError
from clinicalc.gui.exceptions import explain
from clinicalc.gui.labels import make_button, make_label, make_line, make_rule
from clinicalc.gui.page_stack import PageStack, Zoom
from clinicalc.gui.segments import Segments
from clinicalc.gui.staying_button import StayingButton
from clinicalc.gui.tokens import SHEET_MARGIN, SIDE_MARGIN
from clinicalc.gui.typeface import HEADLINE, UNIT
from clinicalc.report.document import Document
from clinicalc.report.parts import PrintParts
from clinicalc.settings import Paper

NARROWEST = QSize(560, 360)
"""The smallest preview: one that a window at 200 % text has room for."""
_USUAL = QSize(1040, 860)
_YES, _NO = "yes", "no"
_SIZES = (
    AnswerOption(Zoom.FIT.value, "Fit width"),
    AnswerOption(Zoom.FULL.value, "100\u202f%"),
    AnswerOption(Zoom.DOUBLE.value, "200\u202f%"),
)
_PAPERS = (AnswerOption(Paper.A4.value, "A4"), AnswerOption(Paper.LETTER.value, "Letter"))
_PARTS = {"comparison": "Comparison", "shares": "Shares", "matching_age": "Matching age"}
_ANSWERS = (AnswerOption(_YES, "Yes"), AnswerOption(_NO, "No"))


class Job(Protocol):
    """One assessment on its way to paper."""

    def check(self) -> None:
        """Raises PrintRefused once the values on screen are no longer those of the assessment."""

    @property
    def offered(self) -> PrintParts:
        """The parts of which there is something to print."""

    def lay_out(self, paper: Paper, parts: PrintParts) -> Document:
        """The pages. Raises PrintRefused for a text that could only be printed wrongly."""

    def send(self, parent: QWidget, paper: Paper, parts: PrintParts) -> bool:
        """Let a printer be chosen and print; False where none was chosen. Raises PrintRefused."""


class PreviewView(QDialog):
    """Shows the pages of a job and prints them; `refusal` is why nothing was printed, "" where nothing was refused."""

    outdated = Signal(str)

    def __init__(self, parent: QWidget | None, job: Job, *, paper: Paper, parts: PrintParts) -> None:
        super().__init__(parent)
        self._job = job
        self.refusal = ""
        self._is_covered = False
        self.setObjectName("ground")
        self.setWindowTitle("Print preview")
        self.zoom_choice = _make_choice(_SIZES, "Size on screen", Zoom.FIT.value, 240)
        self.paper_choice = _make_choice(_PAPERS, "Paper", paper.value, 132)
        self.patient_choice = _make_choice(
            _ANSWERS, "With the patient’s page", _YES if parts.patient_page else _NO, 104
        )
        self.part_buttons = _make_part_buttons(job.offered, parts)
        self.pages = PageStack(self._may_show)
        self.cover_words = make_label("", HEADLINE, semibold=True)
        self.message = make_label("", UNIT, semibold=True)
        self.print_button = make_button("P&rint…", name="primary")
        self.close_button = make_button("&Close")
        self._lay_out()
        self._connect()
        self._show_document()
        self.setMinimumSize(NARROWEST)
        self.resize(_USUAL.boundedTo(self.screen().availableSize() * 0.94).expandedTo(NARROWEST))
        self.print_button.setFocus(Qt.FocusReason.OtherFocusReason)

    @property
    def paper(self) -> Paper:
        """The paper that is chosen."""
        return next(paper for paper in Paper if paper.value == self.paper_choice.answer)

    @property
    def parts(self) -> PrintParts:
        """The parts that are chosen."""
        chosen = {name: button.isChecked() for name, button in self.part_buttons.items()}
        return PrintParts(
            patient_page=self.patient_choice.answer == _YES,
            comparison=chosen.get("comparison", False),
            shares=chosen.get("shares", False),
            matching_age=chosen.get("matching_age", False),
        )

    @property
    def is_covered(self) -> bool:
        """Whether the pages are covered for good."""
        return self._is_covered

    def resizeEvent(self, event: QResizeEvent) -> None:
        """The choices stand beside each other, or in two rows where the window is narrow."""
        super().resizeEvent(event)
        directions = QBoxLayout.Direction
        beside = self.width() >= self._room_beside
        self._choices.setDirection(directions.LeftToRight if beside else directions.TopToBottom)

    def changeEvent(self, event: QEvent) -> None:
        """Whoever comes back from the values finds the pages as they may be shown, painted anew or not."""
        super().changeEvent(event)
        if event.type() == QEvent.Type.ActivationChange:
            self._may_show()

    def _lay_out(self) -> None:
        self._head = QWidget()
        rows = QVBoxLayout(self._head)
        rows.setContentsMargins(SIDE_MARGIN, 6, SIDE_MARGIN, 6)
        rows.setSpacing(0)
        self._choices = QBoxLayout(QBoxLayout.Direction.LeftToRight)
        self._choices.setSpacing(0)
        rows.addLayout(self._choices)
        first = _in_a_row(("&Size", self.zoom_choice), ("&Paper", self.paper_choice))
        second = _in_a_row(("&With the patient’s page", self.patient_choice))
        self._choices.addLayout(first)
        self._choices.addLayout(second)
        if self.part_buttons:
            rows.addLayout(_in_a_row(("&Also print", *self.part_buttons.values())))
        self._room_beside = first.sizeHint().width() + second.sizeHint().width() + 2 * SIDE_MARGIN + 24
        covered = QWidget()
        words = QVBoxLayout(covered)
        words.setContentsMargins(SHEET_MARGIN, SHEET_MARGIN, SHEET_MARGIN, SHEET_MARGIN)
        words.addWidget(self.cover_words, 0, Qt.AlignmentFlag.AlignTop)
        self._middle = QStackedWidget()
        self._middle.addWidget(self.pages)
        self._middle.addWidget(covered)
        foot = QHBoxLayout()
        foot.setContentsMargins(SIDE_MARGIN, 8, SIDE_MARGIN, 8)
        foot.setSpacing(10)
        foot.addWidget(self.message, 1)
        foot.addWidget(self.close_button)
        foot.addWidget(self.print_button)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addWidget(self._head)
        column.addWidget(make_rule())
        column.addWidget(self._middle, 1)
        column.addWidget(make_rule())
        column.addLayout(foot)

    def _connect(self) -> None:
        self.zoom_choice.chosen.connect(lambda id: self.pages.take_zoom(Zoom(id)))
        self.paper_choice.chosen.connect(self._show_document)
        self.patient_choice.chosen.connect(self._show_document)
        for button in self.part_buttons.values():
            button.toggled.connect(self._show_document)
        self.print_button.clicked.connect(self._print)
        self.close_button.clicked.connect(self.reject)
        self.pages.failed.connect(self._cover)
        self.outdated.connect(self._cover, Qt.ConnectionType.QueuedConnection)  # it is found out within a paint
        for keys, act, by in (
            ("PgUp", self.pages.turn, -1),
            ("PgDown", self.pages.turn, 1),
            ("Ctrl++", self._step_zoom, 1),
            ("Ctrl+=", self._step_zoom, 1),  # the same key without the shift
            ("Ctrl+-", self._step_zoom, -1),
        ):
            QShortcut(QKeySequence(keys), self).activated.connect(lambda act=act, by=by: act(by))

    def _step_zoom(self, by: int) -> None:
        self.zoom_choice.choose(self.pages.step_zoom(by).value)

    def _show_document(self) -> None:
        try:
            self.pages.show_document(self._job.lay_out(self.paper, self.parts))
        except ClinicalcError as error:
            self._cover(str(error))

    def _may_show(self) -> bool:
        """Asked before every painting; the first no has the pages covered."""
        if self._is_covered:
            return False
        try:
            self._job.check()
        except ClinicalcError as error:
            self.outdated.emit(str(error))
            return False
        return True

    def _print(self) -> None:
        self.message.setText("")
        try:
            self._job.check()
            sent = self._job.send(self, self.paper, self.parts)
        except ClinicalcError as error:
            self._refuse(str(error))
        except Exception as error:
            self._cover(explain(error))
            raise
        else:
            if sent:
                self.refusal = ""
                self.accept()

    def _refuse(self, why: str) -> None:
        """Say why nothing was printed: in the foot, or over the pages if they may not be shown any more."""
        try:
            self._job.check()
        except ClinicalcError:
            self._cover(why)
            return
        self.refusal = _as_sentence(why)
        self.message.setText(self.refusal)
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, self.refusal))

    def _cover(self, why: str) -> None:
        """Put the sentence where the pages were, for good."""
        if self._is_covered:
            return
        self._is_covered = True
        self.refusal = _as_sentence(why)
        self.cover_words.setText(self.refusal)
        self.message.setText("")
        self._middle.setCurrentIndex(1)
        self.pages.clear()
        self._head.hide()
        self.print_button.setEnabled(False)
        self.close_button.setFocus(Qt.FocusReason.OtherFocusReason)
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, self.refusal))


def _make_choice(options: tuple[AnswerOption, ...], name: str, chosen: str, width: int) -> Segments:
    choice = Segments(options, name, width)
    choice.fit(2 * width)
    choice.choose(chosen)
    return choice


def _make_part_buttons(offered: PrintParts, chosen: PrintParts) -> dict[str, StayingButton]:
    """A button for each part that there is something of, down where it is chosen, by the name of the part."""
    buttons = {}
    for name, words in _PARTS.items():
        if getattr(offered, name):
            buttons[name] = StayingButton(words)
            buttons[name].show_pressed(getattr(chosen, name))
    return buttons


def _in_a_row(*choices: tuple[str, *tuple[QWidget, ...]]) -> QHBoxLayout:
    """Choices with their words before them."""
    row = QHBoxLayout()
    row.setContentsMargins(0, 0, 0, 0)
    row.setSpacing(8)
    for words, *widgets in choices:
        row.addWidget(_label_for(words, widgets[0]))
        for widget in widgets:
            row.addWidget(widget)
        row.addSpacing(14)
    row.addStretch(1)
    return row


def _label_for(words: str, choice: QWidget) -> QLabel:
    label = make_line(words, UNIT, soft=True)
    label.setBuddy(choice)
    label.setAccessibleName(words.replace("&", ""))
    return label


def _as_sentence(words: str) -> str:
    return words[:1].upper() + words[1:]
