"""Carrying a library from one place to another by way of a bundle: the union of both, or nothing.

Into a place where there is a library the newest records are put first: should the machine die halfway, a record that
is followed is missing, and the models concerned give no number until the same bundle is imported again.
"""

import os
import shutil
from contextlib import suppress
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from clinicalc.errors import LibraryError
from clinicalc.library.bundle import Bundle, bundle_of, write_bundle
from clinicalc.library.bundle_checks import practice_key_of, require_remembered, require_sound
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.memory import Memory
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.ordering import order_records
from clinicalc.library.out_of_reach import out_of_reach
from clinicalc.library.places import MODELS, RECORDS, RecordName, model_file
from clinicalc.library.placing import PART_PREFIX, PART_SUFFIX, Placed, place_file
from clinicalc.library.records import Founding
from clinicalc.library.standing import Fault
from clinicalc.library.written_files import put_file, require_free
from clinicalc.replacement import READABLE

_MOST_SAID = 5


@dataclass(frozen=True, slots=True)
class Carried:
    """What an import did: whether it made the library, and how many models and records were new to the place."""

    library: str
    practice: str
    created: bool
    new_models: int
    new_records: int
    models: int
    records: int


def export_library(folder: LibraryFolder, path: Path, now: datetime, *, replace: bool = False) -> Bundle:
    """Write the whole library as a bundle at `path`, which comes back.

    Raises LibraryError where the library is not sound, and FileNotWritten; then nothing was written.
    """
    if not replace:
        require_free(path)
    bundle = bundle_of(folder)
    require_sound(bundle, str(folder.path), practice_key_of(bundle), now, "the library was not exported")
    put_file(path, write_bundle(bundle), "the bundle", may_replace=replace, mode=READABLE)
    return bundle


def import_bundle(
    bundle: Bundle, place: Path, memory: Memory | None, now: datetime, *, may_make: bool = True
) -> Carried:
    """Put everything of the bundle into the library at `place`, made where there is none.

    `memory` is what this machine has seen of the library, None where it never opened it; then the practice key is the
    one that the bundle itself names, and is for the person to compare who joins the library. With `may_make` False a
    place that is empty is taken for a share that is not there now.
    Raises LibraryError, and nothing was changed: for another library's place, a record that does not count, or a
    bundle and place that together lack what this machine has seen.
    """
    folder = LibraryFolder(place)
    there = _look(folder, bundle)
    union = bundle if there is None else _union(bundle, there)
    require_sound(
        union,
        str(place),
        memory.practice_key if memory else practice_key_of(bundle),
        now,
        "the bundle was not imported",
    )
    require_remembered(union, memory)
    if there is None and not may_make:
        raise LibraryError(
            "there is no library at this place, and nothing was imported.",
            where=str(place),
            why="The share may not be connected.",
            do="Connect it; or, to make a new library, name its folder with --library.",
        )
    if there is None:
        _make(place, bundle)
    else:
        _add(folder, bundle, there)
    records = {sealed.digest for sealed in there.records} if there else set()
    models = {fingerprint for fingerprint, _ in there.models} if there else set()
    founding = bundle.founding.record.statement
    return Carried(
        library=bundle.library,
        practice=founding.practice if isinstance(founding, Founding) else "",
        created=there is None,
        new_models=len({fingerprint for fingerprint, _ in bundle.models} - models),
        new_records=len({sealed.digest for sealed in bundle.records} - records),
        models=len(union.models),
        records=len(union.records),
    )


def _look(folder: LibraryFolder, bundle: Bundle) -> Bundle | None:
    """What is at the place; None where there is nothing, or an empty folder."""
    try:
        if not any(folder.path.iterdir()):
            return None
    except FileNotFoundError:
        return None
    except (OSError, ValueError) as fault:
        asked = fault if isinstance(fault, OSError) else OSError(22, "its name cannot be that of a folder")
        raise out_of_reach("the bundle was not imported", folder.path, asked) from None
    if folder.library_id() != bundle.library:
        raise LibraryError(
            "the bundle was not imported, and nothing was changed.",
            where=str(folder.path),
            why=f"This is the library {folder.library_id()[:12]}…, and the bundle is of {bundle.library[:12]}….",
            do="Choose the place of the library from which the bundle was exported, or a new place.",
        )
    return _salvage(folder)


