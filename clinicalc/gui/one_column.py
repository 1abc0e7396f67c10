"""One column for narrow windows and large text: the panes stand under each other and scroll as one."""

from collections.abc import Sequence

from PySide6.QtCore import QEvent, QObject, QPoint, Qt
from PySide6.QtGui import QKeyEvent, QResizeEvent
from PySide6.QtWidgets import QAbstractSlider, QApplication, QVBoxLayout, QWidget

from clinicalc.gui.scroller import Scroller

_LARGEST = 16_777_215
"""What Qt calls no limit to a height."""
_BORDER = 4
_SCROLLS = {
    Qt.Key.Key_Up.value: QAbstractSlider.SliderAction.SliderSingleStepSub,
    Qt.Key.Key_Down.value: QAbstractSlider.SliderAction.SliderSingleStepAdd,
    Qt.Key.Key_PageUp.value: QAbstractSlider.SliderAction.SliderPageStepSub,
    Qt.Key.Key_PageDown.value: QAbstractSlider.SliderAction.SliderPageStepAdd,
    Qt.Key.Key_Home.value: QAbstractSlider.SliderAction.SliderToMinimum,
    Qt.Key.Key_End.value: QAbstractSlider.SliderAction.SliderToMaximum,
}


class OneColumn(Scroller):
    """Holds the panes while the window is narrow, each as high as its content, and follows the focus."""

    def __init__(self) -> None:
        super().__init__()
        self._areas: tuple[Scroller, ...] = ()
        self._policies: list[Qt.ScrollBarPolicy] = []
        self.setWidgetResizable(True)
        self.setHorizontalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
        self.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOn)
        self.setFocusPolicy(Qt.FocusPolicy.NoFocus)
        body = QWidget()
        body.setObjectName("ground")
        self._column = QVBoxLayout(body)
        self._column.setContentsMargins(0, 0, 0, 0)
        self._column.setSpacing(0)
        self.setWidget(body)
        application = QApplication.instance()
        if isinstance(application, QApplication):
            application.focusChanged.connect(self._follow_focus)

    def take(self, panes: Sequence[QWidget], areas: tuple[Scroller, ...]) -> None:
        """Put the panes under each other; `areas` are the scroll areas among or within them."""
        for pane in panes:
            self._column.addWidget(pane)
        self._areas = areas
        self._policies = [area.verticalScrollBarPolicy() for area in areas]
        for area in areas:
            area.setVerticalScrollBarPolicy(Qt.ScrollBarPolicy.ScrollBarAlwaysOff)
            area.installEventFilter(self)
        self.fit()

    def let_go(self) -> None:
        """The panes go elsewhere and scroll apart again."""
        for area, policy in zip(self._areas, self._policies, strict=True):
            area.setMinimumHeight(0)
            area.setMaximumHeight(_LARGEST)
            area.setVerticalScrollBarPolicy(policy)
            area.removeEventFilter(self)
        self._areas, self._policies = (), []

    def fit(self) -> None:
        """Make every area as high as its content, now and whenever its content changes."""
        for area in self._areas:
            body = area.widget()
            layout = None if body is None else body.layout()
            if body is None or layout is None:
                continue
            body.installEventFilter(self)
            width = area.width() - _BORDER
            wanted = (
                layout.totalHeightForWidth(width) if layout.hasHeightForWidth() else layout.totalSizeHint().height()
            )
            if area.height() != wanted + _BORDER:
                area.setFixedHeight(wanted + _BORDER)

    def eventFilter(self, watched: QObject, event: QEvent) -> bool:
        """The content of an area asks for another layout, or an area that cannot scroll itself gets a key for it."""
        if isinstance(event, QKeyEvent) and event.type() == QEvent.Type.KeyPress and watched in self._areas:
            return self._scroll(event)
        if event.type() == QEvent.Type.LayoutRequest and self._areas:
            self.fit()
        return super().eventFilter(watched, event)

    def _scroll(self, event: QKeyEvent) -> bool:
        """Scroll the whole column as a key says that an area got; whether it was such a key."""
        action = _SCROLLS.get(event.key())
        if action is None or event.modifiers() & ~Qt.KeyboardModifier.KeypadModifier:
            return False
        self.verticalScrollBar().triggerAction(action)
        event.accept()
        return True

    def resizeEvent(self, event: QResizeEvent) -> None:
        """Other widths make other heights."""
        super().resizeEvent(event)
        self.fit()
        self._follow_focus(None, QApplication.focusWidget())

    def _follow_focus(self, _: QWidget | None, now: QWidget | None) -> None:
        body = self.widget()
        if now is None or body is None or not self._areas or not body.isAncestorOf(now):
            return
        if now.height() > self.viewport().height():
            self.verticalScrollBar().setValue(now.mapTo(body, QPoint(0, 0)).y())
        else:
            self.ensureWidgetVisible(now, 0, 24)
