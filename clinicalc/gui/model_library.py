"""The practice's model library beside a window: what may be chosen, and whether the model in use still may be used.

The library is read again at every new patient, before every copy, print and PDF, whenever its models are offered, and
by a timer. Where it no longer stands behind the model in use, the number goes first and the reason is said second.
"""

from __future__ import annotations

import gc
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from datetime import datetime
from typing import TYPE_CHECKING

from PySide6.QtCore import QObject, QTimer, Signal

from clinicalc.errors import ClinicalcError
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.exceptions import explain

if TYPE_CHECKING:
    from clinicalc.library.machine import Machine
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.library.standing import ModelState

EVERY = 30_000
"""Milliseconds between two readings; what is told is "within a minute", a slow share included."""
_PATIENCE = 2.0
"""Seconds: nobody can type while a share is waited for, and the copy on this machine serves meanwhile."""
_OTHER_CHOICES = (
    "The practice has approved this model anew, with another recalibration or other decision points. Choose it again,"
    " or begin a new patient; it then answers as it is approved now."
)


@dataclass(frozen=True, slots=True)
class OfferedModel:
    """A model in use, as a menu names it."""

    fingerprint: str
    title: str


def _this_machine() -> Machine:
    from clinicalc.library.machine import this_machine

    return this_machine()


def _now() -> datetime:
    return datetime.now().astimezone()


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
        machine: Callable[[], Machine] = _this_machine,
        clock: Callable[[], datetime] = _now,
    ) -> None:
        super().__init__()
        self._state, self._machine, self._clock = state, machine, clock
        self._opened: OpenedLibrary | None = None
        self._trouble = ""
        self._last = ""
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

    def start(self) -> None:
        """Read the library for the first time; a model is chosen for somebody only where it is the only one in use."""
        self.read()
        if self._state.model is None:
            self._choose_only()

    def check(self) -> None:
        """Read again what concerns the model in use, as the timer does and every copy, print and PDF."""
        if self._state.approved is not None:
            self.read(self._state.approved.model.fingerprint)

    def read(self, fingerprint: str = "") -> None:
        """Read all again, or what concerns one model; the number goes where the library no longer stands behind it.

        What is wrong with the library is said; any other exception blanks before it goes on.
        """
        try:
            self._opened, self._trouble = self._open(fingerprint), ""
            self._settle()
        except ClinicalcError as error:
            self._opened, self._trouble = None, str(error)
            if self._state.approved is not None:
                self._state.withhold(_sentence(error))
        except BaseException as error:
            self._opened, self._trouble = None, explain(error)
            if self._state.approved is not None:
                self._state.withhold(self._trouble)
            raise

    def offered(self) -> tuple[OfferedModel, ...]:
        """The models in use for a menu, read afresh, by title and version."""
        self.read()
        if self._state.model is None:
            self.told.emit(*self._invite())
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
            hold(self._machine(), self._state.approved.model.fingerprint, why, self._clock())
            self.check()

    def release(self, fingerprint: str) -> None:
        """End a hold on this machine. Raises LibraryError or FileNotWritten where it stays."""
        from clinicalc.library.holds import release

        release(self._machine(), fingerprint, self._clock())
        self.check()

    def choose(self, fingerprint: str) -> None:
        """Take an approved model with empty fields; where it is not in use, that is said and everything stays."""
        self.read(fingerprint)
        try:
            self._take(fingerprint)
        except ClinicalcError as error:
            self.refused.emit(self._name(fingerprint), error)

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
                self.told.emit("No number", _sentence(error))

    def _choose_only(self) -> None:
        """The only model in use, or none and the word to choose one."""
        if len(self.in_use) == 1:
            self.choose(self.in_use[0].fingerprint)
        if self._state.approved is None:
            self._state.leave_model()
            self.told.emit(*self._invite())

    def _take(self, fingerprint: str) -> None:
        from clinicalc.operations.approved import take_approved

        if self._opened is None:
            raise ClinicalcError(self._trouble)
        approved = take_approved(self._about(self._opened, fingerprint), fingerprint, self._clock())
        self._last = fingerprint
        self.chosen.emit(approved)

    def _settle(self) -> None:
        """What was just read, for the model in use."""
        from clinicalc.library.bedside import vetting_of
        from clinicalc.library.standing import Standing
        from clinicalc.operations.library_words import say_standing

        approved, opened = self._state.approved, self._opened
        if approved is None or opened is None:
            return
        fingerprint = approved.model.fingerprint
        opened = self._about(opened, fingerprint)
        state = opened.state(fingerprint)
        if state is None:
            self._state.withhold("This model is no longer in the practice’s library.")
        elif state.standing is not Standing.IN_USE or state.approval is None:
            of_all = [fault.sentence for fault in opened.faults if fault.stops]
            self._state.withhold(state.reason if state.reason in of_all else say_standing(state))
        else:
            vetting = vetting_of(opened, fingerprint)
            before, now = approved.vetting, (vetting.recalibration, vetting.compared, state.approval.decision_points)
            if (before.recalibration, before.compared, approved.decision_points) != now:
                self._state.withhold(_OTHER_CHOICES)
            else:
                self._state.vouch(vetting)

    def _open(self, fingerprint: str = "") -> OpenedLibrary:
        """The library as it stands now, for all models that may be chosen, or for one.

        A share is asked in a thread of its own, which may outlast its answer; no widget may be collected there.
        """
        from clinicalc.library.opening import open_for_bedside, open_library

        machine, now = self._machine(), self._clock()
        is_reached = False
        gc.disable()
        try:
            if fingerprint:
                opened = open_library(machine, now, only=[fingerprint], patience=_PATIENCE)
            else:
                opened = open_for_bedside(machine, now, patience=_PATIENCE)
            is_reached = opened.reachable
            return opened
        finally:
            if is_reached:
                gc.enable()
            else:
                gc.collect()  # a thread may still be waiting: by hand until the library answers again

    def _about(self, opened: OpenedLibrary, fingerprint: str) -> OpenedLibrary:
        """What was read, or a reading of this one model where it was left out because it has long not been in use."""
        return opened if opened.state(fingerprint) is not None else self._open(fingerprint)

    def _invite(self) -> tuple[str, str]:
        """Why nothing is chosen, and what to do."""
        if self._opened is None:
            return "The library cannot be used", _capital(self._trouble)
        stop = next((fault.sentence for fault in self._opened.faults if fault.stops), "")
        count = len(self.in_use)
        if count:
            return "No model is chosen", f"Choose one of the {count} models in use, in the line at the top."
        why = stop or "The practice’s library holds none that is approved for use now. An approver of the practice can."
        return "No model is in use", why

    def _name(self, fingerprint: str) -> str:
        state = None if self._opened is None else self._opened.state(fingerprint)
        return "The model" if state is None else f"{state.title}, {state.version}"


def _by_title(states: Iterable[ModelState]) -> tuple[OfferedModel, ...]:
    models = [OfferedModel(state.fingerprint, f"{state.title}, {state.version}") for state in states]
    return tuple(sorted(models, key=lambda model: model.title.casefold()))


def _sentence(error: ClinicalcError) -> str:
    return _capital(str(error))


def _capital(words: str) -> str:
    return f"{words[:1].upper()}{words[1:]}"
