"""The assessment as one JSON object: for programs, and attached to every print. Probabilities are 0 to 1."""

import json

from clinicalc.assessment.band_assumptions import band_assumptions
from clinicalc.assessment.record_beside import JsonObject, record_beside, record_findings
from clinicalc.assessment.result import Assessment, Band, ValueLine
from clinicalc.assessment.vetting import Vetting


def record_of(assessment: Assessment) -> JsonObject:
    """The record, numbers unrounded, units as UCUM codes, without the patient label; null numbers after a stop."""
    model, estimate = assessment.model, assessment.estimate
    return {
        "model": {
            "id": model.content.id,
            "version": model.content.version,
            "title": model.content.title,
            "fingerprint": model.fingerprint,
        },
        "vetting": _vetting(assessment.vetting),
        **_horizon(assessment),
        "level": assessment.level,
        "probability": None if estimate is None else estimate.probability,
        "complement": None if estimate is None else estimate.complement,
        "eta": None if estimate is None else estimate.eta,
        "band": None if estimate is None else _band(assessment, estimate.band),
        "band_absent_because": estimate.band_absent_because or None if estimate is not None else None,
        "recalibration": assessment.recalibration,
        "values": [_value(line) for line in assessment.values if not line.derived and line.typed],
        "derived": [_derived(line) for line in assessment.values if line.derived and (line.typed or line.worked_out)],
        **record_beside(assessment),
        "findings": record_findings(assessment.findings),
    }


def write_record(assessment: Assessment) -> str:
    """The record as JSON text, indented by 2, shortest decimals, one newline at the end."""
    return json.dumps(record_of(assessment), ensure_ascii=False, indent=2, allow_nan=False) + "\n"


def _vetting(vetting: Vetting | None) -> JsonObject | None:
    """The approval in force, null for a file that was opened by its name; `library` is the library's id."""
    if vetting is None:
        return None
    return {
        "practice": vetting.practice,
        "by": vetting.approved_by,
        "role": vetting.role,
        "approved_on": vetting.approved_on.isoformat(),
        "review_until": vetting.review_until.isoformat(),
        "by_author": vetting.by_author,
        "library": vetting.library,
        "compared": [{"at": place, "by": name} for place, name in vetting.compared],
        "caution": vetting.caution or None,
    }


def _band(assessment: Assessment, band: Band | None) -> JsonObject | None:
    """The band; "assumptions" are those of a rebuilt one, [] for any other."""
    if band is None:
        return None
    return {
        "level": band.level,
        "lower": band.lower,
        "upper": band.upper,
        "basis": band.basis,
        "assumptions": list(band_assumptions(assessment)),
    }


def _horizon(assessment: Assessment) -> JsonObject:
    span = assessment.span
    if span is None:
        return {"years": None}
    time = int(span.time) if span.time.is_integer() else span.time
    return {"years": time} if span.unit == "a" else {"years": None, "time": time, "unit": span.unit}


def _value(line: ValueLine) -> JsonObject:
    return {
        "id": line.id,
        "typed": line.typed,
        "value": line.answer if line.number is None else line.number,
        "unit": line.unit,
        "dated": None if line.dated is None else line.dated.isoformat(),
    }


def _derived(line: ValueLine) -> JsonObject:
    return {"id": line.id, "value": line.number, "unit": line.unit, "typed": line.typed or None}
