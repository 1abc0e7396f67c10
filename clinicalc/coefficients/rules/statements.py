"""What a file says about itself: unconfirmed figures that exist, decision points that differ, counts that can be."""

from collections.abc import Iterator

import msgspec
from msgspec import UnsetType

from clinicalc.coefficients.pointers import find_at, quoted
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.schema import ModelContent
from clinicalc.errors import Problem


def check_unconfirmed(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Every `at` leads to a place in the model."""
    del names
    tree = msgspec.to_builtins(model) if model.unconfirmed else {}
    for index, note in enumerate(model.unconfirmed):
        try:
            find_at(tree, note.at)
        except LookupError:
            yield Problem(
                at("unconfirmed", index, "at"),
                f'{quoted(note.at)} leads to nothing in the model. Write a JSON Pointer such as "/equations/0/terms", '
                'counted from 0, or "" for the whole model.',
            )


def check_decision_points(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """No two decision points at one probability."""
    del names
    seen: dict[float, int] = {}
    for index, decision in enumerate(model.decision_points):
        first = at("decision_points", seen.setdefault(decision.probability, index))
        if seen[decision.probability] != index:
            yield Problem(
                at("decision_points", index, "probability"),
                f"{quoted(decision.probability)} stands already at {first}.",
            )


def check_counts(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """The model was not made from more events than people."""
    del names
    derivation = model.source.derivation
    if isinstance(derivation, UnsetType) or isinstance(derivation.events, UnsetType):
        return
    if derivation.events > derivation.people:
        yield Problem(
            at("source", "derivation", "events"),
            f"{derivation.events} events cannot come from {derivation.people} people.",
        )
