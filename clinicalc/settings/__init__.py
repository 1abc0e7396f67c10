"""What was chosen on this machine: colours, paper, practice, level, decision points, model library, files opened.

One small TOML file that a person may edit by hand. This room refuses to lose a file it could not read, to fail because
of one, and to hold anything about a patient: no value, no name, no print, and no folder in which prints are saved.
"""

from clinicalc.settings.folder import settings_folder
from clinicalc.settings.library_place import LIBRARY_VARIABLE, library_place
from clinicalc.settings.points import MOST_POINTS, PracticePoint
from clinicalc.settings.settings import MOST_RECENT, Paper, Settings, ThemeChoice
from clinicalc.settings.toml_file import FILE_NAME, SettingsReading, read_settings, write_choices, write_settings

__all__ = [
    "FILE_NAME",
    "LIBRARY_VARIABLE",
    "MOST_POINTS",
    "MOST_RECENT",
    "Paper",
    "PracticePoint",
    "Settings",
    "SettingsReading",
    "ThemeChoice",
    "library_place",
    "read_settings",
    "settings_folder",
    "write_choices",
    "write_settings",
]
