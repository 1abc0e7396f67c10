"""Installing a coefficient file: what was looked at is what is installed, byte for byte."""

from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

import msgspec

from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import prove_model
from clinicalc.coefficients.reader import ReadFile, read_bytes, read_file
from clinicalc.coefficients.schema import Signature
from clinicalc.errors import LibraryError
from clinicalc.library.appointing import check_text
from clinicalc.library.file_signatures import FileSignature, Worth, weigh_signatures
from clinicalc.library.gathering import Source
from clinicalc.library.keys import KeyCard, SigningKey
from clinicalc.library.labels import find_other_name
from clinicalc.library.places import short_model
from clinicalc.library.records import Installed
from clinicalc.library.standing import ModelState, SealedRecord
from clinicalc.library.trust_store import TrustStore
from clinicalc.library.writing import Desk, require_approver, require_sound, sign_as_approver


@dataclass(frozen=True, slots=True)
class Candidate:
    """A file that passed every check and may be installed: its bytes, its proved model, its signatures."""

    read: ReadFile
    model: Model
    signatures: tuple[FileSignature, ...]

    @property
    def trusted(self) -> tuple[FileSignature, ...]:
        """The signatures of publishers trusted on this machine."""
        return tuple(signature for signature in self.signatures if signature.worth is Worth.TRUSTED)


def look_at(path: Path, trust: TrustStore) -> Candidate:
    """The file read once, its examples recomputed, its signatures set against the publishers trusted here.

    Raises CoefficientFileRefused with every problem found.
    """
    return weigh(read_file(path), trust)


def weigh(read: ReadFile, trust: TrustStore) -> Candidate:
    """The same for a file that was read already."""
    return Candidate(read, prove_model(read), weigh_signatures(read, trust))


def other_versions(desk: Desk, candidate: Candidate) -> tuple[ModelState, ...]:
    """What the library holds of the same model under another fingerprint."""
    content, fingerprint = candidate.model.content, candidate.model.fingerprint
    return tuple(state for state in desk.models if state.id == content.id and state.fingerprint != fingerprint)


def find_installed(desk: Desk, candidate: Candidate) -> ModelState | None:
    """The very same file, where the library holds it already and the candidate has no new signature; else None.

    A further trusted signature on the same bytes is worth a record of its own.
    """
    return find_among(desk.models, candidate)


def find_among(models: Iterable[ModelState], candidate: Candidate) -> ModelState | None:
    """The same among the models of a library that was only read."""
    state = next((state for state in models if state.fingerprint == candidate.model.fingerprint), None)
    if state is None or not installations(state):
        return None
    kept = signatures_kept(state)
    pairs = zip(candidate.signatures, candidate.read.content.signatures, strict=True)
    fresh = any(worth.worth is Worth.TRUSTED and signature not in kept for worth, signature in pairs)
    return None if fresh else state


def install(desk: Desk, candidate: Candidate, key: SigningKey, came_from: str) -> SealedRecord:
    """The candidate's canonical bytes put in place, then the record that says who brought it and from where.

    Raises LibraryError for a key that is nobody's in force, and where the same file is there already.
    """
    statement = settle_installation(desk, candidate, key, came_from)
    fingerprint = candidate.model.fingerprint
    state = _state_of(desk, fingerprint)
    desk.folder.put_model(fingerprint, candidate.read.canonical)
    return sign_as_approver(desk, key, statement, fingerprint, () if state is None else state.heads)


def settle_installation(desk: Desk, candidate: Candidate, key: SigningKey | KeyCard, came_from: str) -> Installed:
    """What the owner of a key would install; its card is enough. Raises as `install` does."""
    require_approver(desk.authority, key)
    already = find_installed(desk, candidate)
    if already is not None:
        raise LibraryError("this very file is in the library already.", where=f"{already.id} {already.version}")
    state = _state_of(desk, candidate.model.fingerprint)
    if state is not None:
        require_sound(state)
    content = candidate.model.content
    return Installed(
        id=content.id,
        version=content.version,
        title=content.title,
        came_from=check_text(came_from, "origin"),
        signatures=candidate.read.content.signatures,
    )


def read_installed(source: Source, state: ModelState) -> ReadFile:
    """The file of a model as the library holds it, with the signatures that its installations kept.

    Raises LibraryError where it is not what its name says, CoefficientFileRefused where it may not be used.
    """
    content = source.model(state.fingerprint)
    if not isinstance(content, bytes):
        raise LibraryError("its file cannot be used.", where=_name_of(state), why=content.sentence)
    return read_canonical(content, state)


def read_canonical(content: bytes, state: ModelState) -> ReadFile:
    """The same from the canonical bytes of the model."""
    whole = b'%s,"signatures":%s}' % (content.removesuffix(b"}"), msgspec.json.encode(signatures_kept(state)))
    read = read_bytes(whole, f"{state.id}-{state.version}.json")
    if read.fingerprint != state.fingerprint or read.canonical != content:
        raise LibraryError(
            "its file is not the one that its records are about.",
            where=_name_of(state),
            do="Find out who put it there, and take it out of the library's folder, or put the right one in its place.",
        )
    if (other := find_other_name(state, content)) is not None:
        raise LibraryError("its file has another name than its records.", where=read.name, why=other.sentence)
    return read


def _name_of(state: ModelState) -> str:
    """Id and version, or the name of its file where no record says them."""
    return f"{state.id} {state.version}".strip() or short_model(state.fingerprint)


def signatures_kept(state: ModelState) -> tuple[Signature, ...]:
    """The file's own signatures, as the records of its installations keep them, each once."""
    return tuple(dict.fromkeys(signature for said in installations(state) for signature in said.signatures))


def installations(state: ModelState) -> tuple[Installed, ...]:
    """What was said when the file came into the library, each time that it did."""
    statements = (sealed.record.statement for sealed in state.records)
    return tuple(statement for statement in statements if isinstance(statement, Installed))


def installers(state: ModelState) -> frozenset[str]:
    """The ids of the keys that installed the file."""
    return frozenset(sealed.record.by for sealed in state.records if isinstance(sealed.record.statement, Installed))


def _state_of(desk: Desk, fingerprint: str) -> ModelState | None:
    return next((state for state in desk.models if state.fingerprint == fingerprint), None)
