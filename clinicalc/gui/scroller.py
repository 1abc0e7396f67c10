"""The one kind of scroll area of the patient page: Qt's, over a ground that is made here."""

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QScrollArea, QWidget


class Scroller(QScrollArea):
    """A QScrollArea whose `viewport()` costs nothing to ask for.

    A viewport of Qt's own making is unknown to PySide6, which sets up every kind of widget there is to find out which
    one it has been handed: 7 ms of every start. This one is known, and otherwise as Qt makes it.
    """

    def __init__(self) -> None:
        super().__init__()
        ground = QWidget()
        ground.setObjectName("qt_scrollarea_viewport")  # Qt's own name for it
        ground.setAutoFillBackground(True)
        ground.setAttribute(Qt.WidgetAttribute.WA_AcceptTouchEvents)
        self.setViewport(ground)
