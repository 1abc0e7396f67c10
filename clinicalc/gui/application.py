"""Starts the window: Qt, typeface, colours, and the hook for what nobody expected."""

import gc
import sys

from PySide6.QtCore import QSize
from PySide6.QtWidgets import QApplication

from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.model import Model
from clinicalc.errors import UsageError
from clinicalc.gui import theme
from clinicalc.gui.entry_state import EntryState
from clinicalc.gui.exceptions import ExceptionHook
from clinicalc.gui.first_paint import after_first_paint
from clinicalc.gui.main_window import MainWindow
from clinicalc.gui.model_library import ModelLibrary
from clinicalc.gui.preferences import Preferences
from clinicalc.gui.text_size import start_application
from clinicalc.gui.typeface import face, load_typeface
from clinicalc.gui.window_number import WindowNumber
from clinicalc.library.machine import uses_library
from clinicalc.settings import change_settings, read_settings, write_settings


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
    state = EntryState()
    preferences = Preferences(
        reading.settings, change_settings, read=read_settings, write=write_settings, problems=reading.problems
    )
    library = ModelLibrary(state) if _uses_library() else None
    window = MainWindow(state, preferences=preferences, library=library, number=number.number)
    ExceptionHook(window.state).install()
    window.resize(QSize(1280, 800).boundedTo(application.primaryScreen().availableSize()))
    if model is not None:
        window.use_model(model, entry)
    if reading.problems:
        window.foot.say(reading.problems[0])
    if library is not None:
        window.sheet.invite("The library is being read", "The models that the practice approved can then be chosen.")
        after_first_paint(window, library.start_beside)
    window.show()
    # what there is now stays until the window is closed: no collection, whose pause a key might wait for, looks at it
    gc.freeze()
    gc.enable()
    return application.exec()


def _uses_library() -> bool:
    """Whether this machine works from a library; one that is named wrongly is said when it is read."""
    try:
        return uses_library()
    except UsageError:
        return True
