"""One assessment: read, check, require, predict. Never raises on what a person typed."""

from collections.abc import Iterable, Set
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from clinicalc.assessment.cautions import equation_cautions
from clinicalc.assessment.choices import DEFAULT_LEVEL, check_level, settle_choices
from clinicalc.assessment.cut_points import find_near_cuts
from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade, in_reading_order
from clinicalc.assessment.limits import clamp, giving_limits
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber, take_number
from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.assessment.questions import TakenAnswer, take_answer
from clinicalc.assessment.relations import check_relations
from clinicalc.assessment.requirements import find_missing, possible_equations
from clinicalc.assessment.result import Assessment, Band, Estimate
from clinicalc.assessment.unconfirmed import Basis
from clinicalc.assessment.value_lines import value_lines
from clinicalc.assessment.worked_out import check_worked_out, work_out
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.covariates.design import design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Draws, Line, adjustment_of
from clinicalc.prediction.predict import predict


@dataclass(slots=True)
class Taken:
    """What could be used of an entry; filled while reading it."""

    numbers: dict[str, TakenNumber]
    answers: dict[str, TakenAnswer]
    worked_out: dict[str, float]
    findings: list[Finding]

    @property
    def columns(self) -> dict[str, Column]:
        """One row with every typed value that can be used, in the file's units and codes."""
        numbers = {id: np.array([taken.value]) for id, taken in self.numbers.items()}
        return numbers | {id: np.array([taken.code]) for id, taken in self.answers.items() if not taken.field.excludes}


def assess(
    model: Model,
    entry: PatientEntry,
    *,
    span: Span | None = None,
    recalibration: str | None = None,
    level: float = DEFAULT_LEVEL,
    at: datetime | None = None,
) -> Assessment:
    """The assessment of one patient's entry.

    `span` may stay None where the model has one horizon; `recalibration` is the id of one that the file offers at that
    horizon. What is missing, not offered or cannot be used leaves `estimate` None and says why in a finding. Raises
    UsageError for a level of which no band can be made; never for anything typed about the patient.
    """
    check_level(level)
    at = at or datetime.now().astimezone()
    if span is None and len(model.spans) == 1:
        span = model.spans[0]
    taken = read_entry(model, entry, at)
    equations = possible_equations(model, taken.answers)
    typed = {id for id, value in entry.typed.items() if value.text.strip()}
    _work_out_all(model, equations, taken, typed)
    available = {*taken.numbers, *taken.answers, *taken.worked_out}
    taken.findings += find_missing(model, equations, available, typed)
    chosen, unsettled = settle_choices(model, span, recalibration)
    taken.findings += unsettled
    equation = equations[0] if len(equations) == 1 else None
    estimate = None
    if equation is not None and span is not None and not _stopped(taken.findings):
        estimate, more = _estimate(model, equation, equation.line_at(span), chosen, level, taken)
        taken.findings += more
    order = (*(field.id for field in model.fields), "horizon", "recalibration")
    return Assessment(
        model=model,
        at=at,
        label=entry.label,
        span=span,
        level=level,
        recalibration=None if chosen is None else chosen.id,
        equation=None if equation is None else equation.content.id,
        values=value_lines(model, entry, taken.numbers, taken.answers, taken.worked_out),
        findings=in_reading_order(taken.findings, order),
        estimate=estimate,
    )


def read_entry(model: Model, entry: PatientEntry, at: datetime) -> Taken:
    """Every field of the entry read and checked, and the typed values set against each other.

    Contradicting values stop even where the equation uses only one of them: one of the two is a slip.
    """
    taken = Taken({}, {}, {}, [])
    for field in model.fields:
        typed = entry.typed.get(field.id)
        if typed is None or not typed.text.strip():
            continue
        if isinstance(field, QuestionField):
            answer, findings = take_answer(field, typed)
            if answer is not None:
                taken.answers[field.id] = answer
        elif not field.may_be_typed:
            findings = (_not_to_be_typed(field),)
        else:
            number, findings = take_number(field, typed, at.date())
            if number is not None:
                taken.numbers[field.id] = number
        taken.findings += findings
    taken.findings += check_relations(taken.numbers)
    return taken


