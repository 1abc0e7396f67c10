"""A form that looks at what a field names before a passphrase is typed, without keeping anybody from going on."""

from collections.abc import Callable
from typing import Any, TypeVar

import shiboken6
from PySide6.QtCore import QTimer
from PySide6.QtWidgets import QWidget

from clinicalc.errors import ClinicalcError
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.form_deed import FormDeed
from clinicalc.gui.window_words import say_in_window
from clinicalc.operations.course import Course

_Result = TypeVar("_Result")


class LookingForm(FormDeed):
    """Subclasses call `look` when a field is left; a deed that is asked for meanwhile waits until the look is over."""

    def __init__(self, form: Form, errands: Errands) -> None:
        super().__init__(form, errands)
        self._is_looking = False
        self._waiting: tuple[Any, ...] | None = None

    def look(
        self,
        title: str,
        work: Callable[[Course], _Result],
        done: Callable[[_Result], None],
        failed: Callable[[ClinicalcError], None],
    ) -> None:
        """Look at something; nothing happens where another errand runs, since the deed looks again by itself."""

        def take(result: _Result) -> None:
            if self._has_looked():
                done(result)

        def fail(error: ClinicalcError) -> None:
            if self._has_looked():
                self._waiting = None
                self.form.settle()
                failed(say_in_window(error))

        self._is_looking = self._errands.run(title, work, take, fail) or self._is_looking

    def work(
        self,
        title: str,
        work: Callable[[Course], _Result],
        done: Callable[[_Result], None],
        place: Callable[[ClinicalcError], QWidget | None] = lambda _: None,
    ) -> None:
        """Run the work as an errand, after a look that is not over yet."""
        if self._is_looking:
            self._waiting = (title, work, done, place)
            self.form.wait(f"{title}…")
            return
        super().work(title, work, done, place)

    def settle_when_edited(self) -> None:
        """What was refused is not said any longer once it is being put right."""
        if not self._is_working:
            self.form.settle()

    def leave(self) -> None:
        """Leave the form; a deed that still waits is forgotten."""
        self._waiting = None
        super().leave()

    def _has_looked(self) -> bool:
        """The look is over; False where the form is gone meanwhile."""
        self._is_looking = False
        if not shiboken6.isValid(self):
            return False
        if self._waiting is not None:
            QTimer.singleShot(0, self, self._begin_waiting)  # the errand itself ends after this
        return True

    def _begin_waiting(self) -> None:
        waiting, self._waiting = self._waiting, None
        if waiting is not None:
            self.work(*waiting)
