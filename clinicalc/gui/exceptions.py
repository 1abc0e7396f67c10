"""The last resort: an exception that nobody expected takes the number off the screen first and explains second."""

import sys
from pathlib import Path
from traceback import extract_tb
from types import TracebackType

from clinicalc.errors import ClinicalcError
from clinicalc.gui.entry_state import EntryState


class ExceptionHook:
    """Stands in for `sys.excepthook`; Qt goes on after an exception in a slot or a paint, so the number must go."""

    def __init__(self, state: EntryState) -> None:
        self._state = state
        self._busy = False

    def install(self) -> None:
        """Make it the hook of this process."""
        sys.excepthook = self

    def __call__(self, kind: type[BaseException], error: BaseException, trace: TracebackType | None) -> None:
        """Blank, explain, and name the place on the error stream without a word of what was typed."""
        if not issubclass(kind, Exception):
            sys.__excepthook__(kind, error, trace)
            return
        if self._busy:  # a fault while explaining a fault: the first one has already blanked
            return
        self._busy = True
        try:
            self._state.blank("")
            self._state.blank(explain(error))
            sys.stderr.write(f"clinicalc: {kind.__name__} {_place_of(trace)}\n")
        finally:
            self._busy = False


def explain(error: BaseException) -> str:
    """An exception in words, without anything that was typed unless the program said it on purpose."""
    if isinstance(error, ClinicalcError):
        return str(error)
    return (
        f"The program met a fault of its own ({type(error).__name__}) and has taken the result off the screen, because"
        " it can no longer vouch for it. The values still stand. Change one of them to try again; if the fault comes"
        " back, do without the number and report it."
    )


def _place_of(trace: TracebackType | None) -> str:
    frames = extract_tb(trace)
    return f"at {Path(frames[-1].filename).name}:{frames[-1].lineno}" if frames else "at an unknown place"
