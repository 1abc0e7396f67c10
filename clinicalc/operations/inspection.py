"""Everything a coefficient file says, in reading order, with its worked examples recomputed."""

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from msgspec import UnsetType

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.proof import prove_model, recompute
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.coefficients.reader import read_file
from clinicalc.coefficients.schema import Ancestry, Derivation, Population, WorkedExample
from clinicalc.coefficients.spans import span_of
from clinicalc.operations.folding import fold
from clinicalc.operations.inspection_equations import equation_sections
from clinicalc.operations.inspection_fields import field_sections

UPDATE_WORDS = {
    "intercept": "the baseline anew, every coefficient as it was",
    "intercept_slope": "the baseline anew, every coefficient times one slope",
    "refit": "baseline and every coefficient estimated anew, terms as they were",
    "two_scale": "baseline and slope from predicted and observed risks of groups, on the scale of the link",
}
"""How an earlier version was updated."""


@dataclass(frozen=True, slots=True)
class Section:
    """A heading and the lines under it."""

    title: str
    lines: tuple[str, ...]


def inspect_file(path: Path) -> tuple[Section, ...]:
    """Every part of the file at `path` as a section, its signatures among them, which a model does not carry.

    Raises CoefficientFileRefused with every problem found.
    """
    # here, so that no other command waits for it
    from clinicalc.operations.inspection_signatures import signature_lines

    read = read_file(path)
    first, fingerprint, *rest = inspect_model(prove_model(read))
    return (first, fingerprint, Section("Signatures", tuple(signature_lines(read))), *rest)


def inspect_model(model: Model) -> tuple[Section, ...]:
    """Every part of the file as a section, in reading order; parts the file leaves empty say so."""
    return tuple(Section(title, tuple(lines) or ("none",)) for title, lines in _sections(model))


def write_sections(sections: tuple[Section, ...]) -> str:
    """The sections as plain text, ending in a newline."""
    blocks = ([s.title, *(part for line in s.lines for part in fold(f"  {line}"))] for s in sections)
    return "\n\n".join("\n".join(block) for block in blocks) + "\n"


def count_examples(model: Model) -> str:
    """How many worked examples are printed in a source, from memory, and computed from the same coefficients."""
    examples = model.content.worked_examples
    computed = sum(example.computed is True for example in examples)
    memory = sum(example.from_memory is True for example in examples)
    return f"{len(examples) - computed - memory} printed, {memory} from memory, {computed} computed"


def _sections(model: Model) -> Iterator[tuple[str, list[str]]]:
    content = model.content
    yield (
        "Model",
        [
            f"{content.title}",
            f"id {content.id}, version {content.version}, file {model.name}",
            f"Outcome: {content.outcome}",
            f"Horizons: {', '.join(span.words for span in model.spans)}",
        ],
    )
    yield (
        "Fingerprint (SHA-256 of the RFC 8785 canonical bytes)",
        [
            group_fingerprint(model.fingerprint)[:39],
            group_fingerprint(model.fingerprint)[40:],
        ],
    )
    yield "Source", _source(model)
    if isinstance(content.ancestry, Ancestry):
        yield "Updated from", list(_ancestry(content.ancestry))
    yield "For whom", [f"Population: {content.use.population}", f"Setting: {content.use.setting}"]
    yield "Not for", list(content.use.not_for)
    yield "Not used by the model", list(content.use.not_used)
    yield "Cautions", list(content.use.cautions)
    yield "In plain words", [f"Outcome: {content.use.plain.outcome}", *content.use.plain.cautions]
    yield (
        "Figures not checked against the source",
        [
            f"{entry.at or 'whole model'}: {entry.why} Compare with {entry.check_against}"
            for entry in content.unconfirmed
        ],
    )
    yield from field_sections(model)
    yield from equation_sections(model)
    yield "Decision points", [f"{percent(p.probability)} {p.label} ({p.source})" for p in content.decision_points]
    yield f"Worked examples, recomputed now ({count_examples(model)})", list(_examples(model))
    yield from _populations(model)
    yield "Documentation", [f"{entry.item}: {entry.text}" for entry in content.documentation]


