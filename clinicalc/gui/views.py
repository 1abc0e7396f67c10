"""The views of a result under its findings: shares, comparison, people; one is open, the others hold nothing."""

from collections.abc import Sequence
from typing import TYPE_CHECKING, Protocol

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.assessment.result import Assessment
from clinicalc.gui.figure_view import table_lines
from clinicalc.gui.findings_list import OVERHANG
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_rule
from clinicalc.gui.lanes import overhang
from clinicalc.gui.people_view import PEOPLE, PeopleView
from clinicalc.gui.text_link import LINK_PADDING, OpenedText, TextLink
from clinicalc.gui.view_tabs import PAD, ViewTabs
from clinicalc.report.phrases_spread import spread_sources
from clinicalc.report.shapes import Figure

if TYPE_CHECKING:
    from clinicalc.gui.comparison_view import ComparisonView
    from clinicalc.gui.shares_view import SharesView

SHARES, COMPARISON = "Shares", "Comparison"
CHARTS_AS_TEXT = "Charts as text"
_CLOSE = "Close the text"
_SHARES, _COMPARISON, _PEOPLE = range(3)
"""The views from left to right."""
_LONGEST = ("Shares", "Comparison (9)", "In 1000 people")
_UNDER_TABS = 8


class View(Protocol):
    """What every view can do."""

    @property
    def figure(self) -> Figure | None: ...

    def tab_stops(self) -> tuple[QWidget, ...]: ...

    def show_assessment(self, assessment: Assessment | None, *, vetted: bool = False) -> None: ...


