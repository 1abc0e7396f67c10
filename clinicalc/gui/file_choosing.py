"""The system's dialogs for the files of the practice: keys, cards, coefficient files, exported libraries, folders."""

from collections.abc import Callable
from dataclasses import dataclass
from enum import Enum
from pathlib import Path

import shiboken6
from PySide6.QtWidgets import QWidget

from clinicalc.gui.file_dialogs import leaving_no_trace


class Wanted(Enum):
    """Which file a dialog of the system asks for: its title, and what it lists."""

    COEFFICIENT_FILE = ("Choose a coefficient file", "Coefficient files (*.json)")
    KEY_FILE = ("Choose the file of your private key", "All files (*)")
    NEW_KEY = ("Make the file of a key", "All files (*)")
    NEW_CARD = ("Write the card of a key", "Cards (*.json)")
    CARD = ("Choose the card of a key", "All files (*)")
    BUNDLE = ("Choose an exported library", "Exported libraries (*.json)")
    NEW_BUNDLE = ("Export the library", "Exported libraries (*.json)")
    CSV = ("Save the history for a spreadsheet", "CSV (*.csv)")
    PDF = ("Save the history", "PDF (*.pdf)")
    RECORD_PDF = ("Save the approval record", "PDF (*.pdf)")
    STUDY = ("Open a study or validation file", "Study and validation files (*.toml)")
    NEW_STUDY = ("Save the study file", "Study files (*.toml)")
    COHORT = ("Choose a file of people", "Tables (*.csv *.tsv *.parquet *.xlsx *.dta)")
    NEW_COEFFICIENT_FILE = ("Write the coefficient file", "Coefficient files (*.json)")
    REPORT_PDF = ("Save the report of the fit", "PDF (*.pdf)")
    VALIDATION_PDF = ("Save the report of the validation", "PDF (*.pdf)")
    DIFFERENCE_PDF = ("Save the difference", "PDF (*.pdf)")

    @property
    def title(self) -> str:
        """The title of the dialog."""
        return self.value[0]

    @property
    def filter(self) -> str:
        """What the dialog lists, as the system's dialogs want it said."""
        return self.value[1]


ChooseOpen = Callable[[QWidget, Wanted], Path | None]
"""Asks for a file that is there; None where nobody chose one."""
ChooseSave = Callable[[QWidget, Wanted, str], Path | None]
"""Asks where to write a file, with a name suggested; the dialog itself asks before one is replaced."""
ChooseFolder = Callable[[QWidget], Path | None]
"""Asks for a folder that is there, or for one that is made in the dialog; None where nobody chose one."""


def ask_which(parent: QWidget, wanted: Wanted) -> Path | None:
    """The file somebody points to, or None."""
    from PySide6.QtWidgets import QFileDialog

    with leaving_no_trace():
        name, _ = QFileDialog.getOpenFileName(parent, wanted.title, "", wanted.filter)
    return Path(name) if name else None


def ask_where(parent: QWidget, wanted: Wanted, suggestion: str) -> Path | None:
    """Where to write, or None; the dialog asks before a file is replaced."""
    from PySide6.QtWidgets import QFileDialog

    with leaving_no_trace():
        dialog = QFileDialog(parent, wanted.title, "", wanted.filter)
        dialog.setAcceptMode(QFileDialog.AcceptMode.AcceptSave)
        dialog.setDefaultSuffix(wanted.filter.partition("(*.")[2].rstrip(")"))  # added before it asks about replacing
        dialog.setHistory([])
        dialog.selectFile(suggestion)
        chosen = dialog.selectedFiles() if dialog.exec() else []
        shiboken6.delete(dialog)
    return Path(chosen[0]) if chosen else None


def ask_which_folder(parent: QWidget) -> Path | None:
    """The folder somebody points to, or None."""
    from PySide6.QtWidgets import QFileDialog

    with leaving_no_trace():
        name = QFileDialog.getExistingDirectory(parent, "Choose the folder of the library")
    return Path(name) if name else None


@dataclass(frozen=True, slots=True)
class FileChoices:
    """One verb for each kind of question; None is the answer of somebody who chose nothing."""

    which: ChooseOpen = ask_which
    where: ChooseSave = ask_where
    folder: ChooseFolder = ask_which_folder
