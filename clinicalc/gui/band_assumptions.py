"""What the band assumes: the list that a coefficient file states for a band rebuilt from printed intervals."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.assessment.band_assumptions import assumptions_of
from clinicalc.assessment.model import Model
from clinicalc.gui.text_link import LINK_PADDING, OpenedText, TextLink

WHAT = "What the band assumes"
_CLOSE = "Close the assumptions"


class BandAssumptions(QWidget):
    """A link that opens the list in place; nothing at all for a model whose file states none.

    Its words begin `LINK_PADDING` from its left edge.
    """

    def __init__(self) -> None:
        super().__init__()
        self.link = TextLink(WHAT)
        self.text = OpenedText(WHAT)
        self._lines: tuple[str, ...] = ()
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 2, 0, 0)
        column.setSpacing(4)
        column.addWidget(self.link, 0, Qt.AlignmentFlag.AlignLeft)
        inside = QVBoxLayout()
        inside.setContentsMargins(LINK_PADDING, 0, 0, 0)
        inside.addWidget(self.text)
        column.addLayout(inside)
        self.link.clicked.connect(self._toggle)
        self.hide()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The link and what it opens."""
        return (self.link, self.text)

    def show_model(self, model: Model | None, equation: str | None) -> None:
        """Have the list of one equation at hand, or while none has answered that of all of them."""
        found = () if model is None else assumptions_of(model, equation)
        self._lines = tuple(f"• {assumption}" for assumption in found)
        self.setVisible(bool(self._lines))
        if not self.text.isHidden():
            self.text.show_lines(list(self._lines))

    def _toggle(self) -> None:
        self.text.setVisible(self.text.isHidden())
        self.link.say(WHAT if self.text.isHidden() else _CLOSE)
        self.text.show_lines([] if self.text.isHidden() else list(self._lines))
