"""The system's dialogs for files, which remember nothing from one patient to the next."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

import shiboken6
from PySide6.QtWidgets import QWidget

if TYPE_CHECKING:
    from PySide6.QtWidgets import QFileDialog

# Qt's dialogs are set up by the first one that is asked for, not by every start of the window

ChooseOpen = Callable[[QWidget], Path | None]
ChooseSave = Callable[[QWidget, str], Path | None]


def ask_which_file(parent: QWidget) -> Path | None:
    """The coefficient file somebody points to in the system's dialog, or None."""
    from PySide6.QtWidgets import QFileDialog

    with leaving_no_trace():
        name, _ = QFileDialog.getOpenFileName(
            parent, "Open a coefficient file", _documents(), "Coefficient files (*.json)"
        )
    return Path(name) if name else None


def ask_where_to_save(parent: QWidget, suggestion: str) -> Path | None:
    """Where to save the print, or None.

    The dialog always begins in the documents folder with the suggestion, which holds nothing about the patient: neither
    the last file name nor the last folder, which may bear a patient's name, is offered again.
    """
    with leaving_no_trace():
        dialog = make_save_dialog(parent, suggestion)
        chosen = dialog.selectedFiles() if dialog.exec() else []
        shiboken6.delete(dialog)
    return Path(chosen[0]) if chosen else None


def make_save_dialog(parent: QWidget, suggestion: str) -> QFileDialog:
    """The dialog for a print, without any history."""
    from PySide6.QtWidgets import QFileDialog

    dialog = QFileDialog(parent, "Save the print", _documents(), "PDF (*.pdf)")
    dialog.setAcceptMode(QFileDialog.AcceptMode.AcceptSave)
    dialog.setDefaultSuffix("pdf")  # added before the dialog asks whether to replace a file
    dialog.setHistory([])
    dialog.selectFile(suggestion)
    return dialog


@contextmanager
def leaving_no_trace() -> Iterator[None]:
    """Put back what Qt notes on disk about its file dialogs: the folders visited lately."""
    from PySide6.QtCore import QSettings

    kept = QSettings("QtProject", "")
    kept.beginGroup("FileDialog")
    before = {key: kept.value(key) for key in kept.allKeys()}
    try:
        yield
    finally:
        for key in kept.allKeys():
            if key not in before:
                kept.remove(key)
        for key, value in before.items():
            if kept.value(key) != value:
                kept.setValue(key, value)
        kept.sync()


def _documents() -> str:
    from PySide6.QtCore import QStandardPaths

    return QStandardPaths.writableLocation(QStandardPaths.StandardLocation.DocumentsLocation)
