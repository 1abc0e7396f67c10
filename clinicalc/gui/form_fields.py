"""The fields of a form: words, a passphrase, a day of the calendar, a file or folder."""

from collections.abc import Callable
from datetime import date
from pathlib import Path

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHBoxLayout, QLineEdit, QSizePolicy, QVBoxLayout, QWidget

from clinicalc.errors import UsageError
from clinicalc.gui.frames import FieldFrame
from clinicalc.gui.labels import make_button, make_line
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import BASE, UNIT, face
from clinicalc.units.days import day_words, read_day_words
from clinicalc.units.quoting import quote

_LONGEST_PATH = 4096
_LONGEST_SECRET = 1024


class TextField(FieldFrame):
    """One line of words in a frame."""

    def __init__(self, width: int, longest: int) -> None:
        super().__init__(width)
        self.edit = QLineEdit()
        self.edit.setFont(face(BASE))
        self.edit.setMaxLength(longest)
        self.edit.setSizePolicy(QSizePolicy.Policy.Expanding, QSizePolicy.Policy.Expanding)
        self.watch(self.edit)
        row = QHBoxLayout(self)
        row.setContentsMargins(RING + 7, RING + 1, RING + 4, RING + 1)
        row.addWidget(self.edit)

    @property
    def text(self) -> str:
        """What is typed, without spaces at its ends."""
        return self.edit.text().strip()


class SecretField(TextField):
    """A passphrase: shown as dots, never in an undo history, a clipboard or a suggestion."""

    def __init__(self, width: int) -> None:
        super().__init__(width, _LONGEST_SECRET)
        self.edit.setEchoMode(QLineEdit.EchoMode.Password)
        self.edit.setInputMethodHints(
            Qt.InputMethodHint.ImhHiddenText
            | Qt.InputMethodHint.ImhSensitiveData
            | Qt.InputMethodHint.ImhNoPredictiveText
            | Qt.InputMethodHint.ImhNoAutoUppercase
        )

    @property
    def secret(self) -> str:
        """The passphrase letter for letter: spaces belong to it."""
        return self.edit.text()


class DayField(QWidget):
    """A day as year, month and day, or in words; beside it how it was read."""

    def __init__(self, width: int) -> None:
        super().__init__()
        self.field = TextField(width, 40)
        self.edit = self.field.edit
        self.edit.setPlaceholderText("yyyy-mm-dd")
        self.read = make_line("", UNIT, soft=True)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(10)
        row.addWidget(self.field)
        row.addWidget(self.read, 1)
        self.edit.textChanged.connect(self._show)

    def fill(self, day: date) -> None:
        """Show a day."""
        self.edit.setText(day.isoformat())

    def day(self) -> date:
        """The day that is stated. Raises UsageError where none is, or it is not one of the calendar."""
        return read_stated_day(self.field.text, "Write year, month and day, such as 2027-11-30, or 30 November 2027.")

    def _show(self) -> None:
        found = read_day_words(self.field.text)
        self.read.setText("" if found is None else day_words(found))


class PlaceField(QWidget):
    """The path of a file or folder, typed or chosen."""

    def __init__(self, width: int, choose: Callable[[QWidget], Path | None]) -> None:
        super().__init__()
        self._choose = choose
        self.field = TextField(width, _LONGEST_PATH)
        self.edit = self.field.edit
        self.button = make_button("Choose…", pixels=UNIT)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        row = QHBoxLayout()
        row.setSpacing(6)
        row.addWidget(self.field)
        row.addWidget(self.button)
        row.addStretch(1)
        column.addLayout(row)
        self.button.clicked.connect(self._ask)

    def path(self) -> Path:
        """The path as typed. Raises UsageError where there is none."""
        text = self.field.text
        if not text:
            raise UsageError("no place is named.", do="Type its path, or choose it with the button beside the field.")
        return Path(text).expanduser()

    def _ask(self) -> None:
        path = self._choose(self)
        if path is not None:
            self.edit.setText(str(path))
            self.edit.setFocus(Qt.FocusReason.OtherFocusReason)


def read_stated_day(text: str, do: str) -> date:
    """The day that is typed. Raises UsageError, with `do`, where none is, or it is not one of the calendar."""
    found = read_day_words(text)
    if found is None:
        what = "no day is given." if not text else f"{quote(text)} is no day of the calendar."
        raise UsageError(what, do=do)
    return found
