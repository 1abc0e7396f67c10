"""The next version of a model, as a description that is packaged: equations anew, the rest as it was."""

import json
from collections.abc import Collection, Iterator, Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

import msgspec
from msgspec import UNSET, UnsetType

from clinicalc.coefficients.file_types import LONGEST_TEXT
from clinicalc.coefficients.rules.ancestry import order_of
from clinicalc.coefficients.schema import (
    Ancestry,
    Derivation,
    Documentation,
    Equation,
    ModelContent,
    Source,
    Unconfirmed,
    WorkedExample,
)
from clinicalc.coefficients.spans import Span, span_of
from clinicalc.development.description import Description, PatientTable
from clinicalc.development.fit_documentation import NOT_STATED
from clinicalc.errors import Problem

UPDATING = "updating"
EXTERNAL = "external validation"


@dataclass(frozen=True, slots=True)
class VersionWish:
    """What the new version is called and says; "" leaves what the parent says.

    `refitted` are the people of a refit of every equation, who then stand as those the model was made from.
    """

    id: str
    version: str
    title: str
    population: str
    documentation: tuple[Documentation, ...]
    refitted: Derivation | None = None


def describe_version(
    parent: ModelContent,
    equations: tuple[Equation, ...],
    refitted: frozenset[str],
    ancestry: Ancestry,
    wish: VersionWish,
) -> tuple[Description, tuple[str, ...]]:
    """The description to be packaged, its problems in it, and remarks on what was dropped.

    `refitted` are the ids of equations whose coefficients are no longer the parent's in any way.
    """
    spans = tuple(span for span in map(span_of, equations[0].horizons) if span is not None)
    population = wish.population or parent.use.population
    content = msgspec.structs.replace(
        parent,
        id=wish.id or parent.id,
        version=wish.version,
        title=wish.title or parent.title,
        source=_source(parent, wish.refitted),
        use=msgspec.structs.replace(parent.use, population=population),
        equations=equations,
        recalibration_required=False,
        recalibrations=(),
        unconfirmed=tuple(_keep_unconfirmed(parent, refitted)),
        documentation=_document(parent.documentation, wish.documentation),
        ancestry=ancestry,
    )
    tree: dict[str, object] = json.loads(msgspec.json.encode(content))
    del tree["worked_examples"]
    description = Description(
        name=f"{content.id}.json",
        folder=Path(),
        model=tree,
        fits={},
        patients=tuple(_patients(parent.worked_examples, spans)),
        problems=tuple(_judge_version(parent, content)),
    )
    return description, tuple(_remark(parent, content, wish))


def _source(parent: ModelContent, refitted: Derivation | None) -> Source:
    """The parent's source; what was made here is local, whoever published the parent."""
    old = parent.source
    citation = old.citation
    if old.kind == "published":
        citation = f"Updated from {parent.title}, version {parent.version}: {citation}"[:LONGEST_TEXT]
    derivation = old.derivation if refitted is None else refitted
    return msgspec.structs.replace(old, kind="local", citation=citation, derivation=derivation)


def _document(old: Sequence[Documentation], new: Sequence[Documentation]) -> tuple[Documentation, ...]:
    """The old items with the new answers in the place of their own; items that are new stand at the end.

    The item that names what was not stated no longer names what is answered now.
    """
    names = {item.item for item in new}
    found: list[Documentation] = []
    said: set[str] = set()
    for item in old:
        if item.item == NOT_STATED and NOT_STATED not in names:
            found += _still_open(item, names)
        elif item.item not in names:
            found.append(item)
        elif item.item not in said:
            said.add(item.item)
            found += [one for one in new if one.item == item.item]
    return (*found, *(one for one in new if one.item not in said))


def _still_open(item: Documentation, answered: Collection[str]) -> Iterator[Documentation]:
    open = item.text.removesuffix(".").split("; ")
    left = [one for one in open if one not in answered]
    if left:
        yield item if len(left) == len(open) else Documentation(item=item.item, text=f"{'; '.join(left)}.")


def _keep_unconfirmed(parent: ModelContent, refitted: frozenset[str]) -> list[Unconfirmed]:
    """Figures not checked that are still in the file, or from which figures in it were made."""
    found = list[Unconfirmed]()
    for note in parent.unconfirmed:
        at = _place_of(note.at, parent, refitted)
        if at is not None:
            kept = msgspec.structs.replace(note, at=at)
            if at.startswith("/equations/"):
                why = f"A figure of version {parent.version}, from which this one was made: {note.why}"
                kept = msgspec.structs.replace(kept, why=why[:LONGEST_TEXT])
            found += [] if kept in found else [kept]
    return found


def _place_of(at: str, parent: ModelContent, refitted: frozenset[str]) -> str | None:
    """Where an unconfirmed figure stands in the new version: the part it is in, None where it is no longer."""
    steps = at.split("/")[1:]
    if steps[:1] in (["worked_examples"], ["recalibrations"], ["ancestry"]):
        return None
    if len(steps) < 3 or steps[0] != "equations":
        return at
    id, part = parent.equations[int(steps[1])].id, steps[2]
    if id in refitted and part in ("terms", "horizons", "uncertainty"):
        return None
    if part in ("horizons", "uncertainty"):
        return f"/equations/{steps[1]}/{part}"
    return "/" + "/".join(steps[:4]) if part == "terms" else at


def _patients(examples: Sequence[WorkedExample], spans: Sequence[Span]) -> list[PatientTable]:
    """The people of the parent's worked examples, each once at each horizon at which it was worked and which stays."""
    found = list[PatientTable]()
    for example in examples:
        kept = span_of(example) in spans
        time: Mapping[str, float | str | UnsetType] = {
            name: getattr(example, name) if kept else UNSET for name in ("years", "time", "unit")
        }
        patient = PatientTable(example.values, **time)  # type: ignore[arg-type]
        if patient not in found:
            found.append(patient)
    return found


def _judge_version(parent: ModelContent, content: ModelContent) -> list[Problem]:
    try:
        older, newer = order_of(parent.version), order_of(content.version)
    except ValueError:
        return []  # its form is said by the shape of the file
    if content.id != parent.id or newer > older:
        return []
    one, two, _ = older
    what = "is the version of the model that is updated" if newer == older else f"is lower than {parent.version}"
    return [
        Problem(
            "/version",
            f"{content.version} {what}. A new version has a higher number, such as {one}.{two + 1}.0; or give it an id "
            "of its own.",
        )
    ]


def _remark(parent: ModelContent, content: ModelContent, wish: VersionWish) -> list[str]:
    found = []
    if wish.refitted is not None and not wish.population:
        found.append(
            f"For whom the model is meant still reads as in version {parent.version}, though every coefficient is of"
            ' other people. Where that is not right, say use = {population = "…"} in [update].'
        )
    if parent.recalibrations:
        names = ", ".join(dict.fromkeys(one.label for one in parent.recalibrations))
        required = " The parent gave no number without one; this version does." if parent.recalibration_required else ""
        found.append(
            f"Recalibrations were dropped, as they were made for the earlier coefficients: {names}. The update began"
            f" from the model without one, whatever the validation before it names.{required}"
        )
    gone = len(parent.unconfirmed) - len(content.unconfirmed)
    if gone:
        found.append(f"{gone} of {len(parent.unconfirmed)} notes on unconfirmed figures were about what is gone.")
    if not isinstance(parent.ancestry, UnsetType):
        found.append(
            f"The parent was itself updated from version {parent.ancestry.version}; that stands in the parent's file."
        )
    return found
