"""Starts the window: Qt, typeface, colours, and the hook for what nobody expected."""

import gc
import sys
from functools import partial

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QApplication

from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.model import Model
from clinicalc.gui import theme
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.exceptions import ExceptionHook
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.preferences import Preferences
from clinicalc.gui.text_size import start_application
from clinicalc.gui.typeface import face, load_typeface
from clinicalc.gui.window_number import WindowNumber
from clinicalc.operations.bedside import assess_patient
from clinicalc.settings import read_settings, write_settings


def dress(application: QApplication) -> None:
    """Typeface and colours for every window of this application. Raises ShippedFileMissing without the fonts."""
    load_typeface()
    application.setFont(face())
    theme.current().apply_to(application)


def run_window(model: Model | None = None, entry: PatientEntry | None = None) -> int:
    """Show the window, on a model and an entry if there are any, until it is closed; returns Qt's exit status."""
    application = start_application(sys.argv[:1])
    application.setApplicationName("clinicalc")
    reading = read_settings()
    theme.choose(reading.settings.theme)
    dress(application)
    number = WindowNumber()
    application.aboutToQuit.connect(number.let_go)
    state = EntryState(partial(assess_patient, level=reading.settings.level))
    preferences = Preferences(reading.settings, write_settings)
    window = MainWindow(state, preferences=preferences, number=number.number)
    ExceptionHook(window.state).install()
    window.resize(QSize(1280, 800).boundedTo(application.primaryScreen().availableSize()))
    if model is not None:
        window.use_model(model, entry)
    if reading.problems:
        window.foot.say(reading.problems[0])
    window.show()
    # what there is now stays until the window is closed: no collection, whose pause a key might wait for, looks at it
    gc.freeze()
    gc.enable()
    return application.exec()
