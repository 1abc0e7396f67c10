"""The list of the steps: one is chosen; in a wide page from top to bottom, in a narrow one side by side."""

from collections.abc import Mapping

from PySide6.QtCore import (
    QAbstractListModel,
    QItemSelectionModel,
    QModelIndex,
    QObject,
    QPersistentModelIndex,
    QSize,
    Qt,
    Signal,
)
from PySide6.QtGui import QKeyEvent, QResizeEvent
from PySide6.QtWidgets import QAbstractItemView, QFrame, QListView

from clinicalc.gui.study.step_paint import LINE_HIGH, STEP, STEP_HIGH, StepPaint, share_row
from clinicalc.gui.study.steps import Step, StepLine

_Index = QModelIndex | QPersistentModelIndex
_NOWHERE = QModelIndex()


class _Steps(QAbstractListModel):
    def __init__(self, parent: QObject) -> None:
        super().__init__(parent)
        self.lines: dict[Step, StepLine] = {step: StepLine() for step in Step}

    def take(self, lines: Mapping[Step, StepLine]) -> None:
        self.lines.update(lines)
        self.dataChanged.emit(self.index(0), self.index(len(Step) - 1))

    def rowCount(self, parent: _Index = _NOWHERE) -> int:
        return 0 if parent.isValid() else len(Step)

    def data(self, index: _Index, role: int = Qt.ItemDataRole.DisplayRole) -> object:
        step = Step(index.row())
        if role == STEP:
            return step, self.lines[step]
        if role == Qt.ItemDataRole.DisplayRole:
            return step.title
        if role == Qt.ItemDataRole.AccessibleTextRole:
            return f"Step {step + 1} of {len(Step)}, {step.title}: {self.lines[step].says}"
        return None


class StepsList(QListView):
    """Tells which step somebody chose; what the page chooses itself is not told."""

    chosen = Signal(object)
    """The Step."""
    entered = Signal()
    """Enter: on to the step that is shown."""

    def __init__(self) -> None:
        super().__init__()
        self._steps = _Steps(self)
        self._paint = StepPaint()
        self._is_row = self._is_placing = False
        self.setFrameShape(QFrame.Shape.NoFrame)
        self.viewport().setAutoFillBackground(False)
        self.setModel(self._steps)
        self.setItemDelegate(self._paint)
        self.setAccessibleName("Steps of the study")
        self.setSelectionMode(QAbstractItemView.SelectionMode.SingleSelection)
        self.setEditTriggers(QAbstractItemView.EditTrigger.NoEditTriggers)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setWrapping(False)
        self.choose(Step.DATA)
        self.selectionModel().currentChanged.connect(self._tell)
        self.set_row(is_row=False)

    @property
    def step(self) -> Step:
        """The step that is chosen."""
        return Step(self.currentIndex().row())

    def says(self, step: Step) -> str:
        """What is said of a step."""
        return self._steps.lines[step].says

    def show_lines(self, lines: Mapping[Step, StepLine]) -> None:
        """Say these of their steps; the others stay."""
        self._steps.take(lines)

    def choose(self, step: Step) -> None:
        """Choose a step without telling."""
        self._is_placing = True
        index = self._steps.index(step)
        self.selectionModel().setCurrentIndex(index, QItemSelectionModel.SelectionFlag.ClearAndSelect)
        self._is_placing = False

    def set_row(self, *, is_row: bool) -> None:
        """Side by side without their lines, or from top to bottom with them."""
        self._is_row = is_row
        self.setFlow(QListView.Flow.LeftToRight if is_row else QListView.Flow.TopToBottom)
        self.setFixedHeight(LINE_HIGH if is_row else STEP_HIGH * len(Step))
        self._fit()

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Side by side the steps share the width."""
        super().resizeEvent(event)
        self._fit()

    def keyPressEvent(self, event: QKeyEvent) -> None:
        """Enter goes on to the right side; the arrows across a row do what those along a column do."""
        if event.key() in (Qt.Key.Key_Return, Qt.Key.Key_Enter):
            self.entered.emit()
            return
        super().keyPressEvent(event)

    def _fit(self) -> None:
        wide = max(1, self.viewport().width())
        sizes = share_row(wide) if self._is_row else [QSize(wide, STEP_HIGH)] * len(Step)
        if sizes != self._paint.sizes:
            self._paint.sizes, self._paint.is_row = sizes, self._is_row
            self.doItemsLayout()

    def _tell(self, now: QModelIndex, _: QModelIndex) -> None:
        if not self._is_placing and now.isValid():
            self.chosen.emit(Step(now.row()))
