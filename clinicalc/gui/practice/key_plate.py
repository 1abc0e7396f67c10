"""The id of a key on a plate, sixteen groups of four in lines of four, to be read aloud."""

from PySide6.QtGui import QPaintEvent
from PySide6.QtWidgets import QGridLayout, QSizePolicy, QVBoxLayout, QWidget

from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.labels import make_line
from clinicalc.gui.plate import paint_plate
from clinicalc.gui.typeface import CAPTION, TITLE

_IN_A_LINE = 4


class KeyPlate(QWidget):
    """`heading` says whose key it is, `foot` what is done with the id."""

    def __init__(self, id: str, heading: str, foot: str = "") -> None:
        super().__init__()
        grouped = group_fingerprint(id)
        self.setAccessibleName(f"{heading}: {grouped}")
        self.setSizePolicy(QSizePolicy.Policy.Fixed, QSizePolicy.Policy.Fixed)
        grid = QGridLayout()
        grid.setHorizontalSpacing(24)
        grid.setVerticalSpacing(2)
        for place, group in enumerate(grouped.split(" ")):
            line, column = divmod(place, _IN_A_LINE)
            grid.addWidget(make_line(group, TITLE), line, column)
        rows = QVBoxLayout(self)
        rows.setContentsMargins(20, 12, 20, 12)
        rows.setSpacing(6)
        rows.addWidget(make_line(heading, CAPTION, soft=True))
        rows.addLayout(grid)
        if foot:
            rows.addWidget(make_line(foot, CAPTION, soft=True))

    def paintEvent(self, event: QPaintEvent) -> None:
        """Wash with an edge round it."""
        paint_plate(self)