def _work_out_all(model: Model, equations: tuple[ModelEquation, ...], taken: Taken, typed: Set[str]) -> None:
    """Derived values that an equation still possible needs, or that stand beside a typed one."""
    columns = taken.columns
    needed = {id for equation in equations for id in equation.uses}
    for field in model.derived:
        if field.id not in needed and field.id not in typed:
            continue
        column = work_out(model, field, columns)
        if column is None:
            continue
        beside = taken.numbers.get(field.id)
        findings = check_worked_out(model, field, float(column[0]), beside)
        taken.findings += findings
        if beside is None and not _stopped(findings):
            taken.worked_out[field.id] = clamp(float(column[0]), giving_limits(field))


def _stopped(findings: Iterable[Finding]) -> bool:
    return any(finding.grade is Grade.STOP for finding in findings)


def _not_to_be_typed(field: NumberField) -> Finding:
    message = f"{field.label} is worked out from other values and is not typed for this model. Leave it empty."
    return Finding(Grade.STOP, FindingCode.UNREADABLE, field.id, message)


def _estimate(
    model: Model,
    equation: ModelEquation,
    line: Line,
    recalibration: Recalibration | None,
    level: float,
    taken: Taken,
) -> tuple[Estimate | None, list[Finding]]:
    """The number with its band, and the findings that come with it."""
    typed = taken.columns
    columns = typed | {id: np.array([value]) for id, value in taken.worked_out.items()}
    adjustment = None if recalibration is None else adjustment_of(recalibration.equations[equation.content.id])
    design = design_columns(equation.terms, columns)
    result = predict(line, design, adjustment=adjustment, level=level)
    figures = (result.eta, *(end for end in (result.eta_lower, result.eta_upper) if end is not None))
    if not all(np.isfinite(figure[0]) for figure in figures):
        return None, [_not_computable()]
    band = None
    if result.lower is not None and result.upper is not None:
        band = Band(level, float(result.lower[0]), float(result.upper[0]), line.basis)
    basis = Basis(
        equation=equation,
        span=line.span,
        recalibration=recalibration,
        numbers=taken.numbers,
        answers=taken.answers,
        terms=frozenset(place for place, column in enumerate(design) if column[0] != 0),
        worked_out=frozenset(taken.worked_out) & equation.uses,
    )
    findings = [
        *find_near_cuts(model, equation, line, adjustment, typed, taken.numbers),
        *equation_cautions(model, basis),
        *([_imprecise_recalibration()] if band and adjustment and adjustment.covariance is None else []),
    ]
    estimate = Estimate(
        eta=float(result.eta[0]),
        probability=float(result.probability[0]),
        complement=float(result.complement[0]),
        band=band,
        band_absent_because="" if band else _no_band_because(line, level, adjustment),
    )
    return estimate, findings


def _not_computable() -> Finding:
    message = "The model’s equation has no finite result for these values, so there is no number. Tell its author."
    return Finding(Grade.STOP, FindingCode.NOT_COMPUTABLE, "", message)


def _imprecise_recalibration() -> Finding:
    message = "The imprecision of the recalibration is not in the band: its source prints none."
    return Finding(Grade.NOTE, FindingCode.RECALIBRATION_PRECISION, "recalibration", message)


def _no_band_because(line: Line, level: float, adjustment: Adjustment | None) -> str:
    if isinstance(line.band, Draws):
        return (
            f"The file holds {line.band.baselines.size} draws, too few for a band of {100 * level:g}{NARROW_SPACE}%."
            " Ask for a lower level."
        )
    if adjustment is not None and adjustment.covariance is not None:
        return f"{line.no_band_because} The recalibration’s own imprecision alone makes no band."
    return line.no_band_because
