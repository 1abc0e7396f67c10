"""What every deed of the practice has in common: how it ends, and what the page asks of it."""

from PySide6.QtCore import Signal
from PySide6.QtWidgets import QWidget


class Deedlike(QWidget):
    """A deed in the place of the page's right side. The page puts it there, then calls `focus_first`."""

    done = Signal(object)
    """It is done: the ModelRow as it stands now, or None where it is not about one model. Show it, and read again."""
    left = Signal()
    """It was left with Escape or "Back"; passphrases are gone already."""
    card_ready = Signal(object)
    """The ModelCard of a file that was looked at: to be shown, with "Install…" leading to Deed.INSTALL with it."""
    written = Signal()
    """Something was written and the deed stays, because it still says something: read the library again behind it."""

    def focus_first(self) -> None:
        """The focus to where typing begins."""
        raise NotImplementedError

    def forget(self) -> None:
        """Empty every passphrase; the page calls it whenever the deed goes out of sight."""
        raise NotImplementedError
