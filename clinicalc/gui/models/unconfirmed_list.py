"""The figures that a file calls unconfirmed, and the names of those who compared them with their source.

Typing a name is the tick: a figure without one is open. Rows are made some at a time, since a file may name hundreds.
"""

from collections.abc import Mapping, Sequence

from PySide6.QtCore import Qt, Signal
from PySide6.QtGui import QAccessible, QAccessibleAnnouncementEvent
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import Heading, make_button, make_label
from clinicalc.gui.models.unconfirmed_row import UnconfirmedRow
from clinicalc.gui.typeface import UNIT
from clinicalc.library.records import Compared
from clinicalc.operations.open_figures import OpenFigure

HEADING = "Unconfirmed figures"
_ASKS = (
    "The file says that these were not checked against their source. Compare each, and type the name of who did; the"
    " names become part of the approval."
)
_SAYS = "The file says that these were not checked against their source."
_BATCH = 20


class UnconfirmedList(Block):
    """`asks` is whether names can be typed, as where the model may be approved."""

    changed = Signal()
    """Another name was typed or taken away."""
    stops_changed = Signal()
    """`tab_stops` may be others now."""

    def __init__(self, figures: Sequence[OpenFigure], *, asks: bool, names: Mapping[int, str] | None = None) -> None:
        super().__init__()
        self._figures = tuple(figures)
        self._asks = asks
        typed = {} if names is None else names
        self._names = [typed.get(place, figure.compared_by) for place, figure in enumerate(figures)]
        self._offering: UnconfirmedRow | None = None
        self.rows: list[UnconfirmedRow] = []
        self.heading = Heading("")
        self.more = make_button("", pixels=UNIT)
        self._column = QVBoxLayout()
        self._column.setSpacing(4)
        whole = QVBoxLayout(self)
        whole.setContentsMargins(0, 0, 0, 0)
        whole.setSpacing(4)
        whole.addWidget(self.heading)
        whole.addWidget(make_label(_ASKS if asks else _SAYS, UNIT, soft=True))
        whole.addLayout(self._column)
        whole.addWidget(self.more, 0, Qt.AlignmentFlag.AlignLeft)
        self.more.clicked.connect(self._show_more)
        self._make_rows()
        self._count()
        self._offer()

    @property
    def names(self) -> Mapping[int, str]:
        """The names by the place of the figure, those without one left out."""
        return {place: name for place, name in enumerate(self._names) if name}

    @property
    def compared(self) -> tuple[Compared, ...]:
        """Who compared which place in the file; a place named twice counts when both have a name."""
        open_places = {figure.at for figure, name in zip(self._figures, self._names, strict=True) if not name}
        pairs = {figure.at: name for figure, name in zip(self._figures, self._names, strict=True)}
        return tuple(Compared(at, name) for at, name in pairs.items() if at not in open_places)

    def count_words(self) -> str:
        """ "3 of 8 compared"."""
        return f"{sum(map(bool, self._names))} of {len(self._names)} compared"

    def focus_open(self) -> None:
        """The focus to the first figure without a name."""
        place = next((at for at, name in enumerate(self._names) if not name), None)
        if place is None or not self._asks:
            return
        while place >= len(self.rows):
            self._make_rows()
        self.stops_changed.emit()
        field = self.rows[place].edit
        if field is not None:
            field.setFocus(Qt.FocusReason.OtherFocusReason)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """The rows in order, then the button for further ones."""
        return (*(stop for row in self.rows for stop in row.tab_stops()), self.more)

    def _make_rows(self) -> None:
        first = len(self.rows)
        for place in range(first, min(first + _BATCH, len(self._figures))):
            row = UnconfirmedRow(self._figures[place], self._names[place], asks=self._asks)
            row.named.connect(lambda name, place=place: self._name(place, name))
            row.entered.connect(lambda place=place: self._go_on(place))
            row.same_asked.connect(lambda place=place: self._name_below(place))
            self.rows.append(row)
            self._column.addWidget(row)
        rest = len(self._figures) - len(self.rows)
        self.more.setVisible(rest > 0)
        if rest > 0:
            self.more.setText(f"Show the next {min(rest, _BATCH)} of {rest} further figures")

    def _show_more(self) -> None:
        first = len(self.rows)
        self._make_rows()
        for row in self.rows[first:]:
            row.show()  # now: Qt would do it by an event, and a hidden field takes no focus
        self.stops_changed.emit()
        field = self.rows[first].edit
        (field or self.more).setFocus(Qt.FocusReason.TabFocusReason)

    def _name(self, place: int, name: str) -> None:
        self._names[place] = name
        self._count()
        self._offer()
        self.changed.emit()

    def _name_below(self, place: int) -> None:
        """The name of this row for every open figure below, those whose rows are not made yet among them."""
        name = self._names[place]
        for below in range(place + 1, len(self._names)):
            if not self._names[below]:
                self._names[below] = name
                if below < len(self.rows):
                    self.rows[below].fill(name)
        field = self.rows[place].edit
        if field is not None:
            field.setFocus(Qt.FocusReason.OtherFocusReason)  # the offer that was pressed goes
        self._count()
        self._offer()
        QAccessible.updateAccessibility(QAccessibleAnnouncementEvent(self, self.count_words()))
        self.changed.emit()

    def _go_on(self, place: int) -> None:
        """To the field of the next figure, which may have to be made first."""
        if place + 1 >= len(self.rows) and not self.more.isHidden():
            self._show_more()
            return
        following = self.rows[place + 1].edit if place + 1 < len(self.rows) else None
        if following is not None:
            following.setFocus(Qt.FocusReason.TabFocusReason)

    def _count(self) -> None:
        self.heading.label.setText(f"{HEADING}: {self.count_words()}")

    def _offer(self) -> None:
        """The first row with a name offers it to those below that have none; no other row does."""
        place = next((at for at, name in enumerate(self._names) if name), None)
        row = None if place is None or place >= len(self.rows) or not self._asks else self.rows[place]
        if self._offering is not None and self._offering is not row:
            self._offering.offer_same("", 0)
        self._offering = row
        if row is not None and place is not None:
            row.offer_same(self._names[place], sum(not name for name in self._names[place + 1 :]))
