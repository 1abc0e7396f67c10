"""The fields of one decision point: model, horizon, probability, what is done there, who says so."""

from collections.abc import Sequence
from decimal import Decimal, InvalidOperation

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError
from clinicalc.gui.chooser import FramedChooser
from clinicalc.gui.form import FIELD
from clinicalc.gui.form_fields import TextField
from clinicalc.gui.labels import make_button, make_label
from clinicalc.gui.practice.setting_row import SettingRow
from clinicalc.gui.practice.typed_shares import read_share, share_words
from clinicalc.gui.typeface import UNIT
from clinicalc.settings import PracticePoint
from clinicalc.units.quoting import quote

_UNITS = (("years", "a"), ("months", "mo"), ("weeks", "wk"), ("days", "d"))
_BY_ID = "another model, by its id"
_LONGEST = 400


def horizon_words(point: PracticePoint) -> str:
    """The horizon of a point, such as "10 years"."""
    return Span(point.time, point.unit).words


class PointFields(QWidget):
    """Nothing is taken before the button is pressed: a point is one thing."""

    asked = Signal()
    given_up = Signal()

    def __init__(self) -> None:
        super().__init__()
        self.model = FramedChooser(FIELD)
        self.id = TextField(FIELD, _LONGEST)
        self.time, self.unit = TextField(84, 20), FramedChooser(120)
        self.probability = TextField(84, 20)
        self.does, self.source = TextField(FIELD, _LONGEST), TextField(FIELD, _LONGEST)
        self.unit.chooser.setAccessibleName("Horizon, unit")
        self.unit.chooser.offer(_UNITS, 0)
        self.add, self.leave = make_button("Add it", pixels=UNIT), make_button("Do not add", pixels=UNIT)
        self.refusal = make_label("", UNIT, semibold=True)
        self.refusal.hide()
        self._rows = self._make_rows()
        self._lay_out()
        self.offer_models(())
        self.model.chooser.currentIndexChanged.connect(self._show_id)
        for field in (self.id, self.time, self.probability, self.does, self.source):
            field.edit.returnPressed.connect(self.asked)
        self.add.clicked.connect(self.asked)
        self.leave.clicked.connect(self.given_up)

    @property
    def stops(self) -> tuple[QWidget, ...]:
        """What the tab key stops at, in order."""
        fields = (self.probability.edit, self.does.edit, self.source.edit)
        return (self.model.chooser, self.id.edit, self.time.edit, self.unit.chooser, *fields, self.add, self.leave)

    def offer_models(self, models: Sequence[tuple[str, str]]) -> None:
        """The models in use, as (id, title); any other is named by its id."""
        entries = [(f"{title} ({id})", id) for id, title in models]
        self.model.chooser.offer([*entries, (_BY_ID, "")], 0)
        self._show_id()

    def set_narrow(self, narrow: bool) -> None:
        """Names over the fields, or beside them."""
        for row in self._rows:
            row.set_narrow(narrow)

    def focus_first(self) -> None:
        """The focus to the first field."""
        self.model.chooser.setFocus(Qt.FocusReason.OtherFocusReason)

    def fill(self, point: PracticePoint) -> None:
        """Show the parts of a point."""
        place = self.model.chooser.findData(point.model)
        self.model.chooser.show_place(place if place >= 0 else self.model.chooser.count() - 1)
        self.id.edit.setText("" if place >= 0 else point.model)
        self.time.edit.setText(f"{point.time:g}")
        self.unit.chooser.show_place(self.unit.chooser.findData(point.unit))
        self.probability.edit.setText(share_words(point.probability))
        self.does.edit.setText(point.label)
        self.source.edit.setText(point.source)
        self._show_id()

    def clear(self) -> None:
        """Empty every field."""
        for field in (self.id, self.time, self.probability, self.does, self.source):
            field.edit.clear()
        self.refusal.hide()

    def point(self) -> PracticePoint:
        """The point as it is written. Raises UsageError, naming the part, where it is none."""
        model = str(self.model.chooser.currentData()) or self.id.text
        if not model:
            raise UsageError("the model’s id is empty.", do="It stands on the Models page, such as tarnwick-cvd-10y.")
        return PracticePoint(
            model,
            _number(self.time.text),
            str(self.unit.chooser.currentData()),
            read_share(self.probability.text, "its probability"),
            self.does.text,
            self.source.text,
        )

    def refuse(self, words: str) -> None:
        """Say why it is no decision point."""
        self.refusal.setText(f"Not added: {words}")
        self.refusal.show()
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, self.refusal.text()))

    def _show_id(self) -> None:
        self._rows[1].setVisible(not self.model.chooser.currentData())

    def _make_rows(self) -> tuple[SettingRow, ...]:
        horizon = QWidget()
        row = QHBoxLayout(horizon)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(0)
        row.addWidget(self.time)
        row.addWidget(self.unit)
        row.addStretch(1)
        return (
            SettingRow("Model", self.model, self.model.chooser),
            SettingRow("Its id", self.id, self.id.edit),
            SettingRow("Horizon", horizon, self.time.edit, "The point holds at this horizon alone."),
            SettingRow("Probability", self.probability, self.probability.edit, "Such as 10\u202f% or 0.1."),
            SettingRow("What is done there", self.does, self.does.edit),
            SettingRow("Who says so", self.source, self.source.edit, "Such as a guideline with its year."),
        )

    def _lay_out(self) -> None:
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(4)
        for row in self._rows:
            column.addWidget(row)
        column.addWidget(self.refusal)
        foot = QHBoxLayout()
        foot.setSpacing(8)
        foot.addWidget(self.add)
        foot.addWidget(self.leave)
        foot.addStretch(1)
        column.addLayout(foot)


def _number(text: str) -> float:
    try:
        number = Decimal(text.replace(",", "."))
    except InvalidOperation:
        number = Decimal("NaN")
    if not number.is_finite():
        raise UsageError(f"its horizon {quote(text)} is not a number." if text else "its horizon is empty.")
    return float(number)
