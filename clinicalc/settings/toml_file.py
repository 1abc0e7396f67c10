"""The settings file: read kindly, written whole or not at all, and never lost."""

from dataclasses import replace
from pathlib import Path

from clinicalc.errors import FileNotWritten, UsageError
from clinicalc.replacement import replace_file
from clinicalc.settings.folder import settings_folder
from clinicalc.settings.merging import carry_over
from clinicalc.settings.settings import Settings
from clinicalc.settings.toml_lines import change_lines
from clinicalc.settings.toml_spelling import spell
from clinicalc.settings.toml_taking import DEFAULTS, SettingsReading, take_text

FILE_NAME = "settings.toml"
_MOST_BYTES = 1 << 20


def read_settings() -> SettingsReading:
    """The settings of this user; the defaults where there is no file. Never raises: what is wrong is a sentence.

    A setting that cannot be taken leaves its default; a file that is no TOML leaves all of them.
    """
    try:
        path = settings_folder() / FILE_NAME
    except UsageError as fault:
        return SettingsReading(Settings(), (str(fault),))
    return _read(path)


def write_settings(settings: Settings) -> None:
    """Let the file state these settings: whole or not at all, only the lines changed that have to be.

    A file that could not be taken whole is written anew, and first copied beside ("settings-1.toml"), so that no hand
    edit is lost. Raises FileNotWritten, and UsageError where there is no folder for settings.
    """
    path = settings_folder() / FILE_NAME
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        path = path.resolve()  # where the file is a link, what it leads to is replaced and the link stays
        reading = _read(path)
        data = None if reading.problems else _changed(path, reading.settings, settings)
        if data is None:
            _keep_copy(path)
            data = spell(settings).encode("utf-8")
        replace_file(path, data)
    except (OSError, RuntimeError) as fault:
        raise FileNotWritten(
            "the settings could not be written.",
            where=str(path),
            why=f"The computer says: {getattr(fault, 'strerror', None) or fault}.",
            do="They hold until the program is closed. Make room there, or ask who looks after this computer.",
        ) from None


def change_settings(before: Settings, after: Settings) -> Settings:
    """Write what differs between `before` and `after` into the file as it is now; the settings that it then states.

    Another window, or a command, may have changed others since `before` was read: those stay. A file with something
    in it that cannot be taken is not written at all: it waits for `write_settings`, which keeps a copy. Raises
    FileNotWritten for that too, and UsageError where the changes do not go together with what the file says now.
    """
    reading = read_settings()
    if reading.problems:
        raise FileNotWritten(
            "this holds until the program is closed, and is not kept: the settings file holds something that could not"
            " be taken, and nothing is written over it unasked.",
            why=reading.problems[0],
            do="Settings (Ctrl+,) shows each problem, and keeps a copy before the file is written anew.",
        )
    settings = carry_over(before, after, reading.settings)
    if settings != reading.settings:
        write_settings(settings)
    return settings


def _read(path: Path) -> SettingsReading:
    try:
        if path.exists() and not path.is_file():  # a pipe would be waited for
            return SettingsReading(Settings(), (f"{path}: this is not a file. {DEFAULTS}",))
        data = _bytes_of(path)
    except FileNotFoundError:
        return SettingsReading(Settings())
    except (OSError, ValueError) as fault:
        said = getattr(fault, "strerror", None) or "its name cannot be a file name"
        return SettingsReading(Settings(), (f"{path}: the settings could not be read ({said}). {DEFAULTS}",))
    if len(data) > _MOST_BYTES:
        return SettingsReading(Settings(), (f"{path}: this is larger than 1 MB, so not settings. {DEFAULTS}",))
    return take_text(path.name, data)


def _bytes_of(path: Path) -> bytes:
    with path.open("rb") as file:
        return file.read(_MOST_BYTES + 1)


def _changed(path: Path, before: Settings, after: Settings) -> bytes | None:
    """The file's bytes with single lines changed; None where that does not lead to the settings wanted."""
    if not path.exists():
        return spell(after).encode("utf-8")
    text = _bytes_of(path).decode("utf-8-sig")
    lines = "\r\n" if "\r\n" in text else "\n"
    changed = change_lines(text.replace("\r\n", "\n"), before, after)
    if changed is None:
        return None
    data = changed.replace("\n", lines).encode("utf-8")
    return data if _in_order(take_text(path.name, data)) == _in_order(SettingsReading(after)) else None


def _in_order(reading: SettingsReading) -> SettingsReading:
    """Units in one order, since it says nothing."""
    units = tuple(sorted(reading.settings.units, key=lambda one: one.quantity))
    return replace(reading, settings=replace(reading.settings, units=units))


def _keep_copy(path: Path) -> None:
    """Copy the file to the first of settings-1.toml, settings-2.toml, … that is free."""
    import shutil

    if not path.is_file():
        return
    number = 1
    while (kept := path.with_name(f"{path.stem}-{number}{path.suffix}")).exists():
        number += 1
    shutil.copyfile(path, kept)
