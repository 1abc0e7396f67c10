"""What of an assessment stands on a ruler: the lanes, the walk of shares, the comparison."""

from collections.abc import Sequence

from msgspec import UnsetType

from clinicalc.assessment.choices import DEFAULT_LEVEL
from clinicalc.assessment.decision import DecisionPoint as StatedPoint
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.assessment.shown_figures import shown_probability
from clinicalc.coefficients.roles import SEX
from clinicalc.report.comparison_figure import Compared
from clinicalc.report.matching_age_words import short_age
from clinicalc.report.measured import DecisionPoint, Interval, Lane, Measured, places
from clinicalc.report.shares_figure import Walk


def lanes_of(model: Model, points: Sequence[StatedPoint]) -> tuple[Lane, ...]:
    """The lanes that a model can ever fill: one for the spread where its file states a variation within a person.

    `points` are the decision points that hold at the horizon. The lanes are the same with a number and without one.
    """
    varies = any(isinstance(field, NumberField) and field.within_person is not None for field in model.fields)
    spread = (Lane.SPREAD,) if varies else ()
    return (Lane.BAND, *spread, *((Lane.DECISION,) if points else ()))


def measure_assessment(assessment: Assessment, points: Sequence[StatedPoint] = ()) -> Measured:
    """What a ruler shows of an assessment; without an estimate only the scale and the decision points `points`."""
    estimate = assessment.estimate
    link = _equation(assessment).content.link
    if estimate is None:
        return Measured(link, level=assessment.level, decisions=_decisions(points))
    band, spread = estimate.band, estimate.spread
    return Measured(
        link,
        estimate.probability,
        estimate.complement,
        band=None if band is None else Interval(band.lower, band.upper),
        level=assessment.level if band is None else band.level,
        spread=None if spread is None else Interval(spread.lower, spread.upper),
        decisions=_decisions([placed.point for placed in estimate.decision_points]),
        approximate=band is not None and band.basis == "reconstructed",
        shown=shown_probability(assessment),
    )


def measure_nothing(model: Model, points: Sequence[StatedPoint], level: float = DEFAULT_LEVEL) -> Measured:
    """What a ruler shows before there is an assessment; `level` names its band."""
    return Measured(model.equations[0].content.link, level=level, decisions=_decisions(points))


def walk_of(assessment: Assessment) -> Walk | None:
    """The walk from the reference person to this patient; None without shares."""
    estimate = assessment.estimate
    if estimate is None or estimate.shares is None:
        return None
    matched = estimate.matching_age
    return Walk(
        link=_equation(assessment).content.link,
        shares=estimate.shares,
        probability=estimate.probability,
        complement=estimate.complement,
        reference=reference_in_short(assessment),
        patient="" if matched is None else short_age(matched),
        caption=axis_caption(assessment),
        also=tuple(places(measure_assessment(assessment))),
        shown=shown_probability(assessment),
    )


def compared_of(assessment: Assessment) -> Compared | None:
    """The comparison as it is drawn; None where none was asked for."""
    estimate = assessment.estimate
    if estimate is None or estimate.comparison is None:
        return None
    return Compared(
        link=_equation(assessment).content.link,
        comparison=estimate.comparison,
        caption=axis_caption(assessment),
        also=tuple(places(measure_assessment(assessment))),
        beside=stated_points(estimate),
    )


def stated_points(estimate: Estimate) -> tuple[float, ...]:
    """The decision points beside a number, as probabilities."""
    return tuple(placed.point.probability for placed in estimate.decision_points)


def axis_caption(assessment: Assessment) -> str:
    """The unit of a ruler: "% within 10 years"."""
    return "%" if assessment.span is None else f"% within {assessment.span.words}"


def reference_in_short(assessment: Assessment) -> str:
    """Sex and age of the reference person where they are the patient's own: "Female, 61 years"; else ""."""
    stated = _equation(assessment).content.reference_person
    named = {} if isinstance(stated, UnsetType) else stated
    own = [line for line in assessment.values if line.id not in named and line.used]
    sexes = [line.shown for line in own if line.id == SEX]
    ages = [line.shown for line in own if line.id == "age" and _is_age(assessment.model, line.id)]
    return ", ".join([*sexes, *ages])


def _is_age(model: Model, id: str) -> bool:
    field = model.by_id[id]
    return isinstance(field, NumberField) and field.quantity.id == "age"


def _decisions(points: Sequence[StatedPoint]) -> tuple[DecisionPoint, ...]:
    return tuple(DecisionPoint(point.probability, point.label) for point in points)


def _equation(assessment: Assessment) -> ModelEquation:
    """The equation that answered; without a number the first, since all have the same scale."""
    equations = assessment.model.equations
    return next((e for e in equations if e.content.id == assessment.equation), equations[0])
