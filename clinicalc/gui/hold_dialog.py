"""Asks why a model is to be held on this machine, in one line."""

from collections.abc import Callable

from PySide6.QtCore import Qt
from PySide6.QtWidgets import QInputDialog, QLabel, QLineEdit, QWidget

from clinicalc.gui import theme

AskWhy = Callable[[QWidget, str], str | None]
"""Asks about the model of this name; the reason, None where the question was closed without one."""


def ask_why(parent: QWidget, name: str) -> str | None:
    """One line of text; None where there is none."""
    dialog = QInputDialog(parent)
    dialog.setInputMode(QInputDialog.InputMode.TextInput)
    dialog.setWindowTitle("Hold this model on this machine")
    dialog.setLabelText(f"{name} gives no number on this machine until somebody releases it here. Why?")
    dialog.setOkButtonText("Hold")
    for label in dialog.findChildren(QLabel):
        label.setTextFormat(Qt.TextFormat.PlainText)
        label.setWordWrap(True)
    colours = theme.tokens()
    for edit in dialog.findChildren(QLineEdit):
        edit.setStyleSheet(
            f"QLineEdit {{ background: {colours.field}; border: 1px solid {colours.edge}; border-radius: 3px;"
            f" padding: 4px 8px; }} QLineEdit:focus {{ border: 2px solid {colours.accent}; padding: 3px 7px; }}"
        )
    try:
        return dialog.textValue().strip() or None if dialog.exec() else None
    finally:
        dialog.deleteLater()
