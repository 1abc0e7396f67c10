"""What was chosen on this machine: colours, paper, practice, level, decision points, units, library, files opened.

One small TOML file that a person may edit by hand. This room refuses to lose a file it could not read, to fail because
of one, and to hold anything about a patient: no value, no name, no print, and no folder in which prints are saved.
"""

from clinicalc.settings.folder import settings_folder
from clinicalc.settings.letterhead import LONGEST_LINE, MOST_LINES
from clinicalc.settings.library_place import LIBRARY_VARIABLE, library_place
from clinicalc.settings.merging import carry_over
from clinicalc.settings.points import MOST_POINTS, PracticePoint
from clinicalc.settings.preferred_units import PreferredUnit, choosable_quantities
from clinicalc.settings.settings import LONGEST_PRACTICE, MOST_RECENT, Paper, Settings, ThemeChoice
from clinicalc.settings.toml_file import FILE_NAME, change_settings, read_settings, write_settings
from clinicalc.settings.toml_taking import SettingsReading

__all__ = [
    "FILE_NAME",
    "LIBRARY_VARIABLE",
    "LONGEST_LINE",
    "LONGEST_PRACTICE",
    "MOST_LINES",
    "MOST_POINTS",
    "MOST_RECENT",
    "Paper",
    "PracticePoint",
    "PreferredUnit",
    "Settings",
    "SettingsReading",
    "ThemeChoice",
    "carry_over",
    "change_settings",
    "choosable_quantities",
    "library_place",
    "read_settings",
    "settings_folder",
    "write_settings",
]
