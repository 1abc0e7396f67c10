"""The words under the ruler's axis: why there is no band, the decision points, what band and spread say."""

from collections.abc import Sequence

from PySide6.QtWidgets import QLabel, QVBoxLayout, QWidget

from clinicalc.assessment.decision import DecisionPoint
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.gui.band_assumptions import BandAssumptions
from clinicalc.gui.crown import height_of
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_label
from clinicalc.gui.text_link import LINK_PADDING
from clinicalc.gui.typeface import CAPTION
from clinicalc.gui.wording import longest_decision_words
from clinicalc.operations.beside_lines import decision_lines
from clinicalc.report.measured import Lane
from clinicalc.report.phrases import BAND_MEANING, band_meaning, rebuilt_words
from clinicalc.report.phrases_spread import spread_meaning


class AxisWords(Block):
    """Its words begin `LINK_PADDING` from its left edge. What comes and goes with a number keeps its room."""

    def __init__(self) -> None:
        super().__init__()
        self.band_reason = make_label("", CAPTION)
        self.decided = make_label("", CAPTION)
        self.meaning = make_label(BAND_MEANING, CAPTION, soft=True)
        self.meaning.setContentsMargins(0, 4, 0, 0)  # apart from the reason why there is no band
        self.assumptions = BandAssumptions()
        # boxes of their own keep the room: a label that is empty clings to the least height it once had
        self._rooms = (_room_for(self.band_reason), _room_for(self.decided))
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        for part in (*self._rooms, self.meaning):
            inset = QVBoxLayout()
            inset.setContentsMargins(LINK_PADDING, 0, 0, 0)
            inset.addWidget(part)
            column.addLayout(inset)
        column.addWidget(self.assumptions)
        for label in (self.band_reason, self.decided, self.meaning):
            label.hide()

    def keep_room(self, model: Model, points: Sequence[DecisionPoint], width: int) -> None:
        """Reserve what the longest words of a number take where the words are so wide."""
        because = {line.no_band_because for equation in model.equations for line in equation.lines} - {""}
        decided = [longest_decision_words(model, points)] if points else []
        longest = ([_no_band(reason) for reason in because], decided)
        for room, label, texts in zip(self._rooms, (self.band_reason, self.decided), longest, strict=True):
            room.setMinimumHeight(height_of(label, texts, width))

    def show_words(self, model: Model | None, lanes: tuple[Lane, ...], assessment: Assessment | None) -> None:
        """The words that belong to an assessment with these lanes; without a number only what is always said."""
        estimate = None if assessment is None else assessment.estimate
        absent = "" if estimate is None or estimate.band is not None else estimate.band_absent_because
        _say(self.band_reason, _no_band(absent) if absent else "")
        _say(self.decided, "" if assessment is None or estimate is None else "\n".join(decision_lines(assessment)))
        for label in (self.band_reason, self.decided):
            label.setVisible(bool(label.text()))
        if model is not None:
            _say(self.meaning, _meaning(model, lanes, estimate))
        self.meaning.setVisible(model is not None)
        self.assumptions.show_model(model, None if assessment is None else assessment.equation)


def _room_for(label: QLabel) -> QWidget:
    room = Block()
    inside = QVBoxLayout(room)
    inside.setContentsMargins(0, 0, 0, 0)
    inside.addWidget(label)
    return room


def _meaning(model: Model, lanes: tuple[Lane, ...], estimate: Estimate | None) -> str:
    """What band and spread say and do not say; where the spread has no width, that this is no promise."""
    said = [band_meaning(estimate), rebuilt_words(model.content)]
    if Lane.SPREAD in lanes:
        spread = None if estimate is None else estimate.spread
        said.append(spread_meaning(spread))
    return " ".join(filter(None, said))


def _no_band(reason: str) -> str:
    return f"No band: {reason}"


def _say(label: QLabel, words: str) -> None:
    """Other words; the same ones again ask for no layout."""
    if label.text() != words:
        label.setText(words)
