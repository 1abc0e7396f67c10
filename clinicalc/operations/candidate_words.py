"""What is shown of a coefficient file before it is installed or approved: its checks, its signatures, what is open."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.assessment.numerals import percent
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.schema import Derivation
from clinicalc.library.approving import say_signature
from clinicalc.library.installing import Candidate
from clinicalc.operations.inspection import count_examples


def describe_candidate(candidate: Candidate) -> tuple[str, ...]:
    """The lines, in the order in which a file is judged."""
    return tuple(_lines(candidate))


def _lines(candidate: Candidate) -> Iterator[str]:
    model = candidate.model
    content, grouped = model.content, group_fingerprint(model.fingerprint)
    yield f"{content.title}, version {content.version} (id {content.id})"
    yield f"Outcome: {content.outcome}"
    yield f"Horizons: {', '.join(span.words for span in model.spans)}"
    yield f"Fingerprint {grouped[:39]}"
    yield f"            {grouped[40:]}"
    yield "Schema and rules: passed."
    yield f"Worked examples: {count_examples(model)}; each was recomputed and comes out."
    yield from (say_signature(signature) for signature in candidate.signatures)
    if not candidate.signatures:
        yield "Not signed by anybody: who approves it needs its whole fingerprint from whoever published it."
    yield from _provenance(candidate)
    items = ", ".join(entry.item for entry in content.documentation)
    yield f"Documentation: {items or 'none'}."
    if content.recalibration_required:
        offered = ", ".join(dict.fromkeys(f"{r.id} ({r.label})" for r in content.recalibrations))
        yield f"Gives no number without one of its recalibrations: {offered}."
    yield from (f"Decision point {percent(p.probability)}: {p.label} ({p.source})" for p in content.decision_points)
    for entry in content.unconfirmed:
        yield f"Unconfirmed {entry.at or 'whole model'}: {entry.why} Compare with {entry.check_against}"
    if not content.unconfirmed:
        yield "No figure of it is called unconfirmed."


def _provenance(candidate: Candidate) -> Iterator[str]:
    source = candidate.model.content.source
    doi = "" if isinstance(source.doi, UnsetType) else f" doi:{source.doi}"
    yield f"Source ({source.kind}): {source.citation}{doi}"
    if isinstance(source.derivation, Derivation):
        people = source.derivation
        events = "" if isinstance(people.events, UnsetType) else f", {people.events} events"
        yield f"Made from {people.people} people{events}."
