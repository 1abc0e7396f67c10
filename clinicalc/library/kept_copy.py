"""The last verified copy of a library on this machine: every record that was verified here, and the models in use.

It serves where the library is out of reach, and it saves reading twice. Nothing in it is believed: of every record that
comes from it the signature is verified anew, and whether the signer may say so is judged anew, at every opening. All
that is spared is to look at the form of a file once more whose bytes have the digest of a record that is kept. A record
that was changed in the copy has another digest, and so is not there; one that was added is refused like any other.
"""

import hashlib
from collections.abc import Collection, Iterable, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Literal

import msgspec

from clinicalc import __version__
from clinicalc.coefficients.file_types import FileStruct
from clinicalc.errors import ClinicalcError, FileNotWritten
from clinicalc.library.machine import Machine
from clinicalc.library.records import Digest, RecordFile
from clinicalc.library.sealing import unseal
from clinicalc.library.sole_writer import sole_writer
from clinicalc.library.standing import SealedRecord
from clinicalc.replacement import replace_file

_RECORDS = "records.jsonl"
_MODELS = "models"


class _Head(FileStruct, frozen=True):
    """The first line of the file of records. Another program version may judge otherwise, so it verifies again."""

    format: Literal["clinicalc.kept/1"]
    program: str
    library: Digest


@dataclass(frozen=True, slots=True)
class KeptCopy:
    """Records by their digests, as bytes; `verified` is False where another version of this program kept them."""

    folder: Path
    library: str
    lines: Mapping[str, bytes]
    verified: bool
    _opened: dict[str, SealedRecord] = field(default_factory=dict, repr=False)

    def record(self, digest: str) -> SealedRecord | None:
        """The record with this digest, None where it is not kept or is none. Its signature is still to be verified."""
        line = self.lines.get(digest)
        if line is None or digest in self._opened:
            return self._opened.get(digest)
        try:
            opened = msgspec.json.decode(line, type=RecordFile).record if self.verified else None
            sealed = unseal(line, digest) if opened is None else SealedRecord(digest, line, opened)
        except (ClinicalcError, msgspec.MsgspecError, RecursionError):
            return None
        self._opened[digest] = sealed
        return sealed

    def model(self, fingerprint: str) -> bytes | None:
        """The bytes of a model, None where they are not kept or no longer have this fingerprint."""
        try:
            content = (self.folder / _MODELS / f"{fingerprint}.json").read_bytes()
        except OSError:
            return None
        return content if hashlib.sha256(content).hexdigest() == fingerprint else None

    def models(self) -> frozenset[str]:
        """The fingerprints of the models whose files are there; their bytes have not been looked at."""
        try:
            return frozenset(path.stem for path in (self.folder / _MODELS).iterdir() if path.suffix == ".json")
        except OSError:
            return frozenset()


def read_kept(machine: Machine, library: str) -> KeptCopy:
    """The copy of this library; an empty one where there is none, or none that can be read."""
    return _read(machine.folder / f"kept-{library}", library)


def forgetful(kept: KeptCopy) -> KeptCopy:
    """A copy that recalls nothing, for whoever wants to look at everything anew."""
    return KeptCopy(kept.folder, kept.library, {}, verified=True)


def keep(
    kept: KeptCopy,
    records: Iterable[SealedRecord],
    models: Mapping[str, bytes],
    gone: Collection[str] = (),
    *,
    afresh: bool = False,
) -> None:
    """Add verified records and models in use, each file whole or not at all; models that are `gone` leave the copy.

    `afresh`: whatever else stood among the records leaves it too. Nothing is written where nothing changed. Raises
    FileNotWritten.
    """
    # canonical JSON has no line break in it, so that a line is a record
    given = {record.digest: record.content for record in records}
    renewed = not kept.verified or (afresh and kept.lines.keys() != given.keys())
    new = {digest: content for digest, content in given.items() if renewed or digest not in kept.lines}
    there = kept.models()
    added = {fingerprint: content for fingerprint, content in models.items() if fingerprint not in there}
    leaving = there & set(gone)
    try:
        if new or added or leaving:
            (kept.folder / _MODELS).mkdir(parents=True, exist_ok=True, mode=0o700)
            with sole_writer(kept.folder / "lock"):
                _write_records(kept, new, alone=renewed)
                _write_models(kept, added, leaving)
    except OSError as fault:
        raise FileNotWritten(
            "the verified copy of the library could not be kept on this machine.",
            where=str(kept.folder),
            why=f"The computer says: {fault.strerror or fault}.",
            do="Without it no model can be used while the library is out of reach. Make room there.",
        ) from None


def _write_records(kept: KeptCopy, new: Mapping[str, bytes], *, alone: bool) -> None:
    if not new:
        return
    current = _read(kept.folder, kept.library)  # another process may have added some since
    head = msgspec.json.encode(_Head(format="clinicalc.kept/1", program=__version__, library=kept.library))
    lines = {**({} if alone else current.lines), **new}
    replace_file(kept.folder / _RECORDS, b"\n".join([head, *(lines[digest] for digest in sorted(lines))]))


def _write_models(kept: KeptCopy, added: Mapping[str, bytes], leaving: Collection[str]) -> None:
    for fingerprint, content in added.items():
        replace_file(kept.folder / _MODELS / f"{fingerprint}.json", content)
    for fingerprint in leaving:
        (kept.folder / _MODELS / f"{fingerprint}.json").unlink(missing_ok=True)


def _read(folder: Path, library: str) -> KeptCopy:
    try:
        first, *lines = (folder / _RECORDS).read_bytes().split(b"\n")
        head = msgspec.json.decode(first, type=_Head)
    except (OSError, msgspec.MsgspecError):
        return KeptCopy(folder, library, {}, verified=True)
    if head.library != library:
        return KeptCopy(folder, library, {}, verified=True)
    by_digest = {hashlib.sha256(line).hexdigest(): line for line in lines if line}
    return KeptCopy(folder, library, by_digest, verified=head.program == __version__)
