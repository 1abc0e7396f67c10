"""What was checked of a coefficient file, one line each, from the file itself and its proof on this machine."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from msgspec import UnsetType

from clinicalc.assessment.model import Model
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.schema import Ancestry, Derivation, DrawsBand, Equation, NoBand, Source
from clinicalc.library.file_signatures import FileSignature, Worth
from clinicalc.library.installing import Candidate
from clinicalc.library.keys import group_key_id
from clinicalc.report.phrases import count_words

_BASES = {
    "covariance": "full covariance, model-based",
    "robust": "full covariance, robust",
    "reconstructed": "approximate, rebuilt from printed intervals",
}
_GROUPS = 14
"""Of a key's id, the letters of its first three groups."""


@dataclass(frozen=True, slots=True)
class Check:
    """One thing that was looked at; `ok` is False where an approver has to know that something is not there."""

    name: str
    says: str
    ok: bool


def list_checks(candidate: Candidate) -> tuple[Check, ...]:
    """Every check of a file that was read and proved; a file whose examples fail never comes so far."""
    model, content = candidate.model, candidate.model.content
    return (
        _worked_examples(model),
        _signature(candidate.signatures),
        _uncertainty(content.equations),
        _documentation([entry.item for entry in content.documentation]),
        Check("Source", _source(content.source), True),
        _made_from(content.source),
        *_updated_from(content.ancestry),
    )


def _worked_examples(model: Model) -> Check:
    examples = model.content.worked_examples
    computed = sum(example.computed is True for example in examples)
    memory = sum(example.from_memory is True for example in examples)
    kinds = {"printed": len(examples) - computed - memory, "from memory": memory, "computed": computed}
    origins = ", ".join(f"{count} {words}" for words, count in kinds.items() if count)
    # the model was proved when it was read: each of them came out within its own tolerance
    said = f"{len(examples)} of {len(examples)} recomputed within tolerance ({origins})"
    return Check("Worked examples", said, True)


def _signature(signatures: Sequence[FileSignature]) -> Check:
    trusted = [signature for signature in signatures if signature.worth is Worth.TRUSTED]
    others = [signature for signature in signatures if signature.worth is not Worth.TRUSTED]
    if not signatures:
        return Check("Signature", "nobody signed it; who approves needs the whole fingerprint", False)
    said = [f"{signature.name}, valid" for signature in trusted] + [_say_other(signature) for signature in others]
    return Check("Signature", "; ".join(said), bool(trusted) and all(s.worth is Worth.UNKNOWN for s in others))


def _say_other(signature: FileSignature) -> str:
    match signature.worth:
        case Worth.REVOKED:
            return f"{signature.name}, does not count: the key was revoked on this machine"
        case Worth.UNKNOWN:
            return f"not checked: this machine does not know the key {group_key_id(signature.key)[:_GROUPS]}"
    return f"does not count: {signature.why}"


def _uncertainty(equations: Sequence[Equation]) -> Check:
    said = [_band(equation) for equation in equations]
    ok = all(not isinstance(equation.uncertainty, NoBand) for equation in equations)
    if len(set(said)) == 1:
        return Check("Uncertainty", said[0], ok)
    pairs = zip(equations, said, strict=True)
    return Check("Uncertainty", "; ".join(f"{equation.id}: {words}" for equation, words in pairs), ok)


def _band(equation: Equation) -> str:
    band = equation.uncertainty
    if isinstance(band, NoBand):
        return f"no band: {band.because}"
    if isinstance(band, DrawsBand):
        return count_words(len(band.coefficients), "bootstrap draw")
    return _BASES[str(band.__struct_config__.tag)]


def _documentation(items: Sequence[str]) -> Check:
    said = f"{count_words(len(items), 'item')}: {', '.join(items)}" if items else "none"
    return Check("Documentation", said, bool(items))


def _source(source: Source) -> str:
    doi = "" if isinstance(source.doi, UnsetType) else f" doi:{source.doi}"
    return f"{source.kind}: {source.citation}{doi}"


def _made_from(source: Source) -> Check:
    if not isinstance(source.derivation, Derivation):
        return Check("Made from", "not stated", False)
    return Check("Made from", ", ".join(_people(source.derivation)), True)


def _updated_from(ancestry: Ancestry | UnsetType) -> Iterator[Check]:
    """A line of its own only for a version that was updated from another."""
    if isinstance(ancestry, Ancestry):
        cohort = ancestry.cohort
        events = "" if isinstance(cohort.events, UnsetType) else f", {cohort.events} events"
        said = (
            f"{ancestry.title} {ancestry.version}, fingerprint {group_fingerprint(ancestry.fingerprint, 4)}…; to "
            f"{cohort.words}, {cohort.people} people{events}"
        )
        yield Check("Updated from", said, True)


def _people(people: Derivation) -> Iterator[str]:
    yield f"{people.people} people"
    if not isinstance(people.events, UnsetType):
        yield f"{people.events} events"
    dates = [day for day in (people.from_, people.to) if isinstance(day, str)]
    if dates:
        yield " to ".join(dates)
