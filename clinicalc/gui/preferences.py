"""What was chosen on this machine, while a window is open; the room of settings puts it on disk."""

from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QObject, Signal

from clinicalc.errors import ClinicalcError, UsageError
from clinicalc.settings import Settings, SettingsReading, carry_over


def _keep_nothing(before: Settings, after: Settings) -> Settings:
    """What is chosen holds until the window is closed."""
    return after


def _write_nothing(_: Settings) -> None:
    """The same for a file written anew."""


class Preferences(QObject):
    """The settings in force, and the file that they come from.

    `keep(before, after)` writes what differs and says what the file then states; left out, nothing is written anywhere.
    `read` reads the file again, `write` writes it whole although something in it could not be taken. Of two windows
    each writes only what was changed in it.
    """

    changed = Signal()
    refused = Signal(str)
    """Why the settings could not be kept; they hold nonetheless until the program is closed."""

    def __init__(
        self,
        settings: Settings | None = None,
        keep: Callable[[Settings, Settings], Settings] = _keep_nothing,
        *,
        read: Callable[[], SettingsReading] | None = None,
        write: Callable[[Settings], None] = _write_nothing,
        problems: tuple[str, ...] = (),
    ) -> None:
        super().__init__()
        self._settings = self._in_file = settings or Settings()
        self._keep, self._read, self._write = keep, read, write
        self._problems = problems

    @property
    def settings(self) -> Settings:
        """The settings in force."""
        return self._settings

    @property
    def problems(self) -> tuple[str, ...]:
        """One sentence for each thing in the file that could not be taken, as it was last read."""
        return self._problems

    @property
    def is_kept(self) -> bool:
        """Whether the file states what is in force."""
        return self._settings == self._in_file

    def take(self, settings: Settings) -> None:
        """Change the settings and keep them. Another window's changes are taken up at the same time."""
        if settings != self._settings:
            self._take(settings, say=True)

    def remember_file(self, path: Path) -> None:
        """Put a coefficient file first among those opened lately; nothing new is said of a file with problems."""
        settings = self._settings.with_recent(path)
        if settings != self._settings:
            self._take(settings, say=not self._problems)

    def read_again(self) -> None:
        """Take up what the file says by now; what is in force and could not be kept stays in force."""
        if self._read is None:
            return
        reading = self._read()
        self._problems = reading.problems
        if reading.problems:
            return
        try:
            self._settle(carry_over(self._in_file, self._settings, reading.settings), reading.settings)
        except UsageError as error:  # the file is full of others' decision points
            self._settle(reading.settings, reading.settings)
            self.refused.emit(str(error))

    def write_anew(self) -> None:
        """Write the file whole, which the user agreed to; what stood in it is kept beside it."""
        try:
            settings = self._settings
            if self._read is not None:  # what can be taken of it now, with what was chosen here
                settings = carry_over(self._in_file, settings, self._read().settings)
            self._write(settings)
        except ClinicalcError as error:
            self.refused.emit(str(error))
            return
        self._problems = ()
        self._settle(settings, settings)

    def _take(self, settings: Settings, *, say: bool) -> None:
        refusal = ""
        try:
            in_file = settings = self._keep(self._in_file, settings)
        except UsageError as error:
            self.refused.emit(str(error))
            return
        except ClinicalcError as error:
            in_file, refusal = self._in_file, str(error)
        self._settle(settings, in_file)
        if refusal and say:
            self.refused.emit(refusal)

    def _settle(self, settings: Settings, in_file: Settings) -> None:
        self._in_file = in_file
        if settings != self._settings:
            self._settings = settings
            self.changed.emit()