def _salvage(folder: LibraryFolder) -> Bundle:
    """What can be read at the place. What is missing there the bundle may bring; what is damaged stands in its way."""
    records, faults = folder.read_records()
    listed = folder.list_models()
    read = [(fingerprint, folder.read_model(fingerprint)) for fingerprint in listed.names]
    wrong = [fault for fault in (*faults, *listed.faults) if fault.stops]
    wrong += [content for _, content in read if isinstance(content, Fault)]
    if wrong:
        raise LibraryError(
            "the bundle was not imported, because something at the place is damaged; nothing was changed.",
            where=str(folder.path),
            why=" ".join(fault.sentence for fault in wrong[:_MOST_SAID]),
            do="Take what is named away first; clinicalc library verify says it again.",
        )
    models = tuple((fingerprint, content) for fingerprint, content in read if isinstance(content, bytes))
    return Bundle(folder.library_id(), models, records)


def _union(one: Bundle, other: Bundle) -> Bundle:
    models = dict(one.models) | dict(other.models)
    records = {sealed.digest: sealed for sealed in (*one.records, *other.records)}
    return Bundle(one.library, tuple(models.items()), tuple(records.values()))


def _make(place: Path, bundle: Bundle) -> None:
    """The library under a passing name beside the place, then renamed: whole, or not there."""
    target = Path(os.path.realpath(place))
    passing = target.parent / f"{PART_PREFIX}{os.urandom(12).hex()}{PART_SUFFIX}"
    try:
        folder = LibraryFolder(passing)
        folder.create(bundle.founding)
        for fingerprint, content in bundle.models:
            folder.put_model(fingerprint, content)
        for sealed in bundle.records:
            folder.put_record(sealed)
        if target.is_dir():
            target.rmdir()  # it was empty; should something have come into it since, this is refused
        passing.rename(target)
    except OSError as fault:
        raise out_of_reach("the bundle was not imported, and nothing was changed", target, fault) from None
    except LibraryError as refused:  # it names the passing place, which nobody knows
        raise type(refused)(
            "the bundle was not imported, and nothing was changed.", where=str(target), why=refused.why, do=refused.do
        ) from None
    finally:
        shutil.rmtree(passing, ignore_errors=True)


def _add(folder: LibraryFolder, bundle: Bundle, there: Bundle) -> None:
    """Models first, then records, the newest first; all that is new is taken away again where one cannot be put."""
    known = {sealed.digest for sealed in there.records}
    chain = order_records(bundle.records, lambda sealed: (*sealed.record.follows.library, *sealed.record.follows.model))
    newest_first = [sealed for sealed in reversed(chain.records) if sealed.digest not in known]
    files = [(MODELS, model_file(name), content) for name, content in bundle.models]
    files += [(RECORDS, RecordName(s.record.about, s.digest).file, s.content) for s in newest_first]
    try:
        with OpenedFolder(folder.path) as root:
            _place_all(root, files)
    except OSError as fault:
        raise out_of_reach("the bundle was not imported, and nothing was changed", folder.path, fault) from None


def _place_all(root: OpenedFolder, files: list[tuple[str, str, bytes]]) -> None:
    """Every file in its part of the library. Raises OSError or LibraryError; what was new is then gone again."""
    new: list[tuple[OpenedFolder, str]] = []
    with root.open_part(MODELS) as models, root.open_part(RECORDS) as records:
        parts = {MODELS: models, RECORDS: records}
        try:
            for part, name, content in files:
                placed = place_file(parts[part], name, content)
                if placed is Placed.NEW:
                    new.append((parts[part], name))
                elif placed is Placed.NAME_TAKEN:
                    raise _name_taken(root.path, f"{part}/{name[:12]}…")
        except BaseException:
            for folder, name in reversed(new):
                with suppress(OSError):
                    folder.remove(name)
            raise


def _name_taken(place: Path, name: str) -> LibraryError:
    return LibraryError(
        "the bundle was not imported, and nothing was changed.",
        where=str(place),
        why=f"Something else has the name {name}, which only the bundle’s own bytes may have.",
        do="Take it away, and import the bundle again.",
    )
