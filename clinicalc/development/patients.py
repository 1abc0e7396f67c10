"""Worked examples from the people of a description: what is printed is compared, the rest is worked out."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import msgspec
from msgspec import UNSET, UnsetType

from clinicalc import __version__
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import recompute
from clinicalc.assessment.result import Estimate
from clinicalc.coefficients.pointers import point
from clinicalc.coefficients.rules.catalogue import list_names
from clinicalc.coefficients.rules.coverage import select_equations
from clinicalc.coefficients.rules.examples import read_answers
from clinicalc.coefficients.schema import ModelContent, NoBand, WorkedExample
from clinicalc.development.description import PatientTable
from clinicalc.errors import Problem

OWN_TOLERANCE = 1e-9
OWN_SOURCE = f"Worked out by clinicalc {__version__} from the coefficients of this file when it was packaged."
_SLACK = 1e-12

NO_PATIENT = (
    "no person is described. A coefficient file proves itself with worked examples, at least one for "
    "each equation: add "
    "[[patients]] with values = {...} as they would be typed, and where you have them the probability, "
    "lower and upper that "
    "the other software prints, with tolerance and source."
)


@dataclass(frozen=True, slots=True)
class Draft:
    """A worked example to be: the number of its patient, from 0, and the example, figures of ours still stand-ins."""

    patient: int
    example: WorkedExample
    is_ours: bool


def find_patient_problems(patients: Sequence[PatientTable]) -> Iterator[Problem]:
    """What a patient lacks before it can be an example."""
    if not patients:
        yield Problem("/patients", NO_PATIENT)
    for place, patient in enumerate(patients):
        base = point("/patients", place)
        if isinstance(patient.probability, UnsetType):
            for name in ("lower", "upper", "tolerance", "source"):
                if getattr(patient, name) is not UNSET:
                    yield Problem(point(base, name), '"probability" is missing: this is about a printed one.')
        else:
            for name in ("tolerance", "source"):
                if getattr(patient, name) is UNSET:
                    yield Problem(
                        base,
                        f'"{name}" is missing beside a printed probability: half a unit of its last digit, and what'
                        " printed it.",
                    )


def draft_examples(patients: Sequence[PatientTable], content: ModelContent) -> tuple[Draft, ...]:
    """One example for each printed probability; one of ours for each horizon where none is, or no limits are."""
    return tuple(draft for place, patient in enumerate(patients) for draft in _drafts(place, patient, content))


def complete_examples(drafts: Sequence[Draft], model: Model) -> tuple[tuple[WorkedExample, ...], tuple[Problem, ...]]:
    """The examples with our figures in them, and a problem for each that gives no number or misses a printed one."""
    examples, problems = list[WorkedExample](), list[Problem]()
    for place, draft in enumerate(drafts):
        path = f"/worked_examples/{place}"
        estimate = (result := recompute(model, draft.example)).estimate
        if estimate is None:
            reasons = " ".join(finding.message for finding in (*result.stops, *result.missing))
            problems.append(Problem(path, f"this person gets no number. {reasons}"))
        elif draft.is_ours:
            examples.append(_with_ours(draft.example, estimate))
        else:
            examples.append(draft.example)
            problems += _misses(draft.example, estimate, path)
    return tuple(examples), tuple(problems)


def _drafts(place: int, patient: PatientTable, content: ModelContent) -> Iterator[Draft]:
    has_band = _has_band(patient, content)
    printed = patient.probability
    spans = [(patient.years, patient.time, patient.unit)]
    if spans == [(UNSET, UNSET, UNSET)]:
        horizons = content.equations[0].horizons
        if isinstance(printed, UnsetType) or len(horizons) == 1:
            spans = [(horizon.years, horizon.time, horizon.unit) for horizon in horizons]
    for years, time, unit in spans:
        bare = WorkedExample(
            patient.values, 0.5, OWN_TOLERANCE, OWN_SOURCE, years, time, unit, recalibration=patient.recalibration
        )
        if not isinstance(printed, UnsetType):
            yield Draft(place, _printed(bare, patient, printed), is_ours=False)
        if isinstance(printed, UnsetType) or (has_band and isinstance(patient.lower, UnsetType)):
            limits = (0.25, 0.75) if has_band else (UNSET, UNSET)
            ours = msgspec.structs.replace(bare, lower=limits[0], upper=limits[1], computed=True)
            yield Draft(place, ours, is_ours=True)


def _printed(bare: WorkedExample, patient: PatientTable, probability: float) -> WorkedExample:
    return msgspec.structs.replace(
        bare,
        probability=probability,
        tolerance=OWN_TOLERANCE if isinstance(patient.tolerance, UnsetType) else patient.tolerance,
        source=OWN_SOURCE if isinstance(patient.source, UnsetType) else patient.source,
        lower=patient.lower,
        upper=patient.upper,
    )


def _has_band(patient: PatientTable, content: ModelContent) -> bool:
    selected = select_equations(content, read_answers(patient.values, list_names(content)))
    return len(selected) == 1 and not isinstance(selected[0].uncertainty, NoBand)


def _with_ours(example: WorkedExample, estimate: Estimate) -> WorkedExample:
    band = estimate.band
    return msgspec.structs.replace(
        example,
        probability=estimate.probability,
        lower=UNSET if band is None else band.lower,
        upper=UNSET if band is None else band.upper,
    )


def _misses(example: WorkedExample, estimate: Estimate, path: str) -> Iterator[Problem]:
    band = estimate.band
    ours = {
        "probability": estimate.probability,
        "lower": None if band is None else band.lower,
        "upper": None if band is None else band.upper,
    }
    for name, figure in ours.items():
        printed = getattr(example, name)
        if not isinstance(printed, float) or figure is None or abs(printed - figure) <= example.tolerance + _SLACK:
            continue
        slip = (
            "Is the reference point the one where the baseline holds, is every term coded as in the fit (0 and 1, or 1"
            " and 2), and are values, units and horizon those that were predicted for?"
            if name == "probability"
            else "Are these limits made on the link scale (R: log-log for survival) at 95\u202f%, from this covariance?"
        )
        yield Problem(
            f"{path}/{name}",
            f"{printed:.10g} was printed, and this model gives {figure:.10g}; the tolerance is "
            f"{example.tolerance:g}. {slip}",
        )
