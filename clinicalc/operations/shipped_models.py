"""The example models that ship with the program, as a practice sees them when it chooses its first file."""

from dataclasses import dataclass
from pathlib import Path

from msgspec import UnsetType

from clinicalc.coefficients.reader import read_file
from clinicalc.operations.course import Course
from clinicalc.resources import find_shipped, list_example_models


@dataclass(frozen=True, slots=True)
class ShippedModel:
    """One file: what it is called, what it tells, where its figures are from, and how many of them nobody compared."""

    path: Path
    title: str
    version: str
    outcome: str
    source: str
    unconfirmed: int
    """Entries of figures that were not checked against the source."""


def list_shipped_models(course: Course) -> tuple[ShippedModel, ...]:
    """Every shipped file, by title. Raises CoefficientFileRefused, ShippedFileMissing for a damaged installation."""
    names = list_example_models()
    found = []
    for place, name in enumerate(names):
        course.say("Reading the files that came with the program", place, len(names))
        found.append(_describe(find_shipped(f"example_models/{name}")))
    return tuple(sorted(found, key=lambda model: model.title.casefold()))


def _describe(path: Path) -> ShippedModel:
    content = read_file(path).content.model
    source = content.source
    doi = "" if isinstance(source.doi, UnsetType) else f" doi:{source.doi}"
    return ShippedModel(
        path,
        content.title,
        content.version,
        content.outcome,
        f"{source.citation}{doi}",
        len(content.unconfirmed),
    )
