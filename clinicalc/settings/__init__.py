"""What was chosen on this machine: colours, paper, practice, level, decision points, files opened lately.

One small TOML file that a person may edit by hand. This room refuses to lose a file it could not read, to fail because
of one, and to hold anything about a patient: no value, no name, no print, and no folder in which prints are saved.
"""

from clinicalc.settings.folder import settings_folder
from clinicalc.settings.points import MOST_POINTS, PracticePoint
from clinicalc.settings.settings import MOST_RECENT, Paper, Settings, ThemeChoice
from clinicalc.settings.toml_file import FILE_NAME, SettingsReading, read_settings, write_settings

__all__ = [
    "FILE_NAME",
    "MOST_POINTS",
    "MOST_RECENT",
    "Paper",
    "PracticePoint",
    "Settings",
    "SettingsReading",
    "ThemeChoice",
    "read_settings",
    "settings_folder",
    "write_settings",
]
