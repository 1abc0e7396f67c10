"""Long work in a thread of its own, one piece at a time; the window is told how far it is, and can ask it to stop.

Everything that comes back is taken up in the window's own thread. Qt objects must die there too: while an errand runs
no garbage is collected, since a collection in its thread might take a widget along, and what the work was given is
let go only when its thread is over, since the last to let go of a form would otherwise be the thread.
"""

from __future__ import annotations

from collections.abc import Callable
from contextlib import suppress
from threading import Thread
from typing import Any, TypeVar

from PySide6.QtCore import QObject, Signal, SignalInstance

from clinicalc.errors import ClinicalcError
from clinicalc.gui import resting_collector
from clinicalc.operations.course import Course, Progress

_Result = TypeVar("_Result")
_at_work: set[Errands] = set()
"""Held until they are back: one that was let go by the window would otherwise end in the thread of its work."""


class Errands(QObject):
    """Runs work for one window. While one errand runs another is refused: `run` says False."""

    began = Signal(str)
    """What is being done."""
    moved = Signal(object)
    """The Progress."""
    ended = Signal()
    """The errand is over, whichever way; `done` or `failed` was called before."""
    _returned = Signal(object, object, object)
    _told = Signal(object, object)

    def __init__(self, parent: QObject | None = None) -> None:
        super().__init__(parent)
        self._course: Course | None = None
        self._thread: Thread | None = None
        self._work_given: Callable[[Course], Any] | None = None
        self._answer: tuple[Callable[[Any], None], Callable[[ClinicalcError], None]] | None = None
        self._returned.connect(self._take)
        self._told.connect(self._tell)

    @property
    def is_busy(self) -> bool:
        """Whether an errand runs."""
        return self._course is not None

    def run(
        self,
        title: str,
        work: Callable[[Course], _Result],
        done: Callable[[_Result], None],
        failed: Callable[[ClinicalcError], None],
    ) -> bool:
        """Begin the work; `done` or `failed` is called with what came of it, `failed` with Stopped after `stop`.

        `work` touches no Qt object. An exception that is no ClinicalcError is told to `failed` without its words, and
        then reaches the hook of the process.
        """
        if self._course is not None:
            return False
        course = Course(lambda progress: self._call_home(self._told, course, progress))
        self._course, self._answer, self._work_given = course, (done, failed), work
        _at_work.add(self)
        resting_collector.rest()
        self.began.emit(title)
        self._thread = Thread(target=self._work, args=(course, work), daemon=True, name=title)
        self._thread.start()
        return True

    def stop(self) -> None:
        """Ask the errand to stop; it ends where stopping leaves no half."""
        if self._course is not None:
            self._course.stop()

    def leave(self) -> None:
        """The window closes: nobody waits for the answer any more."""
        self.stop()
        self._answer = None

    def wait(self, seconds: float) -> None:
        """After `leave`: let what is being written come to its end, as long as that takes no longer than this."""
        thread = self._thread
        if thread is None:
            return
        thread.join(seconds)
        if not thread.is_alive() and self._course is not None:
            self._settle()

    def _work(self, course: Course, work: Callable[[Course], object]) -> None:
        result: object = None
        error: BaseException | None = None
        try:
            result = work(course)
        except BaseException as fault:  # noqa: BLE001 carried over to the window's thread, where it is raised again
            error = fault
        self._call_home(self._returned, course, result, error)

    def _call_home(self, signal: SignalInstance, *words: object) -> None:
        """To the window's thread; where the window is gone meanwhile nobody is left to hear it."""
        with suppress(RuntimeError):
            signal.emit(*words)

    def _tell(self, course: Course, progress: Progress) -> None:
        if course is self._course:
            self.moved.emit(progress)

    def _take(self, course: Course, result: object, error: BaseException | None) -> None:
        if course is not self._course:
            return
        answer = self._answer
        self._end_thread()
        self._settle()
        try:
            if error is None:
                if answer is not None:
                    answer[0](result)
            elif isinstance(error, ClinicalcError):
                if answer is not None:
                    answer[1](error)
            else:
                if answer is not None:
                    answer[1](_own_fault(error))
                raise error
        finally:
            self.ended.emit()

    def _end_thread(self) -> None:
        """The thread has said its last word and is about to end; it may still hold what it was given."""
        if self._thread is not None:
            self._thread.join()

    def _settle(self) -> None:
        """Nothing runs any more, and no thread holds anything of it."""
        self._course = self._answer = self._thread = self._work_given = None
        _at_work.discard(self)
        resting_collector.resume()


def _own_fault(error: BaseException) -> ClinicalcError:
    """An exception that nobody expected, for whoever waits; its words may hold what was typed and are left out."""
    return ClinicalcError(
        f"the program met a fault of its own ({type(error).__name__}) and did not finish this.",
        do="Try it again; if the fault comes back, report it.",
    )
