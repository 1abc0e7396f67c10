"""Findings: what is to be said about the values and the number, in three grades."""

from dataclasses import dataclass
from enum import StrEnum


class Grade(StrEnum):
    """How much a finding weighs: no number, a number printed with it, a remark."""

    STOP = "stop"
    CAUTION = "caution"
    NOTE = "note"


class FindingCode(StrEnum):
    """What a finding is about; part of the exported record, so a code is never given a second meaning."""

    MISSING = "missing"
    UNREADABLE = "unreadable"
    UNKNOWN_ANSWER = "unknown_answer"
    WRONG_UNIT = "wrong_unit"
    IMPOSSIBLE = "impossible"
    UNUSUAL = "unusual"
    OUTSIDE_DERIVATION = "outside_derivation"
    EXCLUDED = "excluded"
    CROSS_CHECK = "cross_check"
    NOT_COMPUTABLE = "not_computable"
    TYPED_AND_COMPUTED = "typed_and_computed"
    NEAR_CUT = "near_cut"
    OUT_OF_DATE = "out_of_date"
    FUTURE_DATE = "future_date"
    GROUP = "group"
    UNCONFIRMED = "unconfirmed"
    COMPETING_EVENTS = "competing_events"
    HORIZON = "horizon"
    RECALIBRATION = "recalibration"
    RECALIBRATION_PRECISION = "recalibration_precision"
    MODEL = "model"
    NOT_MEASURED = "not_measured"
    RARE_COMBINATION = "rare_combination"
    COMPARISON = "comparison"
    DECISION_POINT = "decision_point"
    LIBRARY_COPY = "library_copy"


@dataclass(frozen=True, slots=True)
class Finding:
    """One finding: `field` is the id of the value it is about ("" for the model as a whole).

    `offer` holds UCUM codes in which the same digits would be believable.
    """

    grade: Grade
    code: FindingCode
    field: str
    message: str
    offer: tuple[str, ...] = ()


_WEIGHT = {Grade.STOP: 0, Grade.CAUTION: 1, Grade.NOTE: 2}


def in_reading_order(findings: list[Finding], field_order: tuple[str, ...]) -> tuple[Finding, ...]:
    """Stops, cautions, notes; within a grade in page order, findings about the whole model last."""
    place = {field: number for number, field in enumerate(field_order)}
    return tuple(sorted(findings, key=lambda finding: (_WEIGHT[finding.grade], place.get(finding.field, len(place)))))
