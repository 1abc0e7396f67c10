"""What the assumed correlations of the reference people do to a band: the same patient under two other assumptions."""

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

import msgspec
import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.model import Model, ModelEquation, prepare_model
from clinicalc.assessment.worked_out import work_out
from clinicalc.coefficients.described import population_of
from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.reader import ReadFile
from clinicalc.coefficients.rules.coverage import select_equations
from clinicalc.coefficients.schema import CoefficientFile, Matrix, ModelContent, Population, PopulationAnswer
from clinicalc.covariates.design import answer_codes, design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.development.reconstruction_bands import gather_people, make_bare_model, rebuild_bands
from clinicalc.development.reconstruction_plan import ReconstructionPlan, StatedPatient
from clinicalc.errors import Problem, ReconstructionRefused
from clinicalc.prediction.predict import predict

LEVEL = 0.95
STRONGER = (1.5, 1.4, 1.3, 1.2, 1.1)
"""Correlations are multiplied by the first of these with which they can still be."""
STRONGEST = 0.95


@dataclass(frozen=True, slots=True)
class CorrelationCase:
    """The 95 % band of one patient under one assumption, at the model's last horizon."""

    equation: str
    patient: str
    words: str
    probability: float
    lower: float
    upper: float


def judge_correlations(content: ModelContent, plan: ReconstructionPlan) -> tuple[CorrelationCase, ...]:
    """For each of the plan's patients the band as assumed, with nothing related to anything, and with more of it.

    "Nothing related": all correlations nought, and each yes/no question answered yes with the share that it has among
    the reference people, whatever their other values. "More": all correlations times 1.5, or times the largest smaller
    factor of 1.4 to 1.1 with which they can still be. Raises ReconstructionRefused, also where there is no description
    whose correlations could be changed.
    """
    bare = make_bare_model(content, plan)
    if plan.rows is not None or any(population_of(content, e.content) is None for e in bare.equations):
        text = "there are no assumed correlations to be tried: the reference people were given, or not described."
        raise ReconstructionRefused((Problem("", text),))
    quiet = replace(plan, patients=())
    factor = _find_factor(content)
    variants = [("as assumed", content), ("nothing related to anything", _unrelated(bare, quiet))]
    if factor is not None:
        variants.append((f"correlations times {factor:g}", _change(content, lambda p: _multiply(p, factor))))
    cases = []
    for words, variant in variants:
        made = rebuild_bands(variant, quiet)
        model = prepare_model(ReadFile(made.id, CoefficientFile("clinicalc.coefficients/1", made, ()), b"", ""))
        cases += [_judge(model, patient, words) for patient in plan.patients]
    return tuple(cases)


def _judge(model: Model, patient: StatedPatient, words: str) -> CorrelationCase:
    answers = {id: value for id, value in patient.values.items() if isinstance(value, str)}
    applying = select_equations(model.content, answers)
    if len(applying) != 1:
        raise ReconstructionRefused((Problem("", f"no one equation applies to {quoted(patient.words)}."),))
    equation = next(e for e in model.equations if e.content is applying[0])
    design = design_columns(equation.terms, _columns_of(model, equation, patient))
    line = max(equation.lines, key=lambda one: one.span.days)
    result = predict(line, design, level=LEVEL)
    assert result.lower is not None
    assert result.upper is not None
    return CorrelationCase(
        equation.content.id,
        patient.words,
        words,
        float(result.probability[0]),
        float(result.lower[0]),
        float(result.upper[0]),
    )


def _columns_of(model: Model, equation: ModelEquation, patient: StatedPatient) -> Mapping[str, Column]:
    codes = answer_codes(model.content)
    columns: dict[str, Column] = {}
    for id, value in patient.values.items():
        field = model.by_id.get(id)
        if isinstance(value, str) and isinstance(field, QuestionField) and value in codes.get(id, {}):
            columns[id] = np.array([codes[id][value]])
        elif isinstance(field, NumberField) and not isinstance(value, str):
            columns[id] = np.array([float(value)])
        else:
            text = f"{quoted(patient.words)}: {quoted(value)} is no value of {quoted(id)}."
            raise ReconstructionRefused((Problem("", text),))
    for field in model.derived:
        if field.id in equation.uses and field.id not in columns:
            column = work_out(model, field, columns)
            if column is not None:
                columns[field.id] = column
    lacking = equation.uses - set(columns)
    if lacking:
        names = ", ".join(quoted(id) for id in sorted(lacking))
        raise ReconstructionRefused((Problem("", f"{quoted(patient.words)} lacks {names}."),))
    return columns


def _change(content: ModelContent, change: Callable[[Population], Population]) -> ModelContent:
    """The model with every population changed, its own and its equations'."""
    equations = tuple(
        e if isinstance(e.population, UnsetType) else msgspec.structs.replace(e, population=change(e.population))
        for e in content.equations
    )
    own = None if content.population is None else change(content.population)
    return msgspec.structs.replace(content, equations=equations, population=own)


def _unrelated(model: Model, plan: ReconstructionPlan) -> ModelContent:
    """Each equation with a population of its own in which nothing is related; shares are those of the people drawn."""
    equations = []
    for equation in model.equations:
        population = population_of(model.content, equation.content)
        people = gather_people(model, equation, plan)
        assert population is not None
        assert people is not None
        answers = []
        for row in population.yes_no:
            share = float(people.columns[row.id].mean())
            inside = min(max(share, 0.5 / people.count), 1.0 - 0.5 / people.count)
            answers.append(PopulationAnswer(row.id, float(np.log(inside / (1.0 - inside))), {}))
        size = len(population.numbers)
        changed = msgspec.structs.replace(population, correlations=_matrix(np.eye(size)), yes_no=tuple(answers))
        equations.append(msgspec.structs.replace(equation.content, population=changed))
    return msgspec.structs.replace(model.content, equations=tuple(equations))


def _multiply(population: Population, factor: float) -> Population:
    raised = np.clip(factor * np.array(population.correlations), -STRONGEST, STRONGEST)
    np.fill_diagonal(raised, 1.0)
    return msgspec.structs.replace(population, correlations=_matrix(raised))


def _find_factor(content: ModelContent) -> float | None:
    every = [e.population for e in content.equations if not isinstance(e.population, UnsetType)]
    every += [] if content.population is None else [content.population]
    for factor in STRONGER:
        raised = [np.array(_multiply(population, factor).correlations) for population in every if population.numbers]
        if all(np.linalg.eigvalsh(one)[0] > 1e-6 for one in raised):
            return factor
    return None


def _matrix(values: NDArray[np.float64]) -> Matrix:
    return tuple(tuple(float(entry) for entry in row) for row in values)