class Views(Block):
    """Tabs, the open view, and the table of every chart on the sheet. Its words begin `PAD` from its left edge.

    A closed view is emptied when it closes: what is not on screen costs no time and keeps nothing of a number. Shares
    and comparison are made when they are first asked for, not at every start.
    """

    comparison_opened = Signal(bool)
    """Whether the comparison is now the open view."""
    matching_age_asked = Signal(bool)
    """Whether the matching age is to be shown from now on."""
    change_asked = Signal(str)
    """The mark of a finding about the changed value of this field was pressed."""
    stops_changed = Signal()
    """`tab_stops` may be others now."""

    def __init__(self) -> None:
        super().__init__()
        self.tabs = ViewTabs()
        self.as_text = TextLink(CHARTS_AS_TEXT)
        self.text = OpenedText(CHARTS_AS_TEXT)
        self.people = PeopleView()
        self._shares: SharesView | None = None
        self._comparison: ComparisonView | None = None
        self._rooms: list[QVBoxLayout] = []
        self._assessment: Assessment | None = None
        self._others: tuple[Figure, ...] = ()
        self._vetted = False
        for place, longest in enumerate(_LONGEST):
            self.tabs.add_view((SHARES, COMPARISON, PEOPLE)[place], longest)
        self.tabs.setCurrentIndex(_PEOPLE)
        self._open: View = self.people
        self._lay_out()
        self.tabs.currentChanged.connect(self._change)
        self.as_text.clicked.connect(self.toggle_text)

    @property
    def shares(self) -> "SharesView":
        """The walk from the reference person to this patient."""
        if self._shares is None:
            from clinicalc.gui.shares_view import SharesView

            self._shares = SharesView()
            self._shares.matching_age_asked.connect(self.matching_age_asked)
            self._take_in(_SHARES, self._shares)
        return self._shares

    @property
    def comparison(self) -> "ComparisonView":
        """The same patient with changed values."""
        if self._comparison is None:
            from clinicalc.gui.comparison_view import ComparisonView

            self._comparison = ComparisonView()
            self._comparison.field_asked.connect(self.change_asked)
            self._take_in(_COMPARISON, self._comparison)
        return self._comparison

    @property
    def open_view(self) -> View:
        """The view that is open."""
        return self._open

    def open(self, view: View) -> None:
        """Open one of the views."""
        self.tabs.setCurrentIndex(_PEOPLE if view is self.people else _SHARES if view is self._shares else _COMPARISON)

    def close_comparison(self) -> None:
        """Open the people where the comparison is open: it belongs to one patient and one model."""
        if self._open is self._comparison:
            self.open(self.people)

    def show_assessment(self, assessment: Assessment | None, others: Sequence[Figure], *, vetted: bool = False) -> None:
        """Show the open view of an assessment, or its empty place; `others` are the charts above the views."""
        self._assessment, self._others, self._vetted = assessment, tuple(others), vetted
        self._open.show_assessment(assessment, vetted=vetted)
        self._name_tabs()
        self._write_text()

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Tabs, link, text, then what is in the open view."""
        return (self.tabs, self.as_text, self.text, *self._open.tab_stops())

    def toggle_text(self) -> None:
        """Open or close the table of every chart of the sheet."""
        self.text.setVisible(self.text.isHidden())
        self.as_text.say(CHARTS_AS_TEXT if self.text.isHidden() else _CLOSE)
        self._write_text()

    def _change(self, index: int) -> None:
        before = self._open
        now = self.people if index == _PEOPLE else self.shares if index == _SHARES else self.comparison
        self._open = now
        before.show_assessment(None)
        self.setUpdatesEnabled(False)
        for view in (self._shares, self._comparison, self.people):
            if view is not None:
                view.setVisible(view is now)
        try:
            self.show_assessment(self._assessment, self._others, vetted=self._vetted)
        finally:
            self.setUpdatesEnabled(True)
        if self._comparison is not None and self._comparison in (before, now):
            self.comparison_opened.emit(now is self._comparison)
        self.stops_changed.emit()

    def _name_tabs(self) -> None:
        """The people may be 1000, and how many values are changed stays in sight while the comparison is closed."""
        estimate = None if self._assessment is None else self._assessment.estimate
        comparison = None if estimate is None else estimate.comparison
        changed = "" if comparison is None or not comparison.changes else f" ({len(comparison.changes)})"
        for index, words in enumerate((SHARES, f"{COMPARISON}{changed}", self._people_title())):
            if self.tabs.tabText(index) != words:
                self.tabs.setTabText(index, words)

    def _people_title(self) -> str:
        estimate = None if self._assessment is None else self._assessment.estimate
        return PeopleView.name_for(None if estimate is None else estimate.probability)

    def _write_text(self) -> None:
        """Fill the table while it is open; closed, it would only cost time at every key."""
        if self.text.isHidden():
            if self.text.toPlainText():
                self.text.clear()
            return
        estimate = None if self._assessment is None else self._assessment.estimate
        lines = table_lines(self._others)
        if estimate is not None and estimate.spread is not None:
            lines += spread_sources(estimate.spread)
        if self._open.figure is not None:
            lines += ["", self.tabs.tabText(self.tabs.currentIndex()), *table_lines((self._open.figure,))]
        self.text.show_lines(lines)

    def _take_in(self, place: int, view: QWidget) -> None:
        """Give a view that was just made its place, hidden."""
        view.hide()
        self._rooms[place].addWidget(view)

    def _lay_out(self) -> None:
        head = QHBoxLayout()
        head.setContentsMargins(0, 0, overhang(), 0)
        head.addWidget(self.tabs, 1)
        head.addWidget(self.as_text, 0, Qt.AlignmentFlag.AlignVCenter)
        rule = QVBoxLayout()
        rule.setContentsMargins(PAD, 0, overhang(), _UNDER_TABS)
        rule.setSpacing(_UNDER_TABS)
        rule.addWidget(make_rule())
        rule.addWidget(self.text)
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(0)
        column.addLayout(head)
        column.addLayout(rule)
        for left, right in ((PAD - LINK_PADDING, 0), (PAD - OVERHANG, 0), (PAD, overhang())):
            room = QVBoxLayout()
            room.setContentsMargins(left, 0, right, 0)
            column.addLayout(room)
            self._rooms.append(room)
        self._rooms[_PEOPLE].addWidget(self.people)
