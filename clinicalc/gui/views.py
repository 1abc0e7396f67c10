"""The views of a result under its findings: shares, comparison, people; one is open, the others hold nothing."""

from collections.abc import Sequence
from typing import Protocol

from PySide6.QtCore import Qt, Signal
from PySide6.QtWidgets import QHBoxLayout, QVBoxLayout, QWidget

from clinicalc.assessment.result import Assessment
from clinicalc.gui.comparison_view import ComparisonView
from clinicalc.gui.figure_view import table_lines
from clinicalc.gui.findings_list import OVERHANG
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import make_rule
from clinicalc.gui.lanes import overhang
from clinicalc.gui.people_view import PeopleView
from clinicalc.gui.shares_view import SharesView
from clinicalc.gui.text_link import LINK_PADDING, OpenedText, TextLink
from clinicalc.gui.view_tabs import PAD, ViewTabs
from clinicalc.report.phrases_spread import spread_sources
from clinicalc.report.shapes import Figure

CHARTS_AS_TEXT = "Charts as text"
_CLOSE = "Close the text"
_LONGEST = ("Shares", "Comparison (9)", "In 1000 people")
_UNDER_TABS = 8


class View(Protocol):
    """What every view can do."""

    title: str

    @property
    def figure(self) -> Figure | None: ...

    def tab_stops(self) -> tuple[QWidget, ...]: ...

    def show_assessment(self, assessment: Assessment | None, *, vetted: bool = False) -> None: ...


class Views(Block):
    """Tabs, the open view, and the table of every chart on the sheet. Its words begin `PAD` from its left edge.

    A closed view is emptied when it closes: what is not on screen costs no time and keeps nothing of a number.
    """

    comparison_opened = Signal(bool)
    """Whether the comparison is now the open view."""
    stops_changed = Signal()
    """`tab_stops` may be others now."""

    def __init__(self) -> None:
        super().__init__()
        self.tabs = ViewTabs()
        self.as_text = TextLink(CHARTS_AS_TEXT)
        self.text = OpenedText(CHARTS_AS_TEXT)
        self.shares, self.comparison, self.people = SharesView(), ComparisonView(), PeopleView()
        self._views: tuple[View, ...] = (self.shares, self.comparison, self.people)
        self._assessment: Assessment | None = None
        self._others: tuple[Figure, ...] = ()
        self._vetted = False
        for place, longest in enumerate(_LONGEST):
            self.tabs.add_view(self._views[place].title, longest)
        self.tabs.setCurrentIndex(self._views.index(self.people))
        self._open: View = self.people
        self._lay_out()
        self.tabs.currentChanged.connect(self._change)
        self.as_text.clicked.connect(self.toggle_text)

    @property
    def open_view(self) -> View:
        """The view that is open."""
        return self._open

    def open(self, view: View) -> None:
        """Open one of the views."""
        self.tabs.setCurrentIndex(self._views.index(view))

    def close_comparison(self) -> None:
        """Open the people where the comparison is open: it belongs to one patient and one model."""
        if self._open is self.comparison:
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
        before, now = self._open, self._views[index]
        self._open = now
        before.show_assessment(None)
        self.setUpdatesEnabled(False)
        for view, widget in zip(self._views, self._widgets(), strict=True):
            widget.setVisible(view is now)
        try:
            self.show_assessment(self._assessment, self._others, vetted=self._vetted)
        finally:
            self.setUpdatesEnabled(True)
        if self.comparison in (before, now):
            self.comparison_opened.emit(now is self.comparison)
        self.stops_changed.emit()

    def _name_tabs(self) -> None:
        """The people may be 1000, and how many values are changed stays in sight while the comparison is closed."""
        estimate = None if self._assessment is None else self._assessment.estimate
        comparison = None if estimate is None else estimate.comparison
        changed = "" if comparison is None or not comparison.changes else f" ({len(comparison.changes)})"
        for index, words in enumerate((self.shares.title, f"{self.comparison.title}{changed}", self._people_title())):
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

    def _widgets(self) -> tuple[QWidget, ...]:
        return (self.shares, self.comparison, self.people)

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
        insets = (
            (self.shares, PAD - LINK_PADDING, 0),
            (self.comparison, PAD - OVERHANG, 0),
            (self.people, PAD, overhang()),
        )
        for view, left, right in insets:
            room = QVBoxLayout()
            room.setContentsMargins(left, 0, right, 0)
            room.addWidget(view)
            column.addLayout(room)
            view.setVisible(view is self._open)
