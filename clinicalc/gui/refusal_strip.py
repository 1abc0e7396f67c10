"""Why something was not done, said over the buttons and to a screen reader."""

from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent
from PySide6.QtWidgets import QFrame, QVBoxLayout

from clinicalc.errors import ClinicalcError
from clinicalc.gui.labels import make_label


class RefusalStrip(QFrame):
    """Out of sight while nothing is refused."""

    def __init__(self) -> None:
        super().__init__()
        self.setObjectName("stop")
        self.words = make_label("")
        column = QVBoxLayout(self)
        column.setContentsMargins(12, 8, 12, 8)
        column.addWidget(self.words)
        self.hide()

    def say(self, error: ClinicalcError) -> None:
        """Show the error as a sentence. A place at its head keeps its spelling: it is a file's name or a model's."""
        words = str(error)
        self.words.setText(words if error.where else f"{words[:1].upper()}{words[1:]}")
        self.show()
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self.words, self.words.text()))

    def clear(self) -> None:
        """Nothing is refused any more."""
        self.hide()
        self.words.setText("")
