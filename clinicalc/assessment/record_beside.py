"""The figures beside the number as they stand in the record; probabilities 0 to 1, units as UCUM codes."""

from clinicalc.assessment.comparison import Comparison
from clinicalc.assessment.decision import PlacedPoint
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import Finding
from clinicalc.assessment.matching_age import MatchingAge
from clinicalc.assessment.not_measured import NotMeasured
from clinicalc.assessment.result import Assessment, Estimate
from clinicalc.assessment.spread import Spread

JsonObject = dict[str, object]


def record_beside(assessment: Assessment) -> JsonObject:
    """The six figures by name; null where there is none of it, [] where there are no decision points."""
    estimate = assessment.estimate
    if estimate is None:
        absent = ("spread", "not_measured", "comparison", "shares", "matching_age")
        return {**dict.fromkeys(absent), "decision_points": []}
    return {
        "spread": _spread(assessment, estimate.spread),
        "not_measured": _not_measured(estimate.not_measured),
        "comparison": _comparison(assessment, estimate.comparison),
        "shares": _shares(estimate),
        "matching_age": _matching_age(estimate.matching_age),
        "decision_points": [_point(placed) for placed in estimate.decision_points],
    }


def record_findings(findings: tuple[Finding, ...]) -> list[JsonObject]:
    """Findings with the names of their grades and codes; no field for what is about the model as a whole."""
    return [
        {"grade": f.grade.value, "code": f.code.value, "field": f.field or None, "message": f.message} for f in findings
    ]


def _spread(assessment: Assessment, spread: Spread | None) -> JsonObject | None:
    if spread is None:
        return None
    return {
        "level": spread.level,
        "lower": spread.lower,
        "upper": spread.upper,
        "link_sd": spread.link_sd,
        "parts": [
            {
                "id": part.field,
                "sd": part.sd,
                "unit": _unit(assessment, part.field),
                "link_sd": part.link_sd,
                "source": part.source,
            }
            for part in spread.parts
        ],
    }


def _unit(assessment: Assessment, id: str) -> str | None:
    field = assessment.model.by_id[id]
    return field.unit if isinstance(field, NumberField) else None


def _not_measured(found: NotMeasured | None) -> JsonObject | None:
    if found is None:
        return None
    return {
        "fields": list(found.fields),
        "level": found.level,
        "lower": found.lower,
        "upper": found.upper,
        "link_sd": found.link_sd,
        "known_lower": found.known_lower,
        "known_upper": found.known_upper,
        "source": found.source,
    }


def _comparison(assessment: Assessment, found: Comparison | None) -> JsonObject | None:
    """Changes as they were entered, each beside the patient's own value; then the changed number."""
    if found is None:
        return None
    own = {line.id: line.answer if line.number is None else line.number for line in assessment.values}
    side = found.changed
    return {
        "changes": [
            {
                "id": change.field,
                "typed": change.typed,
                "own": own.get(change.field),
                "value": change.value,
                "unit": change.unit,
            }
            for change in found.entered
        ],
        "probability": None if side is None else side.probability,
        "complement": None if side is None else side.complement,
        "lower": None if side is None else side.lower,
        "upper": None if side is None else side.upper,
        "difference": found.difference,
        "difference_lower": found.difference_lower,
        "difference_upper": found.difference_upper,
        "because": found.because or None,
        "findings": record_findings(found.findings),
    }


def _shares(estimate: Estimate) -> JsonObject | None:
    shares, because = estimate.shares, estimate.shares_absent_because
    if shares is None and not because:
        return None
    return {
        "reference_person": estimate.reference_person or None,
        "reference_probability": None if shares is None else shares.reference_probability,
        "reference_eta": None if shares is None else shares.reference_eta,
        "steps": [] if shares is None else [{"id": step.field, "amount": step.amount} for step in shares.steps],
        "because": because or None,
    }


def _matching_age(found: MatchingAge | None) -> JsonObject | None:
    """In years; without ages to look in, "lowest" and "highest" are null."""
    if found is None:
        return None
    searched = found.lowest < found.highest
    return {
        "place": None if found.place is None else found.place.value,
        "age": found.age,
        "standard_error": found.standard_error,
        "lowest": found.lowest if searched else None,
        "highest": found.highest if searched else None,
        "because": found.because or None,
    }


def _point(placed: PlacedPoint) -> JsonObject:
    point = placed.point
    return {
        "probability": point.probability,
        "label": point.label,
        "source": point.source,
        "origin": point.origin.value,
        "above": placed.above,
        "crossed": placed.crossed,
        "confidence": placed.confidence,
    }
