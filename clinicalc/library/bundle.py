"""A whole library in one file, for a machine without the share: {"format", "library", "models", "records"}.

The file is canonical JSON (RFC 8785): models in the order of their fingerprints, then records in the order of their
names, each exactly the bytes that the library holds. Nothing in it names a file; all names are computed anew.
"""

import hashlib
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

import msgspec

from clinicalc.coefficients.fingerprint import canonical_bytes_of
from clinicalc.coefficients.strict_json import parse
from clinicalc.errors import LibraryError
from clinicalc.library.folder import LibraryFolder
from clinicalc.library.opened_folder import OpenedFolder
from clinicalc.library.out_of_reach import out_of_reach
from clinicalc.library.places import MOST_MODEL_BYTES, RecordName, short_model
from clinicalc.library.records import ABOUT_THE_LIBRARY, Founding
from clinicalc.library.safe_reading import NotRead, read_regular
from clinicalc.library.sealing import unseal
from clinicalc.library.standing import Fault, SealedRecord

BUNDLE_FORMAT = "clinicalc.bundle/1"
MOST_BYTES = 64_000_000
_AGAIN = "Export it again from the library, and carry it as a file, not through a program that changes texts."
_MOST_SAID = 5


@dataclass(frozen=True, slots=True)
class Bundle:
    """A library's contents: canonical bytes of models by fingerprint, and records, each in the order of their names."""

    library: str
    models: tuple[tuple[str, bytes], ...]
    records: tuple[SealedRecord, ...]

    @property
    def founding(self) -> SealedRecord:
        """The record that founded the library."""
        return next(sealed for sealed in self.records if sealed.digest == self.library)

    def about(self, fingerprint: str) -> tuple[SealedRecord, ...]:
        """The records about a model, or (64 zeros) about the library."""
        return tuple(sealed for sealed in self.records if sealed.record.about == fingerprint)


