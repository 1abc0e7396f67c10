"""The focus stays on the page that is shown: what is typed on one never ends in a field of another.

Qt gives the focus to whatever asks for it, seen or not: a form whose work was refused while another page is on screen,
or a button whose key was pressed a moment before its page was left.
"""

from PySide6.QtCore import QObject, Qt
from PySide6.QtWidgets import QApplication, QStackedWidget, QWidget


class PageFocus(QObject):
    """Watches the pages of one window. What asked for the focus out of sight has it when its page is shown again."""

    def __init__(self, pages: QStackedWidget) -> None:
        super().__init__(pages)
        self._pages = pages
        application = QApplication.instance()
        if isinstance(application, QApplication):
            application.focusChanged.connect(self._bring_back)

    def _bring_back(self, before: QWidget | None, now: QWidget | None) -> None:
        if now is None or now.isVisible() or not self._pages.isAncestorOf(now):
            return
        page = self._pages.currentWidget()
        if page is None or page.isAncestorOf(now):
            return
        if before is not None and before.window() is now.window() and before.isVisible() and before.isEnabled():
            before.setFocus(Qt.FocusReason.OtherFocusReason)
        else:
            now.clearFocus()
