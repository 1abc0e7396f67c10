"""What this person chose on this machine: theme, paper, the practice's name, the band's level, files opened lately.

One small TOML file that a person may edit by hand. This room refuses to lose a file it could not read, to fail because
of one, and to hold anything about a patient: no value, no name, no print, and no folder in which prints are saved.
"""

from clinicalc.settings.folder import settings_folder
from clinicalc.settings.settings import MOST_RECENT, Paper, Settings, ThemeChoice
from clinicalc.settings.toml_file import FILE_NAME, SettingsReading, read_settings, write_settings

__all__ = [
    "FILE_NAME",
    "MOST_RECENT",
    "Paper",
    "Settings",
    "SettingsReading",
    "ThemeChoice",
    "read_settings",
    "settings_folder",
    "write_settings",
]
