"""One arrangement for many changes: layouts that wait until everything that changes has changed."""

from collections.abc import Iterator
from contextlib import contextmanager

from PySide6.QtCore import QCoreApplication, QEvent, QSize
from PySide6.QtWidgets import QWidget

_ROUNDS = 2
"""What is inside may ask for more room once it knows its own."""


class Block(QWidget):
    """A part of a column, as wide as the column is: only its height at that width is ever asked of its layout.

    Qt would also ask how high it is at its usual and at its least width, and measure every text again for each.
    """

    def sizeHint(self) -> QSize:
        """Nothing of its own."""
        return QSize(0, 0)

    def minimumSizeHint(self) -> QSize:
        """Nothing of its own."""
        return QSize(0, 0)


@contextmanager
def held_layouts(*widgets: QWidget) -> Iterator[None]:
    """Keep the layouts of these widgets still, the outer ones named first; afterwards they settle at once.

    Qt arranges all layouts above a widget anew for every single one that is shown, and paints once in between where
    one arrangement leads to another.
    """
    held = [(widget, layout) for widget in widgets if (layout := widget.layout()) is not None and layout.isEnabled()]
    for _, layout in held:
        layout.setEnabled(False)
    try:
        yield
    finally:
        for _, layout in held:
            layout.setEnabled(True)
        for _ in range(_ROUNDS):
            for widget, layout in reversed(held):
                QCoreApplication.sendPostedEvents(widget, QEvent.Type.LayoutRequest.value)
                # what was asked for meanwhile went unheard; asked for directly, since an event made in Python and
                # posted has crashed Qt here, once in some thirty sessions
                if widget.isVisible():
                    layout.activate()
        # and what that asks of everything around: a paint in between would show it squeezed into its old size
        QCoreApplication.sendPostedEvents(None, QEvent.Type.LayoutRequest.value)
