"""The work a deed begins, what is said when it is refused, and how it is left; and a deed that is one form."""

from collections.abc import Callable
from typing import NoReturn, Protocol, TypeVar

import shiboken6
from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.errors import ClinicalcError, UsageError
from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.errands import Errands
from clinicalc.gui.form import Form
from clinicalc.gui.window_words import say_in_window
from clinicalc.operations.course import Course, Progress

_Result = TypeVar("_Result")


class _Refused(Exception):
    """What a form says itself before anything is begun: the error, and the field where it is put right."""

    def __init__(self, error: ClinicalcError, field: QWidget) -> None:
        self.error = error
        self.field = field
        super().__init__(error)


class Speaking(Protocol):
    """What says how the work goes: a form, or a view of its own."""

    def settle(self) -> None:
        """Nothing is refused and nothing being done."""

    def refuse(self, error: ClinicalcError, field: QWidget | None = None) -> None:
        """Say why it was not done."""

    def wait(self, words: str) -> None:
        """Say what is being done."""

    def forget(self) -> None:
        """Empty the passphrases."""

    def focus_first(self) -> None:
        """The focus to the first field."""


class WorkingDeed(Deedlike):
    """A deed whose work runs as an errand, with one face that says how it goes."""

    def __init__(self, face: QWidget, speaks: Speaking, errands: Errands) -> None:
        super().__init__()
        self._speaks = speaks
        self._errands = errands
        self._is_working = False
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.addWidget(face)
        errands.moved.connect(self._tell)

    def focus_first(self) -> None:
        """The focus to the first field."""
        self._speaks.focus_first()

    def forget(self) -> None:
        """Empty every passphrase."""
        self._speaks.forget()

    def leave(self) -> None:
        """Leave the deed; while it works, ask the work to stop instead, and stay to say what came of it."""
        if self._is_working:
            self._errands.stop()
            return
        self.forget()
        self.left.emit()

    def work(
        self,
        title: str,
        work: Callable[[Course], _Result],
        done: Callable[[_Result], None],
        place: Callable[[ClinicalcError], QWidget | None] = lambda _: None,
    ) -> None:
        """Run the work as an errand; `place` says at which field a refusal of it is put right."""

        def take(result: _Result) -> None:
            if self._is_back():
                self._speaks.settle()
                done(result)

        def fail(error: ClinicalcError) -> None:
            if self._is_back():
                self._speaks.refuse(say_in_window(error), place(error))

        self._is_working = self._errands.run(title, work, take, fail)
        if self._is_working:
            self._speaks.wait(f"{title}…")
            return
        busy = UsageError(
            "something else is still being done.", do="Wait until it is over, or cancel it, and try again."
        )
        self._speaks.refuse(busy)

    def _is_back(self) -> bool:
        """The work is over: nothing of the passphrase is kept. False where the deed is gone meanwhile."""
        self._is_working = False
        if not shiboken6.isValid(self):
            return False
        self.forget()
        return True

    def _tell(self, progress: Progress) -> None:
        if self._is_working:
            count = f", {progress.done} of {progress.of}" if progress.of else ""
            self._speaks.wait(f"{progress.words}{count}…")


class FormDeed(WorkingDeed):
    """Subclasses fill the form and say in `begin` what is done when it is asked for."""

    def __init__(self, form: Form, errands: Errands) -> None:
        super().__init__(form, form, errands)
        self.form = form
        form.asked.connect(self.ask)
        form.left.connect(self.leave)

    def begin(self) -> None:
        """Read the fields and begin the work. Ends with `refuse_at` for what the form itself can say is wrong."""
        raise NotImplementedError

    def ask(self) -> None:
        """What the form's deed does when it is asked for; nothing while it is being done."""
        if self._is_working:
            return
        self.form.settle()
        try:
            self.begin()
        except _Refused as refused:
            self.forget()
            self.form.refuse(say_in_window(refused.error), refused.field)


def read_field(read: Callable[[], _Result], field: QWidget) -> _Result:
    """What is in a field. Refused at that field where it cannot be."""
    try:
        return read()
    except ClinicalcError as error:
        refuse_at(error, field)


def refuse_at(error: ClinicalcError, field: QWidget) -> NoReturn:
    """Say an error at the field where it is put right; only within `FormDeed.begin`."""
    raise _Refused(error, field) from None