class _File(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    format: str
    library: str
    models: tuple[msgspec.Raw, ...]
    records: tuple[msgspec.Raw, ...]


def bundle_of(folder: LibraryFolder) -> Bundle:
    """Everything the library holds about its models. Raises LibraryError where a file of it is missing or damaged.

    A model that no record is about is left where it lies: it is no part of the library.
    """
    library = folder.library_id()
    records, faults = folder.read_records()
    models: list[tuple[str, bytes]] = []
    wrong = [fault for fault in faults if fault.stops]
    for fingerprint in sorted({sealed.record.about for sealed in records} - {ABOUT_THE_LIBRARY}):
        content = folder.read_model(fingerprint)
        if isinstance(content, Fault):
            wrong.append(content)
        else:
            models.append((fingerprint, content))
    if wrong:
        raise LibraryError(
            "the library was not exported, because something in it is missing or damaged.",
            where=str(folder.path),
            why=" ".join(fault.sentence for fault in wrong[:_MOST_SAID]),
            do="Settle this first: clinicalc library verify names everything.",
        )
    return _whole(Bundle(library, tuple(models), _in_order(records)), str(folder.path))


def write_bundle(bundle: Bundle) -> bytes:
    """The bytes of the bundle. Raises LibraryError where they are more than a bundle may have."""
    content = _spell(bundle)
    if len(content) > MOST_BYTES:
        raise LibraryError(
            f"the library has {len(content):,} bytes, and a bundle at most {MOST_BYTES:,}.",
            do="Copy the library’s folder itself; its files may be copied in any order.",
        )
    return content


def read_bundle_file(path: Path) -> Bundle:
    """The bundle at `path`, read once. Raises LibraryError with the reason why it is none."""
    try:
        with OpenedFolder(path.absolute().parent) as folder:
            content = read_regular(folder, path.name, MOST_BYTES)
    except OSError as fault:
        raise out_of_reach("the bundle was not read", path, fault) from None
    if isinstance(content, NotRead):
        raise LibraryError(
            "the bundle was not read.",
            where=str(path),
            why=f"{content.why[:1].upper()}{content.why[1:]}.",
            do="Look for the file that was exported.",
        )
    return read_bundle(content, path.name)


def read_bundle(content: bytes, name: str) -> Bundle:
    """The bundle that these bytes are, to the last byte as `write_bundle` writes it; `name` is for sentences.

    No key is asked and no trust is decided. Raises LibraryError for anything else, SignatureRefused for a record whose
    signature block has not the form this program writes.
    """
    if len(content) > MOST_BYTES:
        raise _refused(name, f"It is larger than 64 MB ({MOST_BYTES:,} bytes).")
    try:
        file = msgspec.json.decode(content, type=_File)
    except (msgspec.MsgspecError, RecursionError, UnicodeDecodeError) as fault:
        raise _refused(name, f"It has not the shape of a bundle ({fault}): it may be cut short.") from None
    if file.format != BUNDLE_FORMAT:
        raise _refused(name, "It is no bundle, or a newer version of this program wrote it.")
    models = tuple(_read_model(bytes(raw), name) for raw in file.models)
    records = tuple(unseal(bytes(raw), f"{name}, record {place + 1}") for place, raw in enumerate(file.records))
    bundle = Bundle(file.library, models, records)
    if _spell(bundle) != content or tuple(sorted(models)) != models or _in_order(records) != records:
        raise _refused(name, "Its bytes are not exactly those that were exported: it was changed on the way.")
    return _whole(bundle, name)


def _read_model(content: bytes, name: str) -> tuple[str, bytes]:
    fingerprint = hashlib.sha256(content).hexdigest()
    parsed = parse(content) if len(content) <= MOST_MODEL_BYTES else None
    value = None if parsed is None or parsed.problems else parsed.value
    if not isinstance(value, dict) or set(value) != {"format", "model"} or canonical_bytes_of(value) != content:
        raise _refused(name, f"What it holds as {short_model(fingerprint)} is not the canonical form of a model.")
    return fingerprint, content


def _whole(bundle: Bundle, name: str) -> Bundle:
    """The bundle, if it has its founding, every record that is followed, and every model that is spoken of, once."""
    digests = {sealed.digest for sealed in bundle.records}
    founding = next((sealed for sealed in bundle.records if sealed.digest == bundle.library), None)
    if founding is None or not isinstance(founding.record.statement, Founding):
        raise _refused(name, "It lacks the record that founded the library.")
    foreign = [s for s in bundle.records if s.record.library != bundle.library and s is not founding]
    if foreign:
        raise _refused(name, f"It holds {_names(foreign)} of another library.")
    followers = [s for s in bundle.records if not digests.issuperset(_followed(s))]
    if followers:
        lacking = sorted({digest for sealed in followers for digest in _followed(sealed)} - digests)
        raise _refused(name, f"Records missing: {', '.join(lacking[:_MOST_SAID])}. {_names(followers)} follow them.")
    spoken_of = {sealed.record.about for sealed in bundle.records} - {ABOUT_THE_LIBRARY}
    held = [fingerprint for fingerprint, _ in bundle.models]
    if len(digests) != len(bundle.records) or len(set(held)) != len(held) or spoken_of != set(held):
        raise _refused(name, "Its models are not exactly those that its records are about, each once.")
    return bundle


def _followed(sealed: SealedRecord) -> tuple[str, ...]:
    return (*sealed.record.follows.library, *sealed.record.follows.model)


def _in_order(records: Iterable[SealedRecord]) -> tuple[SealedRecord, ...]:
    return tuple(sorted(records, key=lambda sealed: RecordName(sealed.record.about, sealed.digest)))


def _spell(bundle: Bundle) -> bytes:
    return b'{"format":"%s","library":"%s","models":[%s],"records":[%s]}' % (
        BUNDLE_FORMAT.encode("ascii"),
        bundle.library.encode("ascii", "replace"),
        b",".join(content for _, content in bundle.models),
        b",".join(sealed.content for sealed in bundle.records),
    )


def _names(records: list[SealedRecord]) -> str:
    return ", ".join(str(RecordName(sealed.record.about, sealed.digest)) for sealed in records[:_MOST_SAID])


def _refused(name: str, why: str) -> LibraryError:
    return LibraryError("this bundle is refused, and nothing was imported.", where=name, why=why, do=_AGAIN)
