"""Decision points in sentences: on which side the number lies, and how sure the coefficients make that."""

from collections.abc import Sequence

from clinicalc.assessment.decision import PlacedPoint, PointOrigin
from clinicalc.assessment.numerals import join_words, percent_in_full

ABOUT_COEFFICIENTS = "This is about the model’s coefficients, not about this patient’s event."
"""Follows every statement of confidence."""

_ALMOST_CERTAIN, _VERY_PROBABLE, _PROBABLE = 0.99, 0.9, 0.65
"""Shares above which the words are used: our own choice, as the guide says. Up to the last neither side is favoured."""


def decision_sentences(placed: Sequence[PlacedPoint], shown: str) -> tuple[str, ...]:
    """A sentence for each point, then one for how sure that is where it is known; `shown` is the number as written."""
    sides = (f"{point_sentence(place, shown)}." for place in placed)
    return tuple(filter(None, (*sides, confidence_sentence(placed))))


def point_sentence(placed: PlacedPoint, shown: str) -> str:
    """The number as it is shown beside the point: "10.5 %, above the decision point 10.0 % (label; source)"."""
    point = placed.point
    at = percent_in_full(point.probability)
    side = "at or just above" if shown == at else "above" if placed.above else "below"
    whose = "this practice’s" if point.origin is PointOrigin.PRACTICE else "the"
    return f"{shown}, {side} {whose} decision point {at} ({point.label}; {point.source})"


def confidence_sentence(placed: Sequence[PlacedPoint]) -> str:
    """How surely the model's number lies above or below each point, in words with the figure in brackets.

    "" where it is known for none of them.
    """
    said = [
        confidence_words(place.confidence, percent_in_full(place.point.probability))
        for place in placed
        if place.confidence is not None
    ]
    if not said:
        return ""
    return (
        "Given how precisely the coefficients are known, the model’s number for people with these values is"
        f" {join_words(said)}. {ABOUT_COEFFICIENTS}"
    )


def confidence_words(confidence: float, point: str) -> str:
    """A confidence of lying above a point, 0 to 1: "probably above 10.0 % (about 86 of 100)"."""
    likelier, side = (confidence, "above") if confidence >= 0.5 else (1.0 - confidence, "below")
    count = round(100.0 * likelier)
    if likelier > _ALMOST_CERTAIN:
        return f"almost certainly {side} {point} (more than 99 of 100)"
    if likelier > _VERY_PROBABLE:
        return f"very probably {side} {point} (about {count} of 100)"
    if likelier > _PROBABLE:
        return f"probably {side} {point} (about {count} of 100)"
    return f"about as likely above {point} as below (above in about {round(100.0 * confidence)} of 100)"
