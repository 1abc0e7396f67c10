"""The group of the model library: its place, whose key is pinned, and the ways to its forms."""

from enum import Enum, auto

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QBoxLayout, QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.errors import UsageError
from clinicalc.gui.labels import Heading, make_button, make_label
from clinicalc.gui.practice.key_plate import KeyPlate
from clinicalc.settings import Settings, library_place

_NONE = "This machine uses no library: any coefficient file can be tried out, and none is approved."

_PINNED = "Id of the practice key, pinned when this machine joined"


class TrustForm(Enum):
    """The forms that the page of settings leads to."""

    PUBLISHERS = auto()
    MAKE_KEY = auto()
    PASSPHRASE = auto()


class LibraryGroup(QWidget):
    """Shown only; changed by founding or joining a library."""

    library_asked = Signal()
    form_asked = Signal(object)
    """The TrustForm."""

    def __init__(self) -> None:
        super().__init__()
        self.place, self.practice = make_label(""), make_label("")
        self.key: KeyPlate | None = None
        self.join = make_button("&Join or found…")
        self.publishers = make_button("P&ublishers trusted here…")
        self.make_key = make_button("Ma&ke a key…")
        self.passphrase = make_button("Change a passph&rase…")
        self._column = QVBoxLayout(self)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(6)
        for part in (Heading("Library"), self.place, self.practice):
            self._column.addWidget(part)
        self._key_place = self._column.count()
        self._pinned = ""
        self._buttons = QHBoxLayout()
        for button in (self.join, self.publishers, self.make_key, self.passphrase):
            self._buttons.addWidget(button)
        self._buttons.addStretch(1)
        for button, form in (
            (self.publishers, TrustForm.PUBLISHERS),
            (self.make_key, TrustForm.MAKE_KEY),
            (self.passphrase, TrustForm.PASSPHRASE),
        ):
            button.clicked.connect(lambda _=False, form=form: self.form_asked.emit(form))
        self._column.addLayout(self._buttons)
        self.join.clicked.connect(self.library_asked)
        self.show_practice("")

    def show_settings(self, settings: Settings) -> None:
        """Show the library in force: that of the settings, or of the environment where it names one."""
        try:
            place = library_place(settings.library)
        except UsageError as error:
            self.place.setText(str(error))
            place = None
        else:
            named = (
                ""
                if place is None or str(place) == settings.library
                else " Whoever looks after this machine named it; it cannot be changed here."
            )
            self.place.setText(_NONE if place is None else f"Place: {place}.{named}")
        self._show_key(settings.practice_key)

    def _show_key(self, pinned: str) -> None:
        if pinned == self._pinned:
            return
        self._pinned = pinned
        if self.key is not None:
            self._column.removeWidget(self.key)
            self.key.hide()
            self.key.deleteLater()
        self.key = KeyPlate(pinned, _PINNED) if pinned else None
        if self.key is not None:
            self._column.insertWidget(self._key_place, self.key)

    def show_practice(self, practice: str) -> None:
        """Whose library it is, "" while nobody knows."""
        self.practice.setText(f"Practice: {practice}" if practice else "")
        self.practice.setVisible(bool(practice))

    def set_narrow(self, narrow: bool) -> None:
        """Buttons one under the other, or side by side."""
        direction = QBoxLayout.Direction.TopToBottom if narrow else QBoxLayout.Direction.LeftToRight
        self._buttons.setDirection(direction)
        for button in (self.join, self.publishers, self.make_key, self.passphrase):
            self._buttons.setAlignment(button, Qt.AlignmentFlag.AlignLeft if narrow else Qt.AlignmentFlag(0))

    def restore(self) -> bool:
        """Nothing is typed here."""
        return False
