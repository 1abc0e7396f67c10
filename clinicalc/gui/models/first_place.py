"""What stands on the right side of the Models page while this machine has no library, or none of its models."""

from PySide6.QtCore import QObject, Signal

from clinicalc.gui.errands import Errands
from clinicalc.gui.file_choosing import FileChoices
from clinicalc.gui.practice.first_run import FirstRun
from clinicalc.gui.right_stack import RightStack


class FirstPlace(QObject):
    """Made when it is first needed, which on most machines is never."""

    founded = Signal()
    """This machine uses a library now."""
    install_asked = Signal(object)
    """The Path of a file that is to be the first one."""
    left = Signal()
    """This machine goes on with the library it has."""

    def __init__(self, stack: RightStack, errands: Errands, choices: FileChoices) -> None:
        super().__init__()
        self._stack, self._errands, self._choices = stack, errands, choices
        self._view: FirstRun | None = None
        self.is_asked = False
        """Whether somebody asked for the ways to another library: a reading of this one does not cover them."""

    @property
    def is_shown(self) -> bool:
        """Whether it is what belongs on the right side."""
        return self._view is not None and self._stack.base is self._view

    def show(self) -> None:
        """Show it as this machine stands now; what stands half-way in it goes on."""
        view = self._made()
        view.begin()
        self._stack.show_base(view)

    def show_ways(self) -> None:
        """Show the ways to a library, on a machine that has one too."""
        self.is_asked = True
        view = self._made()
        view.show_start()
        self._stack.show_base(view)

    def leave(self) -> None:
        """Nobody asks for the ways to another library any more."""
        self.is_asked = False

    @property
    def own_key(self) -> str:
        """The key file that somebody named for a founding in this window, "" for none."""
        return "" if self._view is None else self._view.own_key

    def forget(self) -> None:
        """The passphrases typed in it go: it is out of sight."""
        if self._view is not None:
            self._view.forget()

    def focus(self) -> None:
        """The focus to the first thing that can be done."""
        self._made().focus_first()

    def _made(self) -> FirstRun:
        if self._view is None:
            choices = self._choices
            self._view = FirstRun(self._errands, choices.folder, choices.which, choices.where)
            self._view.founded.connect(self.founded)
            self._view.install_asked.connect(self.install_asked)
            self._view.left.connect(self.left)
        return self._view
