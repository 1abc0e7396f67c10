"""A validation as one JSON object, for programs that run the command; what cannot be worked out is null, with why."""

from math import isfinite

from clinicalc.validation.validated import (
    DecisionFigures,
    Fault,
    GroupFigures,
    HorizonValidation,
    Measure,
    PeopleCount,
    Validation,
)

Tree = dict[str, object]
SAME_PEOPLE = "These are the people that the new version was made from: this is no validation of it."


def record_validation(found: Validation) -> Tree:
    """The verdict, then everything that it rests on; shares and risks from 0 to 1."""
    return {
        "verdict": list(found.verdict),
        "faults": [_fault(fault) for fault in found.faults],
        "model": {"title": found.title, "version": found.version, "fingerprint": found.fingerprint},
        "recalibration": found.recalibration or None,
        "cohort": found.cohort,
        "people": _count(found.count),
        "horizons": [_horizon(at) for at in found.horizons],
        "groups": [_group(group) for group in found.groups],
        "remarks": list(found.remarks),
    }


def record_after(found: Validation) -> Tree:
    """The same of a new version in the people that it was made from, of whom no verdict is to be had."""
    verdict = [SAME_PEOPLE, *(fault.sentence for fault in found.faults)]
    return {**record_validation(found), "verdict": verdict}


def _fault(fault: Fault) -> Tree:
    return {
        "kind": str(fault.kind),
        "at": fault.at,
        "level": fault.level,
        "p": fault.p,
        "sentence": fault.sentence,
    }


def _count(count: PeopleCount) -> Tree:
    return {
        "in_file": count.in_file,
        "excluded": dict(count.excluded),
        "not_covered": count.not_covered,
        "no_outcome": count.no_outcome,
        "missing": count.missing,
        "missing_by": dict(count.missing_by),
        "refused": count.refused,
        "refused_by": dict(count.refused_by),
        "used": count.used,
        "beyond": dict(count.beyond),
    }


def _horizon(at: HorizonValidation) -> Tree:
    limits = at.calibration.limits
    return {
        "horizon": None if at.span is None else {"time": at.span.time, "unit": at.span.unit},
        "outcomes": str(at.outcomes),
        "people": at.people,
        "events": at.events,
        "competing": at.competing,
        "observed": _measure(at.observed),
        "expected": _known(at.expected),
        "observed_to_expected": _measure(at.observed_to_expected),
        "intercept": _measure(at.intercept),
        "slope": _measure(at.slope),
        "c": _measure(at.c),
        "uno": _measure(at.uno),
        "auc": _measure(at.auc),
        "brier": _measure(at.brier),
        "brier_null": _known(at.brier_null),
        "scaled_brier": _measure(at.scaled_brier),
        "ici": _measure(at.ici),
        "ici_by_chance": None if limits is None else limits.chance,
        "ici_by_chance_95th": None if limits is None else limits.chance_bound,
        "e50": at.e50.value,
        "e50_limits": [at.e50.lower, at.e50.upper],
        "e90": at.e90.value,
        "e90_limits": [at.e90.lower, at.e90.upper],
        "emax": at.emax.value,
        "emax_limits": [at.emax.lower, at.emax.upper],
        "groups": [
            {
                "people": group.people,
                "events": group.events,
                "predicted": _known(group.predicted),
                "observed": _known(group.observed),
                "lower": _known(group.lower),
                "upper": _known(group.upper),
            }
            for group in at.calibration.groups
        ],
        "decisions": [_decision(one) for one in at.decisions],
    }


def _decision(at: DecisionFigures) -> Tree:
    return {
        "point": at.point,
        "label": at.label,
        "flagged": at.flagged,
        "flagged_share": _measure(at.flagged_share),
        "sensitivity": _measure(at.sensitivity),
        "specificity": _measure(at.specificity),
        "positive_value": _measure(at.positive_value),
        "negative_value": _measure(at.negative_value),
        "net_benefit": _known(at.net_benefit),
        "treat_all": _known(at.treat_all),
        "missed": _known(at.missed),
    }


def _group(group: GroupFigures) -> Tree:
    return {
        "by": group.by,
        "level": group.level,
        "people": group.people,
        "events": group.events,
        "observed": _measure(group.observed),
        "expected": _known(group.expected),
        "observed_to_expected": _measure(group.observed_to_expected),
        "slope": _measure(group.slope),
        "c": _measure(group.c),
        "why": group.why,
    }


def _measure(measure: Measure) -> Tree:
    return {
        "value": _known(measure.value),
        "lower": _known(measure.lower),
        "upper": _known(measure.upper),
        "method": str(measure.method),
        "interval": str(measure.interval),
        "why": measure.why,
    }


def _known(value: float | None) -> float | None:
    """The value, None where there is none: JSON has no NaN."""
    return value if value is not None and isfinite(value) else None
