"""The practice's decision points: those there are, and the fields in which one more is written."""

import itertools
from collections.abc import Sequence

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QLabel, QVBoxLayout, QWidget

from clinicalc.errors import UsageError
from clinicalc.gui.labels import CommandButton, make_button, make_label
from clinicalc.gui.practice.point_fields import PointFields, horizon_words
from clinicalc.gui.practice.typed_shares import share_words
from clinicalc.gui.typeface import UNIT
from clinicalc.settings import MOST_POINTS, PracticePoint

_NONE = "None. Files and approvals may bring decision points of their own."
_FULL = f"These are as many as are kept: {MOST_POINTS}. Take one out before another is added."


class PointRow(QWidget):
    """One decision point in words, with the button that takes it out."""

    def __init__(self, point: PracticePoint, title: str) -> None:
        super().__init__()
        self.point = point
        says = f"{share_words(point.probability)} within {horizon_words(point)}: {point.label}"
        self.words: QLabel = make_label(says)
        named = f"{title} ({point.model})" if title else point.model
        self.of: QLabel = make_label(f"{named}. Source: {point.source}", UNIT, soft=True)
        self.remove: CommandButton = make_button("Take out", pixels=UNIT)
        self.remove.setAccessibleName(f"Take out {self.words.text()}, {named}")
        column = QVBoxLayout()
        column.setSpacing(0)
        column.addWidget(self.words)
        column.addWidget(self.of)
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 4, 0, 4)
        row.addLayout(column, 1)
        row.addWidget(self.remove, 0, Qt.AlignmentFlag.AlignTop)


class PointsEditor(QWidget):
    """Tells which points there are to be; whoever keeps them shows them here again."""

    changed = Signal(object)
    """The whole tuple of points."""

    def __init__(self, after: QWidget) -> None:
        """`after` is what the tab key stops at before the points."""
        super().__init__()
        self._after = after
        self._points: tuple[PracticePoint, ...] = ()
        self._models: tuple[tuple[str, str], ...] = ()
        self.rows: list[PointRow] = []
        self.none = make_label(_NONE, soft=True)
        self.begin = make_button("Add a &decision point…", pixels=UNIT)
        self.fields = PointFields()
        self.fields.hide()
        self._list = QVBoxLayout()
        self._list.setSpacing(0)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(6)
        column.addWidget(self.none)
        column.addLayout(self._list)
        column.addWidget(self.begin, 0, Qt.AlignmentFlag.AlignLeft)
        column.addWidget(self.fields)
        self.begin.clicked.connect(self._begin)
        self.fields.asked.connect(self._add)
        self.fields.given_up.connect(self._give_up)

    def offer_models(self, models: Sequence[tuple[str, str]]) -> None:
        """The models in use, as (id, title), that a point can be for."""
        self._models = tuple(models)
        self.fields.offer_models(self._models)
        self._show()

    def show_points(self, points: tuple[PracticePoint, ...]) -> None:
        """Show the points in force."""
        if points != self._points:
            self._points = points
            self._show()

    def set_narrow(self, narrow: bool) -> None:
        """Names over the fields of a new point, or beside them."""
        self.fields.set_narrow(narrow)

    def restore(self) -> bool:
        """Close the fields of a new point; whether they were open."""
        was_open = not self.fields.isHidden()
        if was_open:
            self._give_up()
        return was_open

    def _show(self) -> None:
        for row in self.rows:
            self._list.removeWidget(row)
            row.hide()
            row.deleteLater()
        titles = dict(self._models)
        self.rows = [PointRow(point, titles.get(point.model, "")) for point in self._points]
        for row in self.rows:
            row.remove.clicked.connect(lambda _=False, point=row.point: self._take_out(point))
            self._list.addWidget(row)
            row.show()  # at once, not some events later: the tab key would go past it
        self.none.setText(_FULL if len(self._points) >= MOST_POINTS else _NONE)
        self.none.setVisible(len(self._points) in (0, MOST_POINTS))
        self.begin.setEnabled(len(self._points) < MOST_POINTS)
        self._order()

    def _order(self) -> None:
        """Rows that came later stand before the fields for the tab key too."""
        stops = [self._after, *(row.remove for row in self.rows), self.begin, *self.fields.stops]
        for before, stop in itertools.pairwise(stops):
            QWidget.setTabOrder(before, stop)

    def _begin(self) -> None:
        self.begin.hide()
        self.fields.show()
        self.fields.focus_first()

    def _give_up(self) -> None:
        self.fields.clear()
        self.fields.hide()
        self.begin.show()
        self.begin.setFocus(Qt.FocusReason.OtherFocusReason)

    def _take_out(self, point: PracticePoint) -> None:
        """The point goes, and its parts stand in the fields: so it can be put back, or changed."""
        self.changed.emit(tuple(other for other in self._points if other != point))
        self.fields.fill(point)
        self._begin()

    def _add(self) -> None:
        try:
            point = self.fields.point()
            if point in self._points:
                raise UsageError("this decision point is there already.")
        except UsageError as error:
            self.fields.refuse(str(error))
            return
        before = self._points
        self.changed.emit((*before, point))
        if point in self._points:  # refused elsewhere, the fields keep it
            self._give_up()
