"""The version that a model was updated from: an earlier one of the same model, and counts that can be."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.schema import ModelContent
from clinicalc.errors import Problem


def check_ancestry(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """A parent of the same id has a lower version, and nobody was updated to more events than people."""
    del names
    ancestry = model.ancestry
    if isinstance(ancestry, UnsetType):
        return
    if ancestry.id == model.id and order_of(model.version) <= order_of(ancestry.version):
        yield Problem(
            at("ancestry", "version"),
            f"the model was updated from version {ancestry.version} of the same id and is itself version "
            f"{model.version}: a later version has a higher number.",
        )
    cohort = ancestry.cohort
    if not cohort.people:
        yield Problem(at("ancestry", "cohort", "people"), "nobody can be updated to 0 people.")
    if not isinstance(cohort.events, UnsetType) and cohort.events > cohort.people:
        yield Problem(
            at("ancestry", "cohort", "events"), f"{cohort.events} events cannot come from {cohort.people} people."
        )


def order_of(version: str) -> tuple[int, ...]:
    """The three numbers of a version, by which versions are put in order."""
    return tuple(int(part) for part in version.split("."))