def _source(model: Model) -> list[str]:
    source = model.content.source
    lines = [f"{source.kind}: {source.citation}"]
    if not isinstance(source.doi, UnsetType):
        lines.append(f"doi:{source.doi}")
    if isinstance(source.derivation, Derivation):
        people = source.derivation
        events = "" if isinstance(people.events, UnsetType) else f", {people.events} events"
        dates = " to ".join(d for d in (people.from_, people.to) if isinstance(d, str))
        lines.append(f"Made from {people.people} people{events}{f', {dates}' if dates else ''}")
    return [*lines, *(() if isinstance(source.notes, UnsetType) else source.notes)]


def _ancestry(ancestry: Ancestry) -> Iterator[str]:
    yield f"{ancestry.title}, id {ancestry.id}, version {ancestry.version}"
    yield f"Its fingerprint: {group_fingerprint(ancestry.fingerprint)}"
    cohort = ancestry.cohort
    events = "" if isinstance(cohort.events, UnsetType) else f", {cohort.events} events"
    dates = " to ".join(d for d in (cohort.from_, cohort.to) if isinstance(d, str))
    yield f"Updated to: {cohort.words} ({cohort.people} people{events}{f', {dates}' if dates else ''})"
    yield f"How: {UPDATE_WORDS[ancestry.method]}"
    yield from ancestry.figures


def _examples(model: Model) -> Iterator[str]:
    for example in model.content.worked_examples:
        estimate = recompute(model, example).estimate
        assert estimate is not None  # a file whose example gives no number was refused
        typed = [(field.id, example.values[field.id]) for field in model.fields if field.id in example.values]
        values = ", ".join(f"{id} {text}" for id, text in typed)
        span = span_of(example)
        after = f", recalibration {example.recalibration}" if isinstance(example.recalibration, str) else ""
        yield f"{values} ({'' if span is None else span.words}{after})"
        limits = ""
        if estimate.band is not None:
            limits = f", band {estimate.band.lower:.6g} to {estimate.band.upper:.6g}"
        yield (
            f"    states {example.probability:g} within {example.tolerance:g}, recomputed {estimate.probability:.6g}"
            f"{limits} ({_origin(example)}: {example.source})"
        )


def _origin(example: WorkedExample) -> str:
    if example.computed is True:
        return "computed"
    return "from memory" if example.from_memory is True else "printed"


def _populations(model: Model) -> Iterator[tuple[str, list[str]]]:
    """The people described for the whole model, then those described for single equations."""
    general = model.content.population
    own = {e.id: e.population for e in model.content.equations if not isinstance(e.population, UnsetType)}
    if general is not None or not own:
        yield "Population described", [] if general is None else _population(general)
    for id, population in own.items():
        yield f"Population described for equation {id}", _population(population)


def _population(population: Population) -> list[str]:
    lines = [population.source]
    for number in population.numbers:
        scale = "" if isinstance(number.log, UnsetType) else "natural logarithm of "
        lines.append(f"{scale}{number.id}: mean {number.mean:g}, standard deviation {number.sd:g}")
    ids = [number.id for number in population.numbers]
    for i, row in enumerate(population.correlations):
        for j in range(i):
            lines.append(f"correlation of {ids[i]} and {ids[j]}: {row[j]:g}")
    for answer in population.yes_no:
        terms = " ".join(f"{value:+g} {id}" for id, value in answer.coefficients.items())
        lines.append(f"log odds of {answer.id}: {answer.intercept:g} {terms}".rstrip())
    if not isinstance(population.choices, UnsetType):
        for choice in population.choices:
            lines.append(f"{choice.id}: {', '.join(f'{percent(share)} {id}' for id, share in choice.shares.items())}")
    return lines
