"""What stands beside the number: spread, decision points, comparison, shares, and the matching age if asked for."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from datetime import date

from clinicalc.assessment.case import Case
from clinicalc.assessment.comparison import compare
from clinicalc.assessment.decision import find_crossed, place_points, points_for
from clinicalc.assessment.entry import Typed
from clinicalc.assessment.fields import Field
from clinicalc.assessment.findings import Finding
from clinicalc.assessment.matching_age import match_age
from clinicalc.assessment.reference_person import describe_reference, find_reference
from clinicalc.assessment.result import Estimate
from clinicalc.assessment.shares import walk_from
from clinicalc.assessment.spread import spread_of
from clinicalc.settings import PracticePoint


@dataclass(frozen=True, slots=True)
class Wanted:
    """What is asked for beside the number: other values, the practice's decision points, the matching age."""

    changes: Mapping[str, Typed]
    practice_points: Sequence[PracticePoint]
    matching_age: bool
    today: date


def set_beside(
    case: Case, estimate: Estimate, open: tuple[Field, ...], wanted: Wanted
) -> tuple[Estimate, tuple[Finding, ...]]:
    """The estimate with the figures beside it, and what is to be said about the number because of them.

    `open` are the fields that were not measured. What is to be said about changed values stays with the comparison.
    """
    band = None if estimate.band is None else (estimate.band.lower, estimate.band.upper)
    points = points_for(case.model, case.line.span, wanted.practice_points)
    placed = place_points(case, estimate.eta, band, points, all_measured=not open)
    reference = find_reference(case)
    walk = walk_from(case, reference)
    beside = replace(
        estimate,
        spread=spread_of(case, open),
        comparison=compare(case, wanted.changes, wanted.today),
        decision_points=placed,
        shares=None if isinstance(walk, str) else walk,
        shares_absent_because=walk if isinstance(walk, str) else "",
        reference_person=describe_reference(case),
        matching_age=match_age(case) if wanted.matching_age else None,
    )
    return beside, () if band is None else tuple(find_crossed(placed, *band, all_measured=not open))
