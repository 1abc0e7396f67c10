"""What is stated beside the number of one row: of how many readings it is the mean, and the day it was measured."""

from dataclasses import replace

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QHBoxLayout, QWidget

from clinicalc.assessment.entry import Typed
from clinicalc.gui.averaged_entry import AveragedEntry
from clinicalc.gui.dated_entry import DatedEntry
from clinicalc.units.reading import Reading

_GAP = 12


class StatedEntry(QWidget):
    """The mean, the day, or both. What came typed after a number goes with that number; what was stated here stays."""

    changed = Signal()
    entered = Signal()

    def __init__(self, averaged: AveragedEntry | None, dated: DatedEntry | None) -> None:
        super().__init__()
        self.averaged, self.dated = averaged, dated
        self._mean_came = self._day_came = False
        row = QHBoxLayout(self)
        row.setContentsMargins(0, 0, 0, 0)
        row.setSpacing(_GAP)
        if averaged is not None:
            row.addWidget(averaged)
            row.addStretch(1)
            averaged.changed.connect(self._take_mean)
            averaged.entered.connect(self.entered)
        if dated is not None:
            row.addWidget(dated)
            dated.changed.connect(self._take_day)
            dated.entered.connect(self.entered)

    def tab_stops(self) -> tuple[QWidget, ...]:
        """Visits, readings, day; as far as they are there."""
        mean = () if self.averaged is None else (self.averaged.visits, self.averaged.readings)
        return (*mean, *(() if self.dated is None else (self.dated.edit,)))

    def set_compact(self, compact: bool) -> None:
        """The narrow form; a day that stands alone has room for its caption in it too."""
        if self.averaged is not None:
            self.averaged.set_compact(compact)
        if self.dated is not None:
            self.dated.set_compact(compact and self.averaged is not None)

    def fill(self, typed: Typed | None) -> Typed | None:
        """Show what an entry states apart from its text, or nothing; the entry without what is shown here."""
        if self.averaged is not None:
            mean = None if typed is None else typed.averaged
            self.averaged.fill(mean)
            self._mean_came = mean is not None
            typed = None if typed is None else replace(typed, averaged=None)
        if self.dated is not None:
            day = None if typed is None else typed.dated
            self.dated.fill(day)
            self._day_came = day is not None
            typed = None if typed is None else replace(typed, dated=None)
        return typed

    def take_over(self, reading: Reading) -> tuple[bool, bool]:
        """Show what was typed after a number; whether its mean and its day stand here now."""
        mean = self.averaged is not None and reading.averaged is not None
        if self.averaged is not None and mean:
            self.averaged.fill(reading.averaged)
            self._mean_came = True
        day = self.dated is not None and reading.dated is not None
        if self.dated is not None and day:
            self.dated.fill(reading.dated)
            self._day_came = True
        return mean, day

    def let_go_of_what_came(self) -> None:
        """Another number is typed: the mean and the day of the one before go with it."""
        if self.averaged is not None and self._mean_came:
            self.averaged.fill(None)
        if self.dated is not None and self._day_came:
            self.dated.fill(None)
        self._mean_came = self._day_came = False

    def with_stated(self, typed: Typed) -> Typed:
        """The entry with what is stated here. What is no date is put after the number, where it is refused in words."""
        if self.averaged is not None:
            typed = replace(typed, averaged=self.averaged.averaged)
        if self.dated is None or not self.dated.text:
            return typed
        if self.dated.day is None:
            return replace(typed, text=f"{typed.text} on {self.dated.text}")
        return replace(typed, dated=self.dated.day)

    def _take_mean(self) -> None:
        """What a person states here is theirs, whatever number stands there later."""
        self._mean_came = False
        self.changed.emit()

    def _take_day(self) -> None:
        self._day_came = False
        self.changed.emit()
