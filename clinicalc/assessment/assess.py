"""One assessment: read, check, require, predict. Never raises on what a person typed."""

from collections.abc import Iterable, Sequence, Set
from dataclasses import dataclass
from datetime import datetime

import numpy as np

from clinicalc.assessment.beside import Wanted, set_beside
from clinicalc.assessment.case import Case
from clinicalc.assessment.choices import DEFAULT_LEVEL, check_level, settle_choices
from clinicalc.assessment.entry import PatientEntry
from clinicalc.assessment.estimate import estimate_case
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade, in_reading_order
from clinicalc.assessment.limits import clamp, giving_limits
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.not_measured import says_not_measured
from clinicalc.assessment.numbers import TakenNumber, take_number
from clinicalc.assessment.open_fields import check_open, open_in
from clinicalc.assessment.questions import TakenAnswer, take_answer
from clinicalc.assessment.rarity import find_rare
from clinicalc.assessment.relations import check_relations
from clinicalc.assessment.requirements import find_missing, possible_equations
from clinicalc.assessment.result import Assessment
from clinicalc.assessment.value_lines import value_lines
from clinicalc.assessment.vetting import Vetting
from clinicalc.assessment.worked_out import check_worked_out, work_out
from clinicalc.coefficients.schema import Recalibration
from clinicalc.coefficients.spans import Span
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Line, adjustment_of
from clinicalc.settings import PracticePoint


@dataclass(slots=True)
class Taken:
    """What could be used of an entry; filled while reading it."""

    numbers: dict[str, TakenNumber]
    answers: dict[str, TakenAnswer]
    worked_out: dict[str, float]
    open: list[Field]
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
    practice_points: Sequence[PracticePoint] = (),
    matching_age: bool = False,
    number_only: bool = False,
    vetting: Vetting | None = None,
) -> Assessment:
    """The assessment of one patient's entry, with the decision points of the file and of the practice.

    `span` may stay None where the model has one horizon; `recalibration` is the id of one that the file offers at that
    horizon. `number_only` leaves out the figures beside the number (spread, comparison, shares, decision points). What
    is missing, not offered or cannot be used leaves `estimate` None and says why in a finding. `vetting` is the
    approval under which the model is used, which the caller has settled. Raises UsageError for a level of which no band
    can be made; never for anything typed about the patient.
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
    chosen, unsettled = settle_choices(model, span, recalibration)
    taken.findings += [*find_missing(model, equations, available, typed), *unsettled, *_of_library(vetting)]
    equation = equations[0] if len(equations) == 1 else None
    estimate = None
    if equation is not None and span is not None and not _stopped(taken.findings):
        case = _case_of(model, equation, equation.line_at(span), chosen, level, taken, vetting)
        open = open_in(case, tuple(taken.open))
        estimate, more = estimate_case(case, chosen, open)
        taken.findings += more
        if estimate is not None and not number_only:
            wanted = Wanted(entry.changes, practice_points, matching_age, at.date())
            estimate, crossed = set_beside(case, estimate, open, wanted)
            taken.findings += crossed
        rare = None if equation.people is None else find_rare(equation.people, taken.numbers, taken.findings)
        taken.findings += [] if rare is None else [rare]
    order = (*(field.id for field in model.fields), "horizon", "recalibration")
    return Assessment(
        model=model,
        at=at,
        label=entry.label,
        span=span,
        level=level,
        recalibration=None if chosen is None else chosen.id,
        equation=None if equation is None else equation.content.id,
        values=value_lines(
            model, entry, taken.numbers, taken.answers, taken.worked_out, {field.id for field in taken.open}
        ),
        findings=in_reading_order(taken.findings, order),
        estimate=estimate,
        vetting=vetting,
    )


def read_entry(model: Model, entry: PatientEntry, at: datetime) -> Taken:
    """Every field of the entry read and checked, and the typed values set against each other.

    Contradicting values stop even where the equation uses only one of them: one of the two is a slip.
    """
    taken = Taken({}, {}, {}, [], [])
    for field in model.fields:
        typed = entry.typed.get(field.id)
        if typed is None or not typed.text.strip():
            continue
        if says_not_measured(field, typed.text):
            taken.open.append(field)
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
    taken.findings += check_open(model, tuple(taken.open))
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


def _of_library(vetting: Vetting | None) -> tuple[Finding, ...]:
    """What goes with every number while the library is out of reach."""
    caution = "" if vetting is None else vetting.caution
    return (Finding(Grade.CAUTION, FindingCode.LIBRARY_COPY, "", caution),) if caution else ()


def _stopped(findings: Iterable[Finding]) -> bool:
    return any(finding.grade is Grade.STOP for finding in findings)


def _not_to_be_typed(field: NumberField) -> Finding:
    message = f"{field.label} is worked out from other values and is not typed for this model. Leave it empty."
    return Finding(Grade.STOP, FindingCode.UNREADABLE, field.id, message)


def _case_of(
    model: Model,
    equation: ModelEquation,
    line: Line,
    recalibration: Recalibration | None,
    level: float,
    taken: Taken,
    vetting: Vetting | None,
) -> Case:
    return Case(
        model=model,
        equation=equation,
        line=line,
        adjustment=None if recalibration is None else adjustment_of(recalibration.equations[equation.content.id]),
        level=level,
        numbers=taken.numbers,
        answers=taken.answers,
        columns=taken.columns,
        worked_out=taken.worked_out,
        compared=() if vetting is None else vetting.compared,
    )
