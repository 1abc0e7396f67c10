"""Keys pressed without a look at where they go: to whatever has the focus."""

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from PySide6.QtWidgets import QApplication

NO, ALT, CONTROL = Qt.KeyboardModifier.NoModifier, Qt.KeyboardModifier.AltModifier, Qt.KeyboardModifier.ControlModifier
ENTER, TAB = Qt.Key.Key_Return, Qt.Key.Key_Tab


def hit(key: Qt.Key, modifier: Qt.KeyboardModifier = NO) -> None:
    """One key, to whatever has the focus."""
    focused = QApplication.focusWidget()
    assert focused is not None
    QTest.keyClick(focused, key, modifier)
    QApplication.processEvents()


def write(text: str) -> None:
    """The keys of a text, to whatever has the focus."""
    focused = QApplication.focusWidget()
    assert focused is not None
    QTest.keyClicks(focused, text)


def focused_name() -> str:
    """What a screen reader calls what has the focus; "" for nothing."""
    focused = QApplication.focusWidget()
    return "" if focused is None else focused.accessibleName()
