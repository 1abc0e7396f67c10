"""The figures beside the number of an old print: what was asked for then, and whether they come out again."""

from collections.abc import Iterator, Mapping, Sequence
from types import MappingProxyType

import msgspec
from msgspec import UNSET, UnsetType

from clinicalc.assessment.decision import PointOrigin
from clinicalc.assessment.entry import Typed
from clinicalc.coefficients.spans import Span
from clinicalc.errors import ClinicalcError, UsageError
from clinicalc.operations.differences import Difference, unless_same
from clinicalc.operations.old_record import Record
from clinicalc.settings import PracticePoint

WIDER_TOLERANCE = 1e-9
"""For figures from small differences, averages or a search: other machines move their last digits."""

_FIGURES = MappingProxyType(
    {
        "spread": "Re-measurement spread",
        "not_measured": "Not measured",
        "comparison": "Comparison",
        "shares": "Shares",
        "matching_age": "Matching age",
        "decision_points": "Decision point",
    }
)
_PARTS = MappingProxyType(
    {
        "lower": "lower end",
        "upper": "upper end",
        "known_lower": "lower end if known",
        "known_upper": "upper end if known",
        "link_sd": "SD on the link scale",
        "sd": "SD",
        "parts": "value",
        "changes": "change",
        "typed": "as typed",
        "own": "the patient’s own",
        "complement": "probability of no event",
        "difference_lower": "lower end of the difference",
        "difference_upper": "upper end of the difference",
        "because": "reason",
        "findings": "finding",
        "reference_person": "reference person",
        "reference_probability": "reference probability",
        "reference_eta": "reference linear predictor",
        "steps": "share",
        "standard_error": "standard error",
        "lowest": "lowest age",
        "highest": "highest age",
        "above": "number above it",
        "crossed": "within the band",
    }
)
"""Names of parts where the record's own are no words of a sentence."""


def changes_of(record: Record) -> Mapping[str, Typed]:
    """The changed values that the record was made with; none in a record without a comparison."""
    comparison = record.comparison
    if comparison is None or isinstance(comparison, UnsetType):
        return MappingProxyType({})
    return MappingProxyType({change.id: Typed(change.typed) for change in comparison.changes})


def asks_for_matching_age(record: Record) -> bool:
    """Whether the matching age was asked for."""
    return not (record.matching_age is None or record.matching_age is UNSET)


def practice_points_of(record: Record, span: Span | None, name: str) -> tuple[PracticePoint, ...]:
    """The practice's decision points as they were then; `name` is that of the print.

    Raises ClinicalcError where one cannot be.
    """
    if span is None or isinstance(record.decision_points, UnsetType):
        return ()
    try:
        return tuple(
            PracticePoint(record.model.id, span.time, span.unit, point.probability, point.label, point.source)
            for point in record.decision_points
            if point.origin == PointOrigin.PRACTICE.value
        )
    except UsageError as error:
        raise ClinicalcError(
            f"the record holds a decision point that cannot be one: {error.what}",
            where=name,
            why="The record was changed, or another program wrote it.",
            do="Give the PDF as this program saved it.",
        ) from error


def compare_beside(old: Record, new: Record) -> Iterator[Difference]:
    """Every figure beside the number in which two records differ; those that the old one does not know are left out."""
    for name, words in _FIGURES.items():
        before, after = getattr(old, name), getattr(new, name)
        if before is not UNSET:
            yield from _compare(words, before, after)


def _compare(what: str, old: object, new: object) -> Iterator[Difference]:
    """Two parts of records: part by part where both are structs of a kind, one by one where both are lists."""
    if isinstance(old, msgspec.Struct) and isinstance(new, msgspec.Struct):
        for field in msgspec.structs.fields(type(new)):
            part = _PARTS.get(field.name, field.name)
            yield from _compare(f"{what}, {part}", getattr(old, field.name), getattr(new, field.name))
    elif isinstance(old, msgspec.Struct) or isinstance(new, msgspec.Struct):
        yield Difference(what, *("nothing" if side is None else "worked out" for side in (old, new)))
    elif isinstance(old, tuple) and isinstance(new, tuple):
        yield from _compare_lists(what, old, new)
    else:
        yield from unless_same(what, old, new, WIDER_TOLERANCE)


def _compare_lists(what: str, old: Sequence[object], new: Sequence[object]) -> Iterator[Difference]:
    if len(old) != len(new):
        yield Difference(f"{what}, how many", str(len(old)), str(len(new)))
        return
    for number, (one, other) in enumerate(zip(old, new, strict=True), 1):
        yield from _compare(f"{what} {number}", one, other)
