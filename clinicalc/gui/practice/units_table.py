"""The unit in which a practice types each quantity: a chooser for every quantity that has more than one."""

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QLabel, QWidget

from clinicalc.gui.chooser import FramedChooser
from clinicalc.gui.labels import make_label
from clinicalc.settings import Settings, choosable_quantities
from clinicalc.units.unit import unit

AS_THE_FILE_SAYS = "as the file says"
_LABEL, _CHOOSER = 196, 172


class UnitsTable(QWidget):
    """Two columns of rows, or one in a narrow page."""

    chosen = Signal(str, str)
    """The quantity's id and the UCUM code, "" for what the file says."""

    def __init__(self) -> None:
        super().__init__()
        self.choosers: dict[str, FramedChooser] = {}
        self._cells: list[QWidget] = []
        for entry in choosable_quantities():
            field = FramedChooser(_CHOOSER)
            field.chooser.setAccessibleName(f"{entry.label}, unit")
            field.chooser.offer([(AS_THE_FILE_SAYS, ""), *((unit(code).spelling, code) for code in entry.units)], 0)
            field.chooser.currentIndexChanged.connect(lambda _, id=entry.id: self._tell(id))
            field.chooser.entered.connect(lambda: self.focusNextChild())
            self.choosers[entry.id] = field
            self._cells.append(_cell(make_label(entry.label), field))
        self._grid = QGridLayout(self)
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setVerticalSpacing(0)
        self._grid.setHorizontalSpacing(28)
        self._grid.setColumnStretch(2, 1)
        for before, cell in zip(self._cells, self._cells[1:], strict=False):
            QWidget.setTabOrder(before, cell)
        self.set_narrow(False)

    def set_narrow(self, narrow: bool) -> None:
        """One column, or two that are read downwards."""
        rows = len(self._cells) if narrow else (len(self._cells) + 1) // 2
        for place, cell in enumerate(self._cells):
            self._grid.addWidget(cell, place % rows, place // rows, Qt.AlignmentFlag.AlignLeft)

    def show_settings(self, settings: Settings) -> None:
        """Show the units in force."""
        for id, field in self.choosers.items():
            field.chooser.show_place(max(0, field.chooser.findData(settings.unit_of(id))))

    def _tell(self, id: str) -> None:
        self.chosen.emit(id, str(self.choosers[id].chooser.currentData()))


def _cell(label: QLabel, field: FramedChooser) -> QWidget:
    cell = QWidget()
    label.setFixedWidth(_LABEL)
    label.setBuddy(field.chooser)
    row = QHBoxLayout(cell)
    row.setContentsMargins(0, 0, 0, 0)
    row.setSpacing(8)
    row.addWidget(label)
    row.addWidget(field)
    return cell
