"""The practice's decision points as rows: the risk in per cent, what is done there, and where that was agreed."""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QGridLayout, QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.coefficients.schema import DecisionPoint
from clinicalc.errors import UsageError
from clinicalc.gui.form_deed import refuse_at
from clinicalc.gui.form_fields import TextField
from clinicalc.gui.labels import make_button, make_label, make_line
from clinicalc.gui.tokens import RING
from clinicalc.gui.typeface import UNIT
from clinicalc.settings import MOST_POINTS
from clinicalc.units.quoting import quote
from clinicalc.units.reading import Unreadable, read_value

_RISK, _LABEL, _SOURCE = 96, 190, 230
_LEAST = 96
_LONGEST_LABEL, _LONGEST_SOURCE = 80, 300


class RiskField(TextField):
    """A risk in per cent, the sign within its frame."""

    def __init__(self) -> None:
        super().__init__(_RISK, 20)
        self.edit.setAlignment(Qt.AlignmentFlag.AlignRight)
        self.sign = make_line("%", UNIT, soft=True)
        self.sign.setContentsMargins(2, 0, RING + 3, 0)
        room = self.layout()
        if room is not None:
            room.addWidget(self.sign)

    def probability(self) -> float:
        """The risk as a probability between 0 and 1. Raises UsageError for what is no risk."""
        text = self.text.removesuffix("%").strip()
        read = read_value(text, ask_about_comma=False)
        if isinstance(read, Unreadable) or read.unit is not None or read.dated is not None or read.averaged is not None:
            if not text:
                raise UsageError("a decision point has no risk.", do="Type it in per cent, such as 10 for 10\u202f%.")
            raise UsageError(
                f"{quote(self.text)} is no risk in per cent.", do="Type one number, such as 10 for 10\u202f%."
            )
        risk = Fraction(read.digits) / 100
        if not 0 < risk < 1:
            raise UsageError(
                f"a decision point at {read.digits}\u202f% is not possible; a risk lies between 0 and 100\u202f%.",
                do="Type it in per cent, such as 10 for 10\u202f%.",
            )
        return float(risk)


class PointRow:
    """The fields of one decision point."""

    def __init__(self, place: int) -> None:
        self.risk = RiskField()
        self.label = TextField(_LABEL, _LONGEST_LABEL)
        self.source = TextField(_SOURCE, _LONGEST_SOURCE)
        for field in (self.label, self.source):
            field.setMinimumWidth(_LEAST)  # in a narrow form they give way
        self.remove = make_button("Remove", pixels=UNIT)
        self.said = make_label("", UNIT, soft=True)
        self.said.setContentsMargins(RING, 0, 0, 2)
        named = (("risk in per cent", self.risk.edit), ("what is done", self.label.edit), ("source", self.source.edit))
        for what, edit in named:
            edit.setAccessibleName(f"Decision point {place}: {what}")
        self.remove.setAccessibleName(f"Remove decision point {place}")
        self.risk.edit.textChanged.connect(self._say)

    @property
    def is_empty(self) -> bool:
        """Whether nothing is typed in the row."""
        return not (self.risk.text or self.label.text or self.source.text)

    def fill(self, point: DecisionPoint) -> None:
        """Show a point."""
        # the shortest decimal that is this float, as exact as the file wrote it
        per_cent = Fraction(repr(point.probability)) * 100
        self.risk.edit.setText(_decimal(per_cent))
        self.label.edit.setText(point.label)
        self.source.edit.setText(point.source)
        self.source.edit.setCursorPosition(0)  # a long one is read from its beginning

    def read(self) -> DecisionPoint:
        """The point, refused at the field that is wrong."""
        try:
            probability = self.risk.probability()
        except UsageError as error:
            refuse_at(error, self.risk.edit)
        for field, what in ((self.label, "what is done there"), (self.source, "where that was agreed")):
            if not field.text:
                risk = self.risk.text.removesuffix("%").strip()
                nothing = UsageError(f"of the decision point at {risk}\u202f% it is not said {what}.", do="Say it.")
                refuse_at(nothing, field.edit)
        return DecisionPoint(probability, self.label.text, self.source.text)

    def _say(self) -> None:
        """A risk under 1 % is said in words: 0.1 is typed by those who mean 10 %."""
        try:
            risk = self.risk.probability()
        except UsageError:
            risk = 1.0
        text = self.risk.text.removesuffix("%").strip()
        self.said.setText(f"{text}\u202f% is 1 in {1 / risk:.0f}." if risk < 0.01 else "")
        if self.said.parent() is not None:
            self.said.setVisible(bool(self.said.text()))


