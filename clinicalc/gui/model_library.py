"""The practice's model library beside a window: what may be chosen, and whether the model in use still may be used.

The library is read again at every new patient, before every copy, print and PDF, whenever its models are offered, and
by a timer. Where it no longer stands behind the model in use, the number goes first and the reason is said second.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from datetime import datetime
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer, Signal

from clinicalc.errors import ClinicalcError, CoefficientFileRefused
from clinicalc.gui.bedside_reading import PATIENCE, BedsideReading, machine_here, raise_again, time_here
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.errands import Errands
from clinicalc.gui.exceptions import explain
from clinicalc.gui.library_sentences import in_window, invite, judge_in_use, say_error

if TYPE_CHECKING:
    from clinicalc.library.machine import Machine
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.library.standing import ModelState

EVERY = 30_000
"""Milliseconds between two readings; what is told is "within a minute", a slow share included."""


@dataclass(frozen=True, slots=True)
class OfferedModel:
    """A model in use, as a menu names it."""

    fingerprint: str
    title: str


class ModelLibrary(QObject):
    """Reads the library for one window; whatever is wrong with it ends as a sentence in place of the number."""

    chosen = Signal(object)
    """The ApprovedModel to be shown."""
    refused = Signal(str, object)
    """A model's name, and the ClinicalcError that says why it was not taken."""
    told = Signal(str, str)
    """Headline and sentence for the place of the number while no model is chosen."""

    def __init__(
        self,
        state: EntryState,
        machine: Callable[[], Machine] = machine_here,
        clock: Callable[[], datetime] = time_here,
    ) -> None:
        super().__init__()
        self._state = state
        self.reading = BedsideReading(machine, clock)
        self._opened: OpenedLibrary | None = None
        self._trouble = ""
        self._last = ""
        self.readings = 0
        self._errands = Errands(self)
        self._timer = QTimer(self)
        self._timer.setInterval(EVERY)
        self._timer.timeout.connect(self.check)
        self._timer.start()

    @property
    def in_use(self) -> tuple[ModelState, ...]:
        """The models that give a number on this machine, as last read."""
        return () if self._opened is None else self._opened.in_use()

    @property
    def can_hold(self) -> bool:
        """Whether there is an approved model on screen that gives numbers."""
        return self._state.approved is not None and not self._state.withheld

    @property
    def name_in_use(self) -> str:
        """Title and version of the approved model on screen, "" for none."""
        approved = self._state.approved
        return "" if approved is None else f"{approved.model.content.title}, {approved.model.content.version}"

    @property
    def machine(self) -> Callable[[], Machine]:
        """Which machine this is, asked anew each time."""
        return self.reading.machine

    @property
    def clock(self) -> Callable[[], datetime]:
        """What time it is here."""
        return self.reading.clock

    def start(self) -> None:
        """Read the library for the first time; a model is chosen for somebody only where it is the only one in use."""
        self.read()
        if self._state.model is None:
            self._choose_only()

    def start_beside(self) -> None:
        """The same with the first reading in a thread beside the window, which nobody has to wait for.

        It takes seconds where this machine never read a large library, or where a share does not answer.
        """
        readings = self.readings

        def take(answer: Callable[[], OpenedLibrary]) -> None:
            if self.readings == readings:  # otherwise somebody has asked since, and that is newer
                self._take_in(answer)
                self.reading.rest_unless(self._opened is not None and self._opened.reachable)
            if self._state.model is None:
                self._choose_only()

        if not self._errands.run("The library is being read", self.reading.read_beside, take, raise_again):
            self.start()
            return
        self.reading.rest()  # should the share not answer, a thread outlasts the errand

    def check(self) -> None:
        """Read again what concerns the model in use, as the timer does and every copy, print and PDF."""
        if self._state.approved is not None:
            self.read(self._state.approved.model.fingerprint)

    def leave(self) -> None:
        """The window closes: nothing is read any more, and a reading that still goes on is waited for, but not long."""
        self._timer.stop()
        self._errands.leave()
        self._errands.wait(PATIENCE)
        self.reading.rest_unless(True)  # nobody asks again, and the window may outlive its closing for a while

    def follow(self) -> None:
        """Something was decided in the library: read again, also where no model is chosen because none was in use."""
        if self._state.model is None:
            self.start_beside()
        else:
            self.check()

    def read(self, fingerprint: str = "") -> None:
        """Read all again, or what concerns one model; the number goes where the library no longer stands behind it.

        What is wrong with the library is said; any other exception blanks before it goes on.
        """
        self._take_in(lambda: self.reading.read(fingerprint))

    def _take_in(self, answer: Callable[[], OpenedLibrary]) -> None:
        """What a reading gave or raised, in the window's own thread."""
        self.readings += 1
        try:
            self._opened, self._trouble = answer(), ""
            self._settle()
        except ClinicalcError as error:
            self._opened, self._trouble = None, in_window(str(error))
            if self._state.approved is not None:
                self._state.withhold(say_error(error))
        except BaseException as error:
            self._opened, self._trouble = None, explain(error)
            if self._state.approved is not None:
                self._state.withhold(self._trouble)
            raise

    def offered(self) -> tuple[OfferedModel, ...]:
        """The models in use for a menu, read afresh, by title and version."""
        self.read()
        if self._state.model is None:
            self.told.emit(*invite(self._opened, self._trouble))
        return _by_title(self.in_use)

    def held(self) -> tuple[OfferedModel, ...]:
        """The models that are held on this machine, as last read."""
        from clinicalc.library.standing import Standing

        states = () if self._opened is None else self._opened.models
        return _by_title(state for state in states if state.standing is Standing.HELD)

    def hold(self, why: str) -> None:
        """Hold the approved model on screen on this machine. Raises LibraryError or FileNotWritten where it is not."""
        from clinicalc.library.holds import hold

        if self._state.approved is not None:
            hold(self.machine(), self._state.approved.model.fingerprint, why, self.clock())
            self.check()

    def release(self, fingerprint: str) -> None:
        """End a hold on this machine. Raises LibraryError or FileNotWritten where it stays."""
        from clinicalc.library.holds import release

        release(self.machine(), fingerprint, self.clock())
        self.check()

    def choose(self, fingerprint: str) -> None:
        """Take an approved model with empty fields; where it is not in use, that is said and everything stays."""
        self.read(fingerprint)
        try:
            self._take(fingerprint)
        except ClinicalcError as error:
            from clinicalc.gui.window_words import say_in_window

            said = error if isinstance(error, CoefficientFileRefused) else say_in_window(error)
            self.refused.emit(self._name(fingerprint), said)

    def begin_new_patient(self) -> None:
        """Forget everything typed, leave a file that was tried out, and read again what is approved."""
        self._state.begin_new_patient()
        self.read()
        if self._state.approved is not None and not self._state.withheld:
            return
        if not self._last:
            self._choose_only()
            return
        try:
            self._take(self._last)
        except ClinicalcError as error:
            if self._state.approved is None:
                self._state.leave_model()
                self.told.emit("No number", say_error(error))

    def _choose_only(self) -> None:
        """The only model in use, or none and the word to choose one."""
        if len(self.in_use) == 1:
            self.choose(self.in_use[0].fingerprint)
        if self._state.approved is None:
            self._state.leave_model()
            self.told.emit(*invite(self._opened, self._trouble))

    def _take(self, fingerprint: str) -> None:
        from clinicalc.operations.approved import take_approved

        if self._opened is None:
            raise ClinicalcError(self._trouble)
        approved = take_approved(self.reading.about(self._opened, fingerprint), fingerprint, self.clock())
        self._last = fingerprint
        self.chosen.emit(approved)

    def _settle(self) -> None:
        """What was just read, for the model in use."""
        approved, opened = self._state.approved, self._opened
        if approved is None or opened is None:
            return
        judged = judge_in_use(approved, self.reading.about(opened, approved.model.fingerprint))
        if isinstance(judged, str):
            self._state.withhold(judged)
        else:
            self._state.vouch(judged)

    def _name(self, fingerprint: str) -> str:
        state = None if self._opened is None else self._opened.state(fingerprint)
        return "The model" if state is None else f"{state.title}, {state.version}"


def _by_title(states: Iterable[ModelState]) -> tuple[OfferedModel, ...]:
    models = [OfferedModel(state.fingerprint, f"{state.title}, {state.version}") for state in states]
    return tuple(sorted(models, key=lambda model: model.title.casefold()))
