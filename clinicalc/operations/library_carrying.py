"""A library as one file: exported where it is sound, and brought into the place of this machine or a new one."""

from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from clinicalc.errors import LibraryError
from clinicalc.library.bundle import Bundle, read_bundle_file
from clinicalc.library.carrying import Carried, export_library, import_bundle
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.machine import Machine
from clinicalc.library.memory import read_memory
from clinicalc.library.opening import OpenedLibrary
from clinicalc.settings import read_settings, settings_folder


@dataclass(frozen=True, slots=True)
class BroughtIn:
    """What an import did; `known` is False where this machine has yet to join the library."""

    place: Path
    carried: Carried
    known: bool


def export_opened(opened: OpenedLibrary, path: Path, now: datetime, *, replace: bool = False) -> Bundle:
    """Write the whole library at `path`; the bundle that was written.

    Raises LibraryError where anything stops the library or one of its models on this machine, and FileNotWritten.
    """
    found = (*opened.faults, *(fault for state in opened.models for fault in state.faults))
    stops = [fault.sentence for fault in found if fault.stops]
    if stops:
        raise LibraryError(
            "the library was not exported, because something is wrong with it.",
            where=str(opened.place),
            why=stops[0],
            do="Settle what clinicalc library verify names first.",
        )
    return export_library(LibraryFolder(opened.place), path, now, replace=replace)


def bring_in(path: Path, place: Path, now: datetime, *, may_make: bool) -> BroughtIn:
    """Put everything of the bundle at `path` into the library at `place`, which is made where it may be.

    Raises LibraryError, and nothing was changed.
    """
    bundle = read_bundle_file(path)
    settings = read_settings().settings
    memory = read_memory(Machine(settings_folder(), place, settings.practice_key), bundle.library)
    return BroughtIn(place, import_bundle(bundle, place, memory, now, may_make=may_make), memory is not None)