class DecisionRows(QWidget):
    """Rows that are added and taken away; the file's own points can be taken over."""

    changed = Signal()

    def __init__(self, own: Iterable[DecisionPoint]) -> None:
        super().__init__()
        self.rows: list[PointRow] = []
        self._own = tuple(own)
        self._grid = QGridLayout()
        self._grid.setContentsMargins(0, 0, 0, 0)
        self._grid.setHorizontalSpacing(2)
        self._grid.setVerticalSpacing(0)
        self._heads = [make_line(words, UNIT, soft=True) for words in ("Risk", "What is done there", "Source")]
        self.add = make_button("Add a &decision point", pixels=UNIT)
        count = len(self._own)
        self.take_over = make_button(f"&Take over the file’s own ({count})", pixels=UNIT)
        if not count:
            self.take_over.hide()  # to show it here would open a window of its own: it has no parent yet
        buttons = QHBoxLayout()
        buttons.setContentsMargins(RING, 4, 0, 0)
        buttons.setSpacing(8)
        buttons.addWidget(self.add)
        buttons.addWidget(self.take_over)
        buttons.addStretch(1)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(buttons)  # above the rows: the tab key goes on from them into the rows
        column.addLayout(self._grid)
        self.add.clicked.connect(self._add_empty)
        self.take_over.clicked.connect(self._take_over)
        self._arrange()

    def fill(self, points: Iterable[DecisionPoint]) -> None:
        """Show these points after those that stand there."""
        for point in points:
            self._append().fill(point)
        self._arrange()

    def points(self) -> tuple[DecisionPoint, ...]:
        """The points as typed; rows in which nothing is typed are none. A wrong one is refused at its field."""
        return tuple(row.read() for row in self.rows if not row.is_empty)

    def _add_empty(self) -> None:
        row = self._append()
        self._arrange()
        row.risk.edit.setFocus(Qt.FocusReason.OtherFocusReason)

    def _take_over(self) -> None:
        there = {(row.risk.text, row.label.text) for row in self.rows}
        fresh = [point for point in self._own if (_decimal(_per_cent(point)), point.label) not in there]
        self.fill(fresh)
        self.rows[-1].risk.edit.setFocus(Qt.FocusReason.OtherFocusReason)

    def _append(self) -> PointRow:
        row = PointRow(len(self.rows) + 1)
        self.rows.append(row)
        row.remove.clicked.connect(lambda: self._remove(row))
        for edit, onward in ((row.risk.edit, row.label.edit), (row.label.edit, row.source.edit)):
            edit.returnPressed.connect(lambda to=onward: to.setFocus(Qt.FocusReason.TabFocusReason))
        row.source.edit.returnPressed.connect(lambda: self.add.setFocus(Qt.FocusReason.TabFocusReason))
        return row

    def _remove(self, row: PointRow) -> None:
        place = self.rows.index(row)
        self.rows.remove(row)
        for widget in (row.risk, row.label, row.source, row.remove, row.said):
            widget.hide()
            widget.deleteLater()
        self._arrange()
        # the focus to the row that came up, so that several can be taken away one after the other
        nearest: QWidget = self.rows[min(place, len(self.rows) - 1)].remove if self.rows else self.add
        nearest.setFocus(Qt.FocusReason.OtherFocusReason)

    def _arrange(self) -> None:
        while self._grid.count():
            self._grid.takeAt(0)
        for column, head in enumerate(self._heads):
            head.setContentsMargins(RING, 0, 0, 0)
            head.setVisible(bool(self.rows))
            self._grid.addWidget(head, 0, column)
        before: QWidget = self.take_over
        for place, row in enumerate(self.rows):
            for column, widget in enumerate((row.risk, row.label, row.source, row.remove)):
                self._grid.addWidget(widget, 1 + 2 * place, column)
                widget.show()
            self._grid.addWidget(row.said, 2 + 2 * place, 0, 1, 4)
            row.said.setVisible(bool(row.said.text()))
            before = _in_order(before, (row.risk.edit, row.label.edit, row.source.edit, row.remove))
        self._grid.setColumnStretch(4, 1)
        self.add.setEnabled(len(self.rows) < MOST_POINTS)
        self.changed.emit()


def _in_order(before: QWidget, widgets: Iterable[QWidget]) -> QWidget:
    """The tab key goes through the widgets in this order; the last of them."""
    for widget in widgets:
        QWidget.setTabOrder(before, widget)
        before = widget
    return before


def _per_cent(point: DecisionPoint) -> Fraction:
    return Fraction(repr(point.probability)) * 100


def _decimal(number: Fraction) -> str:
    """A finite decimal without needless noughts."""
    from decimal import Decimal

    text = f"{Decimal(number.numerator) / Decimal(number.denominator):f}"
    return text.rstrip("0").rstrip(".") if "." in text else text
