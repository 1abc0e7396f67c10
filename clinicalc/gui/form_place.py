"""The place of the forms on the right side of a page: one at a time, which is gone when it is done or left."""

from PySide6.QtCore import QObject, Signal

from clinicalc.gui.deedlike import Deedlike
from clinicalc.gui.right_stack import RightStack


class FormPlace(QObject):
    """Whichever way a form ends, it is out of the stack before that is told."""

    done = Signal(object)
    """What came of it."""
    left = Signal()
    """It was left without anything."""

    def __init__(self, stack: RightStack) -> None:
        super().__init__()
        self._stack = stack
        self._deed: Deedlike | None = None

    @property
    def is_open(self) -> bool:
        """Whether a form is on screen, or would be if its page were."""
        return self._deed is not None

    def open(self, deed: Deedlike) -> None:
        """Show a form in place of what the stack shows; one that is open already is left."""
        self.close()
        self._deed = deed
        deed.done.connect(self._finish)
        deed.left.connect(self._leave)
        self._stack.cover(deed)

    def focus(self) -> None:
        """The focus back into the form, where it was."""
        if self._deed is not None:
            inside = self._deed.focusWidget()
            if inside is not None and inside.isVisible() and inside.isEnabled():
                inside.setFocus()
            else:
                self._deed.focus_first()

    def forget(self) -> None:
        """The passphrases typed in an open form go: it is out of sight."""
        if self._deed is not None:
            self._deed.forget()

    def close(self) -> None:
        """The open form goes, if there is one, with everything typed in it."""
        deed, self._deed = self._deed, None
        if deed is not None:
            deed.forget()
            self._stack.uncover()

    def _finish(self, result: object) -> None:
        self.close()
        self.done.emit(result)

    def _leave(self) -> None:
        self.close()
        self.left.emit()
