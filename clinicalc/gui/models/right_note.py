"""The right side of the Models page while no model is shown in full: which one it is about, and a sentence."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError, CoefficientFileRefused
from clinicalc.gui.labels import make_label
from clinicalc.gui.scroller import Scroller
from clinicalc.gui.tokens import SHEET_MARGIN, SHEET_MARGIN_RIGHT
from clinicalc.gui.typeface import TITLE
from clinicalc.gui.window_words import sentence_of

_FOR_ITS_MAKER = (
    "Nothing of it was kept. Perhaps another file was meant; if not, whoever made this one needs to know what is wrong"
    " with it:"
)


class RightNote(Scroller):
    """Scrolls where a file has many problems."""

    def __init__(self) -> None:
        super().__init__()
        self.title = make_label("", TITLE, semibold=True)
        self.words = make_label("")
        self.words.setTextInteractionFlags(
            Qt.TextInteractionFlag.TextSelectableByMouse | Qt.TextInteractionFlag.TextSelectableByKeyboard
        )
        self.setWidgetResizable(True)
        self.setFocusPolicy(Qt.FocusPolicy.StrongFocus)
        inside = QWidget()
        inside.setObjectName("sheet")
        column = QVBoxLayout(inside)
        column.setContentsMargins(SHEET_MARGIN, 24, SHEET_MARGIN_RIGHT, 12)
        column.setSpacing(12)
        column.addWidget(self.title)
        column.addWidget(self.words)
        column.addStretch(1)
        self.setWidget(inside)

    def show_words(self, title: str, words: str) -> None:
        """Show a heading, which may be "", and what is to be said."""
        self.title.setText(title)
        self.title.setVisible(bool(title))
        self.words.setText(words)
        self.setAccessibleName(f"{title}. {words}" if title else words or "Nothing is shown")
        self.verticalScrollBar().setValue(0)

    def show_error(self, title: str, error: ClinicalcError) -> None:
        """Show why something cannot be shown, with every problem where it is a file's."""
        if isinstance(error, CoefficientFileRefused):
            self.show_words(title, "\n\n".join((_FOR_ITS_MAKER, *map(str, error.problems))))
            return
        self.show_words(title, sentence_of(error))

    def focus_first(self) -> None:
        """The focus to the sentence, where the arrow keys scroll."""
        self.setFocus(Qt.FocusReason.ShortcutFocusReason)
