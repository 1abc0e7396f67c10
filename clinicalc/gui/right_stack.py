"""The right side of the Models page: what belongs there, and a form that covers it until it is done or left."""

from PySide6.QtWidgets import QStackedWidget, QWidget


class RightStack(QStackedWidget):
    """What is shown underneath may change while something covers it; it is seen when that is gone."""

    def __init__(self) -> None:
        super().__init__()
        self._base: QWidget | None = None
        self._cover: QWidget | None = None

    @property
    def base(self) -> QWidget | None:
        """What belongs there, covered or not."""
        return self._base

    def show_base(self, widget: QWidget) -> None:
        """Show a widget, now or when nothing covers it any more."""
        self._base = widget
        if self.indexOf(widget) < 0:
            self.addWidget(widget)
        if self._cover is None:
            self.setCurrentWidget(widget)

    def cover(self, widget: QWidget) -> None:
        """Show a widget over everything else."""
        self.uncover()
        self._cover = widget
        self.addWidget(widget)
        self.setCurrentWidget(widget)

    def uncover(self) -> None:
        """What covers the rest goes for good."""
        cover, self._cover = self._cover, None
        if cover is None:
            return
        if self._base is not None:
            self.setCurrentWidget(self._base)
        self.removeWidget(cover)
        cover.hide()
        cover.deleteLater()
