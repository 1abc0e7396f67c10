"""The heading of a group of values, and the names of the columns under the first of them."""

from PySide6.QtWidgets import QHBoxLayout, QWidget

from clinicalc.gui.changed_place import BESIDE_ROOM
from clinicalc.gui.labels import make_line, make_rule
from clinicalc.gui.tokens import COLUMN_GAP, FRAME_WIDTH, LABEL_WIDTH, RING
from clinicalc.gui.typeface import CAPTION

_GAP = 10
_HEIGHT = 24
_OWN_ENDS = LABEL_WIDTH + COLUMN_GAP + RING + FRAME_WIDTH
"""Where the frames of the patient's own values end, from the left edge of their row."""
_CHANGED_WIDTH = RING + RING + BESIDE_ROOM - RING
"""From there to where the frames of changed values end."""
_LARGEST = 16_777_215
"""What Qt calls no limit to a width."""


class ValuesHeading(QWidget):
    """A small heading with a rule to the right edge; columns may be named over it, each at its right end."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.label = make_line(text, CAPTION, semibold=True)
        self.range = make_line("derivation range", CAPTION, soft=True)
        self.own = make_line("as entered", CAPTION, soft=True)
        self.changed = make_line("with changes", CAPTION, soft=True)
        self._left, self._middle = QWidget(), QWidget()
        left, middle = QHBoxLayout(self._left), QHBoxLayout(self._middle)
        for row in (left, middle):
            row.setContentsMargins(0, 0, 0, 0)
            row.setSpacing(_GAP)
        left.addWidget(self.label)
        left.addWidget(make_rule(), 1)
        left.addWidget(self.own)
        middle.setContentsMargins(_GAP, 0, 0, 0)
        middle.addWidget(make_rule(), 1)
        middle.addWidget(self.changed)
        self._middle.setFixedWidth(_CHANGED_WIDTH)
        self.range.setContentsMargins(_GAP, 0, 0, 0)
        whole = QHBoxLayout(self)
        whole.setContentsMargins(0, 0, RING, 0)
        whole.setSpacing(0)
        whole.addWidget(self._left, 1)
        whole.addWidget(self._middle)
        whole.addWidget(self.range)
        whole.addStretch(0)
        self.setFixedHeight(_HEIGHT)
        self.name_columns(ranges=False, changes=False)

    def name_columns(self, *, ranges: bool, changes: bool) -> None:
        """Name the column of ranges, or those of both values; a heading too long for the latter stays without."""
        changes = changes and self.label.sizeHint().width() + self.own.sizeHint().width() + 2 * _GAP <= _OWN_ENDS
        self.range.setVisible(ranges)
        self.own.setVisible(changes)
        self._middle.setVisible(changes)
        self._left.setMaximumWidth(_OWN_ENDS if changes else _LARGEST)
