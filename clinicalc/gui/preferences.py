"""What was chosen on this machine, while a window is open; the room of settings puts it on disk."""

from collections.abc import Callable
from pathlib import Path

from PySide6.QtCore import QObject, Signal

from clinicalc.errors import ClinicalcError
from clinicalc.settings import Settings


def _keep_nothing(_: Settings) -> None:
    """What is chosen holds until the window is closed."""


class Preferences(QObject):
    """The settings in force. `keep` writes them; left out, nothing is written anywhere."""

    changed = Signal()
    refused = Signal(str)
    """Why the settings could not be kept; they hold nonetheless until the program is closed."""

    def __init__(self, settings: Settings | None = None, keep: Callable[[Settings], None] = _keep_nothing) -> None:
        super().__init__()
        self._settings = settings or Settings()
        self._keep = keep

    @property
    def settings(self) -> Settings:
        """The settings in force."""
        return self._settings

    def take(self, settings: Settings) -> None:
        """Change the settings and keep them."""
        if settings == self._settings:
            return
        self._settings = settings
        self.changed.emit()
        try:
            self._keep(settings)
        except ClinicalcError as error:
            self.refused.emit(str(error))

    def remember_file(self, path: Path) -> None:
        """Put a coefficient file first among those opened lately."""
        self.take(self._settings.with_recent(path))
