"""One reading of the practice's library for the bedside, waited for or beside the window, as old as it was asked."""

from __future__ import annotations

from collections.abc import Callable
from datetime import datetime
from functools import partial
from typing import TYPE_CHECKING, NoReturn

from clinicalc.gui import resting_collector

if TYPE_CHECKING:
    from clinicalc.library.machine import Machine
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.operations.course import Course

PATIENCE = 2.0
"""Seconds: nobody can type while a share is waited for, and the copy on this machine serves meanwhile."""


class BedsideReading:
    """Asks for the library of one window's machine, at the time of its clock; keeps nothing of what was read.

    A share is asked in a thread of its own, which may outlast its answer; no widget may be collected there.
    """

    def __init__(self, machine: Callable[[], Machine], clock: Callable[[], datetime]) -> None:
        self.machine, self.clock = machine, clock

    def read(self, fingerprint: str = "") -> OpenedLibrary:
        """The library as it stands now, for all models that may be chosen, or for one. Raises LibraryError."""
        from clinicalc.library.opening import open_for_bedside, open_library

        machine, now = self.machine(), self.clock()
        resting_collector.rest()
        is_reached = False
        try:
            if fingerprint:
                opened = open_library(machine, now, only=[fingerprint], patience=PATIENCE)
            else:
                opened = open_for_bedside(machine, now, patience=PATIENCE)
            is_reached = opened.reachable
            return opened
        finally:
            resting_collector.resume()
            self.rest_unless(is_reached)

    def read_beside(self, _: Course) -> Callable[[], OpenedLibrary]:
        """The same in an errand, for all models that may be chosen; a call gives it, or raises what went wrong."""
        from clinicalc.library.opening import open_for_bedside

        try:
            opened = open_for_bedside(self.machine(), self.clock(), patience=PATIENCE)
        except Exception as error:  # noqa: BLE001 it is raised again where the window can say it
            return partial(raise_again, error)
        return lambda: opened

    def about(self, opened: OpenedLibrary, fingerprint: str) -> OpenedLibrary:
        """What was read, or a reading of this one model where it was left out because it has long not been in use."""
        return opened if opened.state(fingerprint) is not None else self.read(fingerprint)

    def rest_unless(self, is_reached: bool) -> None:
        """While the library does not answer a thread may still be waiting for it: garbage is collected by hand."""
        if is_reached:
            resting_collector.resume_for(self)
        else:
            self.rest()

    def rest(self) -> None:
        """No garbage is collected by itself until the library answers."""
        resting_collector.rest_for(self)


def machine_here() -> Machine:
    """This machine, by its settings. Raises LibraryError where it uses no library."""
    from clinicalc.library.machine import this_machine

    return this_machine()


def time_here() -> datetime:
    """The time by this machine's clock, in its zone."""
    return datetime.now().astimezone()


def raise_again(error: Exception) -> NoReturn:
    """Raise what a thread brought back."""
    raise error
