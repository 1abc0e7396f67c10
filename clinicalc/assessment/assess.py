"""One assessment: read, check, require, predict. Never raises on what a person typed."""

from dataclasses import dataclass
from datetime import datetime

import numpy as np

from clinicalc.assessment.cautions import equation_cautions
from clinicalc.assessment.cut_points import find_near_cuts
from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade, in_reading_order
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

DEFAULT_LEVEL = 0.95


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
    horizon. What is missing or cannot be used leaves `estimate` None and says why in a finding.
    """
    at = at or datetime.now().astimezone()
    if span is None and len(model.spans) == 1:
        span = model.spans[0]
    taken = read_entry(model, entry, at)
    equations = possible_equations(model, taken.answers)
    typed = {id for id, value in entry.typed.items() if value.text.strip()}
    available = {*taken.numbers, *taken.answers, *taken.worked_out}
    taken.findings += find_missing(model, equations, available, typed)
    chosen = None if span is None else _choose_recalibration(model, span, recalibration)
    taken.findings += _unsettled(model, span, chosen)
    equation = equations[0] if len(equations) == 1 else None
    estimate = None
    stopped = any(finding.grade is Grade.STOP for finding in taken.findings)
    if equation is not None and span is not None and not stopped:
        estimate = _estimate(model, equation, equation.line_at(span), chosen, level, taken)
        taken.findings += equation_cautions(model, Basis(equation, span, chosen, taken.numbers, taken.answers))
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
    """Every field of the entry read and checked, derived values worked out, values set against each other."""
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
    _work_out_all(model, taken)
    taken.findings += check_relations(model, taken.numbers)
    return taken


def _work_out_all(model: Model, taken: Taken) -> None:
    columns = taken.columns
    for field in model.derived:
        column = work_out(model, field, columns)
        if column is None:
            continue
        value, typed = float(column[0]), taken.numbers.get(field.id)
        findings = check_worked_out(model, field, value, typed)
        taken.findings += findings
        if typed is None and not any(finding.grade is Grade.STOP for finding in findings):
            taken.worked_out[field.id] = value


def _not_to_be_typed(field: NumberField) -> Finding:
    message = f"{field.label} is worked out from other values and is not typed for this model. Leave it empty."
    return Finding(Grade.STOP, FindingCode.UNREADABLE, field.id, message)


def _choose_recalibration(model: Model, span: Span, id: str | None) -> Recalibration | None:
    return next((r for r in model.recalibrations_at(span) if r.id == id), None)


def _unsettled(model: Model, span: Span | None, chosen: Recalibration | None) -> tuple[Finding, ...]:
    """Stops for choices about the model that are still open."""
    if span is None:
        spans = ", ".join(span.words for span in model.spans)
        message = f"This model answers for several time spans ({spans}): choose one."
        return (Finding(Grade.STOP, FindingCode.HORIZON, "horizon", message),)
    if chosen is None and model.content.recalibration_required:
        offered = ", ".join(f"{r.id} ({r.label})" for r in model.recalibrations_at(span))
        message = f"This model gives no number without one of its recalibrations: choose one of {offered}."
        return (Finding(Grade.STOP, FindingCode.RECALIBRATION, "recalibration", message),)
    return ()


def _estimate(
    model: Model,
    equation: ModelEquation,
    line: Line,
    recalibration: Recalibration | None,
    level: float,
    taken: Taken,
) -> Estimate:
    """The number and its band; adds what depends on them to the findings."""
    typed = taken.columns
    columns = typed | {id: np.array([value]) for id, value in taken.worked_out.items()}
    adjustment = None if recalibration is None else adjustment_of(recalibration.equations[equation.content.id])
    result = predict(line, design_columns(equation.terms, columns), adjustment=adjustment, level=level)
    taken.findings += find_near_cuts(model, equation, line, adjustment, typed, taken.numbers)
    band = None
    if result.lower is not None and result.upper is not None:
        band = Band(level, float(result.lower[0]), float(result.upper[0]), line.basis)
        if adjustment is not None and adjustment.covariance is None:
            taken.findings.append(_imprecise_recalibration())
    return Estimate(
        eta=float(result.eta[0]),
        probability=float(result.probability[0]),
        complement=float(result.complement[0]),
        band=band,
        band_absent_because="" if band else _no_band_because(line, level, adjustment),
    )


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
