"""Starts the window: Qt, typeface, colours, and the hook for what nobody expected."""

import sys

from PySide6.QtWidgets import QApplication

from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.model import Model
from clinicalc.gui.exceptions import ExceptionHook
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.tokens import LIGHT, make_palette, make_style_sheet
from clinicalc.gui.typeface import face, load_typeface


def dress(application: QApplication) -> None:
    """Typeface and colours for every window of this application. Raises ShippedFileMissing without the fonts."""
    application.setStyle("Fusion")
    load_typeface()
    application.setFont(face())
    application.setPalette(make_palette(LIGHT))
    application.setStyleSheet(make_style_sheet(LIGHT))


def run_window(model: Model | None = None, entry: PatientEntry | None = None) -> int:
    """Show the window, on a model and an entry if there are any, until it is closed; returns Qt's exit status."""
    running = QApplication.instance()
    application = running if isinstance(running, QApplication) else QApplication(sys.argv[:1])
    application.setApplicationName("clinicalc")
    dress(application)
    window = MainWindow()
    ExceptionHook(window.state).install()
    window.resize(1280, 800)
    if model is not None:
        window.use_model(model, entry)
    window.show()
    return application.exec()
