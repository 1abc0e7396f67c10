"""Decision points: on which side of them the number lies, and how sure the model's coefficients make that."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from enum import StrEnum

from clinicalc.assessment.case import Case
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import percent_in_full, percent_range
from clinicalc.coefficients.spans import Span
from clinicalc.prediction.exceedance import confidences_above, place_on_link
from clinicalc.settings import PracticePoint


class PointOrigin(StrEnum):
    """Who stated a decision point."""

    FILE = "file"
    PRACTICE = "practice"


@dataclass(frozen=True, slots=True)
class DecisionPoint:
    """A probability at which practice changes, with who says so."""

    probability: float
    label: str
    source: str
    origin: PointOrigin


@dataclass(frozen=True, slots=True)
class PlacedPoint:
    """A decision point and the number: compared unrounded on the link scale; a number on it counts as above.

    `confidence`: how surely the model's probability for people with these values lies above the point, 0 to 1, from
    the imprecision of the coefficients; None without a band. `crossed`: whether the band reaches over it.
    """

    point: DecisionPoint
    above: bool
    crossed: bool
    confidence: float | None


def points_for(model: Model, span: Span, practice: Sequence[PracticePoint] = ()) -> tuple[DecisionPoint, ...]:
    """The decision points that hold at a horizon, lowest first.

    A file states its points for every horizon that it answers for; the practice states each for one model and one
    horizon, and it holds for no other. One that the practice took over from the file letter for letter is the file's.
    """
    stated = {(p.probability, p.label, p.source): None for p in model.content.decision_points}
    file = (DecisionPoint(*point, PointOrigin.FILE) for point in stated)
    own = (
        DecisionPoint(p.probability, p.label, p.source, PointOrigin.PRACTICE)
        for p in practice
        if p.model == model.content.id
        and Span(p.time, p.unit) == span
        and (p.probability, p.label, p.source) not in stated
    )
    return tuple(sorted((*file, *own), key=lambda point: point.probability))


def place_points(
    case: Case,
    eta: float,
    band: tuple[float, float] | None,
    points: Sequence[DecisionPoint],
    *,
    all_measured: bool = True,
) -> tuple[PlacedPoint, ...]:
    """Each point with its place, in the order given.

    `eta` is the number on the adjusted link scale, `band` its ends as probabilities, or None. Everything is compared on
    the link scale, unrounded. The confidence is Phi((eta - g^-1(T)) / sd), for draws the share of draws at or above. It
    is None without a band, and where a value was not measured: then the coefficients are not the only thing unknown.
    """
    if not points:
        return ()
    places = [place_on_link(case.line.link, point.probability) for point in points]
    ends = None if band is None else [place_on_link(case.line.link, end) for end in band]
    confidences: Sequence[float | None] | None = None
    if band is not None and all_measured:
        confidences = confidences_above(case.line, case.design_with({}), places, adjustment=case.adjustment)
    return tuple(
        PlacedPoint(
            point=point,
            above=eta >= place,
            crossed=ends is not None and ends[0] < place <= ends[1],
            confidence=confidence,
        )
        for point, place, confidence in zip(points, places, confidences or [None] * len(points), strict=True)
    )


def find_crossed(
    placed: Sequence[PlacedPoint], lower: float, upper: float, *, all_measured: bool = True
) -> Iterator[Finding]:
    """A caution for each point that the band, given as probabilities, reaches across.

    Unless `all_measured`, the band holds what was not measured too.
    """
    also = "" if all_measured else " and what was not measured"
    # in the digits in which it stands everywhere else
    band = percent_range(lower, upper, [place.point.probability for place in placed])
    for place in placed:
        if place.crossed:
            point = place.point
            side = "above" if place.above else "below"
            message = (
                f"The band {band} reaches across the decision point {percent_in_full(point.probability)}"
                f" ({point.label}; {point.source}). The number lies {side} it, and the model’s coefficients{also} are"
                " not known precisely enough to settle which side."
            )
            yield Finding(Grade.CAUTION, FindingCode.DECISION_POINT, "", message)
