"""The bar that says which model answers: title, version, fingerprint, state, and the choices the file offers."""

from datetime import date

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.assessment.model import Model
from clinicalc.assessment.vetting import Vetting
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.gui.chooser import FramedChooser
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.labels import make_line
from clinicalc.gui.model_chooser import ModelChooser
from clinicalc.gui.tokens import RING, SIDE_MARGIN
from clinicalc.gui.typeface import CAPTION
from clinicalc.report.phrases import vetting_words
from clinicalc.units.days import day_words

_HEIGHT = 57
_TIGHT_CAPTION = 15
_GAP = 28
_CHOOSER_HEIGHT = 32
_NOT_CHOSEN = "Choose…"
_AS_PUBLISHED = "None: as published"
_APPROVER_ROOM, _RECALIBRATION_ROOM = 196, 150
_SHORT = 5
_NOT_VETTED, _NOT_IN_USE = "Not vetted", "Not in use"


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
        self.approved, self.review, self.fixed_recalibration = make_line(), make_line(), make_line()
        self.horizon, self.recalibration = FramedChooser(104), FramedChooser(176)
        self.horizon_cell = Cell("Horizon", self.horizon)
        self.recalibration_cell = Cell("Recalibration", self.recalibration)
        self.horizon.chooser.setAccessibleName("Horizon")
        self.recalibration.chooser.setAccessibleName("Recalibration")
        self._facts = (Cell("Version", self.version), Cell("Fingerprint", self.fingerprint))
        self._state_cell = Cell("State", self.vetting)
        self._approval_cells = (Cell("Approved", self.approved), Cell("Review by", self.review))
        self._fixed_cell = Cell("Recalibration", self.fixed_recalibration)
        row = QHBoxLayout(self)
        row.setContentsMargins(SIDE_MARGIN - RING, 0, SIDE_MARGIN, 0)
        row.setSpacing(_GAP)
        row.addWidget(self.chooser, 20)
        stated = (*self._facts, self._state_cell, *self._approval_cells, self._fixed_cell)
        for cell in (*stated, self.horizon_cell, self.recalibration_cell):
            row.addWidget(cell)
            cell.hide()
        row.addStretch(1)
        self.horizon.chooser.currentIndexChanged.connect(self._choose_horizon)
        self.recalibration.chooser.currentIndexChanged.connect(self._choose_recalibration)
        self.horizon.chooser.entered.connect(self.focusNextChild)
        self.recalibration.chooser.entered.connect(self.focusNextChild)
        state.model_changed.connect(self._take_model)
        state.approval_changed.connect(self._show_facts)

    def set_narrow(self, narrow: bool) -> None:
        """Narrow: the choices only; what the model is stands elsewhere."""
        self._is_narrow = narrow
        self._show_facts()

    def _show_facts(self) -> None:
        vetting, model = self._state.vetting, self._state.model
        in_force = vetting is not None and not self._state.withheld
        shown = model is not None and not self._is_narrow
        for cell in self._facts:
            cell.setVisible(shown)
        self._state_cell.setVisible(shown and not in_force)
        for cell in self._approval_cells:
            cell.setVisible(shown and in_force)
        self.vetting.setText(_NOT_VETTED if vetting is None else _NOT_IN_USE)
        label = "" if vetting is None or model is None else _label_of(model, vetting.recalibration)
        self._fixed_cell.setVisible(bool(label))
        _set(self.fixed_recalibration, label, _RECALIBRATION_ROOM)
        if vetting is not None:
            _set(self.approved, f"{_short_day(vetting.approved_on)}, {vetting.approved_by}", _APPROVER_ROOM)
            self.approved.setToolTip(_as_tip(f"{vetting_words(vetting)}. {vetting.practice}."))
            self.approved.setAccessibleName(_in_full(vetting))
            self.review.setText(_short_day(vetting.review_until))

    def _take_model(self) -> None:
        model = self._state.model
        if model is None:
            self.chooser.show_title("")
            self._show_facts()
            self.horizon_cell.hide()
            self.recalibration_cell.hide()
            return
        self.chooser.show_title(model.content.title)
        self.version.setText(model.content.version)
        self.fingerprint.setText(group_fingerprint(model.fingerprint, 3))
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
        self.recalibration_cell.setVisible(bool(offered) and self._state.approved is None)

    def _choose_horizon(self, place: int) -> None:
        model = self._state.model
        if model is None:
            return
        self._state.choose_span(None if place == 0 else model.spans[place - 1])
        self._offer_recalibrations(model)

    def _choose_recalibration(self, place: int) -> None:
        id = self.recalibration.chooser.itemData(place)
        self._state.choose_recalibration(None if id is None else str(id))


def _label_of(model: Model, id: str | None) -> str:
    """The label of the recalibration that was approved, "" for none."""
    return next((one.label for one in model.content.recalibrations if one.id == id), "")


def _in_full(vetting: Vetting) -> str:
    return f"Approved on {day_words(vetting.approved_on)}. {vetting_words(vetting)}."


def _short_day(day: date) -> str:
    """A day where there is little room: "1 Dec 2026", "30 June 2027"."""
    number, month, year = day_words(day).split(" ")
    return f"{number} {month if len(month) < _SHORT else month[:3]} {year}"


def _set(line: QLabel, words: str, room: int) -> None:
    """The words in this many pixels; their end left out where they are longer, and then whole in the tip."""
    shown = line.fontMetrics().elidedText(words, Qt.TextElideMode.ElideRight, room)
    line.setText(shown)
    line.setAccessibleName(words)
    line.setToolTip("" if shown == words else _as_tip(words))


def _as_tip(words: str) -> str:
    """As markup, for Qt guesses whether a tip is."""
    import html  # a table of all of its names for letters comes with it

    return f"<qt>{html.escape(words)}</qt>"
