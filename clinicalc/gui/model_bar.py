"""The bar that says which model answers: title, version, fingerprint, state, and the choices the file offers."""

from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.assessment.model import Model
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.chooser import FramedChooser
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.labels import make_line
from clinicalc.gui.model_chooser import ModelChooser
from clinicalc.gui.tokens import RING, SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION

_HEIGHT = 57
_TIGHT_CAPTION = 15
_GAP = 28
_CHOOSER_HEIGHT = 32
_NOT_CHOSEN = "Choose…"
_AS_PUBLISHED = "None: as published"


class Cell(QWidget):
    """A caption and, under it, one line or one chooser."""

    def __init__(self, caption: str, inside: QLabel | FramedChooser) -> None:
        super().__init__()
        head = make_line(caption, CAPTION, soft=True)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 10, 0, 0)
        column.setSpacing(2)
        column.addWidget(head)
        column.addWidget(inside)
        column.addStretch(1)
        if isinstance(inside, FramedChooser):
            column.setSpacing(0)
            inside.setFixedHeight(_CHOOSER_HEIGHT)
            head.setContentsMargins(RING, 0, 0, 0)
            head.setFixedHeight(_TIGHT_CAPTION)


class ModelBar(QWidget):
    """Reads the model from the state, and writes the choices about it back; a choice is never made for anybody."""

    def __init__(self, state: EntryState) -> None:
        super().__init__()
        self._state = state
        self.setFixedHeight(_HEIGHT)
        self.setObjectName("ground")
        self._is_narrow = False
        self.chooser = ModelChooser()
        self.version, self.fingerprint, self.vetting = make_line(), make_line(), make_line()
        self.horizon, self.recalibration = FramedChooser(104), FramedChooser(176)
        self.horizon_cell = Cell("Horizon", self.horizon)
        self.recalibration_cell = Cell("Recalibration", self.recalibration)
        self.horizon.chooser.setAccessibleName("Horizon")
        self.recalibration.chooser.setAccessibleName("Recalibration")
        self._facts = (
            Cell("Version", self.version),
            Cell("Fingerprint", self.fingerprint),
            Cell("State", self.vetting),
        )
        row = QHBoxLayout(self)
        row.setContentsMargins(SIDE_MARGIN - RING, 0, SIDE_MARGIN, 0)
        row.setSpacing(_GAP)
        row.addWidget(self.chooser, 20)
        for cell in (*self._facts, self.horizon_cell, self.recalibration_cell):
            row.addWidget(cell)
            cell.hide()
        row.addStretch(1)
        self.horizon.chooser.currentIndexChanged.connect(self._choose_horizon)
        self.recalibration.chooser.currentIndexChanged.connect(self._choose_recalibration)
        self.horizon.chooser.entered.connect(self.focusNextChild)
        self.recalibration.chooser.entered.connect(self.focusNextChild)
        state.model_changed.connect(self._take_model)

    def set_narrow(self, narrow: bool) -> None:
        """Narrow: the choices only; what the model is stands elsewhere."""
        self._is_narrow = narrow
        self._show_facts()

    def _show_facts(self) -> None:
        for cell in self._facts:
            cell.setVisible(self._state.model is not None and not self._is_narrow)

    def _take_model(self) -> None:
        model = self._state.model
        if model is None:
            return
        self.chooser.show_title(model.content.title)
        self.version.setText(model.content.version)
        self.fingerprint.setText(group_fingerprint(model.fingerprint, 3))
        self.vetting.setText("Not vetted")
        self._show_facts()
        self._offer_horizons(model)
        self._offer_recalibrations(model)

    def _offer_horizons(self, model: Model) -> None:
        entries = [(_NOT_CHOSEN, None), *((span.words, None) for span in model.spans)]
        place = 0 if self._state.span is None else model.spans.index(self._state.span) + 1
        self.horizon.chooser.offer(entries, place)
        self.horizon_cell.setVisible(len(model.spans) > 1)

    def _offer_recalibrations(self, model: Model) -> None:
        span = self._state.span
        offered = () if span is None else model.recalibrations_at(span)
        nothing = _NOT_CHOSEN if model.content.recalibration_required else _AS_PUBLISHED
        ids = [None, *(recalibration.id for recalibration in offered)]
        words = [nothing, *(recalibration.label for recalibration in offered)]
        place = ids.index(self._state.recalibration) if self._state.recalibration in ids else 0
        self.recalibration.chooser.offer(list(zip(words, ids, strict=True)), place)
        self.recalibration_cell.setVisible(bool(offered))

    def _choose_horizon(self, place: int) -> None:
        model = self._state.model
        if model is None:
            return
        self._state.choose_span(None if place == 0 else model.spans[place - 1])
        self._offer_recalibrations(model)

    def _choose_recalibration(self, place: int) -> None:
        id = self.recalibration.chooser.itemData(place)
        self._state.choose_recalibration(None if id is None else str(id))
