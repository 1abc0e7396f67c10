"""The top of the sheet: number and small grid on one baseline, and beside them whom they are about."""

from collections.abc import Sequence

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.gui.figure_view import text_part
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_label
from clinicalc.gui.lanes import RULER_AT
from clinicalc.gui.number_face import GRID_AT, NumberFace, SmallGrid
from clinicalc.gui.typeface import HEADLINE

_GRID_DROP = 1
_ABOVE, _BETWEEN, _BELOW = 2, 5, 8


class Crown(Block):
    """Number, small grid, headline and sentence."""

    def __init__(self) -> None:
        super().__init__()
        part = text_part()
        self.number = NumberFace()
        self.small_grid = SmallGrid()
        self.headline = make_label("", HEADLINE, semibold=True)
        self.sentence = make_label()
        figures = QWidget()
        figures.setFixedSize(round(RULER_AT * part), self.number.height())
        self.number.setParent(figures)
        self.small_grid.setParent(figures)
        self.small_grid.move(round(GRID_AT * part), _GRID_DROP)
        words = QVBoxLayout()
        words.setContentsMargins(0, _ABOVE, 0, _BELOW)
        words.setSpacing(_BETWEEN)
        words.addWidget(self.headline)
        words.addWidget(self.sentence)
        words.addStretch(1)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        row.addWidget(figures, 0, Qt.AlignmentFlag.AlignTop)
        row.addLayout(words, 1)

    def keep_room(self, headlines: Sequence[str], sentences: Sequence[str], width: int) -> None:
        """Never be lower than the longest of these takes in a crown of this width."""
        beside = max(1, width - round(RULER_AT * text_part()))
        height = height_of(self.headline, headlines, beside) + height_of(self.sentence, sentences, beside)
        self.setMinimumHeight(height + _ABOVE + _BETWEEN + _BELOW)


def height_of(label: QLabel, texts: Sequence[str], width: int) -> int:
    """The height of the longest of these texts in such a label of this width; 0 for none."""
    probe = make_label()
    probe.setFont(label.font())
    heights = [0]
    for text in texts:
        probe.setText(text)
        heights.append(probe.heightForWidth(width))
    return max(heights)
