"""The people a model was made from, as columns of values: drawn from their description, or given row by row.

Drawn people: numpy's Generator on PCG64, seeded. Numbers are multivariate normal on the scale stated for them, a yes/no
question is answered by its log odds given what stands before it, a choice by its shares. People to whom the equation
does not apply, or for whom the model would give no number, are left out, and others drawn in their place.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.fields import NumberField, QuestionField
from clinicalc.assessment.limits import giving_limits, within_column
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.worked_out import work_out
from clinicalc.coefficients.described import list_described
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.coefficients.schema import Population
from clinicalc.covariates.transforms import Column, round_significant
from clinicalc.errors import Problem, ReconstructionRefused, UnitError
from clinicalc.units.conversion import conversion
from clinicalc.units.quantity import cross_checks

MOST_BATCHES = 50
"""So many batches of the asked size are drawn before it is said that hardly anybody fits the model."""

Mask = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class ReferencePeople:
    """Columns of shape (n,) by predictor or derived id, in the file's units, for `count` people.

    `left_out` is the share of those looked at who were left out.
    """

    columns: Mapping[str, Column]
    count: int
    left_out: float


def find_population_faults(model: Model, equation: ModelEquation, population: Population) -> Iterator[Problem]:
    """What keeps a description from being drawn from for this equation."""
    path = _population_path(equation)
    for place, number in enumerate(population.numbers):
        if not (np.isfinite(number.mean) and np.isfinite(number.sd) and number.sd > 0):
            yield Problem(
                f"{path}/numbers/{place}/sd",
                f"{quoted(number.id)} has the standard deviation {quoted(number.sd)}; it must be above 0.",
            )
    size = len(population.numbers)
    if size:
        fault = judge_matrix(population.correlations, size, "numbers of the population")
        flat = [entry for row in population.correlations for entry in row]
        if not fault and max(map(abs, flat)) > 1:
            fault = "a correlation lies outside −1 to 1."
        if fault:
            yield Problem(f"{path}/correlations", f"correlations that cannot be: {fault}")
    lacking = needed_predictors(model, equation) - set(list_described(population)) - set(_settled(equation))
    if lacking:
        names = listed(quoted(id) for id in sorted(lacking))
        yield Problem(path, f"the population does not describe {names}, and the equation needs it. Describe it.")


def draw_people(
    model: Model, equation: ModelEquation, population: Population, *, count: int, seed: int
) -> ReferencePeople:
    """`count` people of this equation, drawn from a description without faults; the same seed gives the same people.

    Raises ReconstructionRefused where hardly anybody drawn is a person for whom the equation gives a number.
    """
    rng = np.random.Generator(np.random.PCG64(seed))
    parts: list[dict[str, Column]] = []
    kept = seen = 0
    for _ in range(MOST_BATCHES):
        columns = _draw_batch(model, equation, population, count, rng)
        inside = keep_people(model, equation, columns, count)
        parts.append({id: column[inside] for id, column in columns.items()})
        kept, seen = kept + int(inside.sum()), seen + count
        if kept >= count:
            break
    else:
        raise ReconstructionRefused(
            (
                Problem(
                    _population_path(equation),
                    f"of {seen:,} people drawn only {kept:,} are people for whom the equation gives a number. Are means"
                    " and standard deviations in the file's units, or on the logarithm's scale where that is stated?",
                ),
            )
        )
    joined = {id: np.concatenate([part[id] for part in parts])[:count] for id in parts[0]}
    return ReferencePeople(_with_worked_out(model, equation, joined), count, 1.0 - kept / seen)


def take_rows(model: Model, equation: ModelEquation, rows: Mapping[str, Column]) -> ReferencePeople:
    """Those of the given people to whom the equation applies and for whom it gives a number.

    `rows` has columns of one length by predictor id (derived ids may stand beside them), in the file's units; yes/no
    as 1 and 0, a choice as the place of the answer. Raises ReconstructionRefused naming every column that is missing.
    """
    columns = {id: np.ascontiguousarray(column, dtype=np.float64) for id, column in rows.items()}
    sizes = {column.shape for column in columns.values()}
    problems = []
    if len(sizes) != 1 or len(next(iter(sizes))) != 1 or 0 in next(iter(sizes)):
        problems.append(Problem("", "the columns of the reference people must have one length, and that not nought."))
    given = {field.id for field in model.derived if field.id in columns}
    lacking = (needed_predictors(model, equation, given) | set(equation.content.applies_when)) - set(columns)
    if lacking:
        names = listed(quoted(id) for id in sorted(lacking))
        problems.append(Problem(_equation_path(equation), f"the reference people lack the columns {names}."))
    if problems:
        raise ReconstructionRefused(tuple(problems))
    size = next(iter(columns.values())).size
    whole = _with_worked_out(model, equation, columns)
    inside = keep_people(model, equation, whole, size)
    if not inside.any():
        text = "the equation gives a number for none of the reference people. Are the columns in the file's units?"
        raise ReconstructionRefused((Problem(_equation_path(equation), text),))
    kept = int(inside.sum())
    return ReferencePeople({id: column[inside] for id, column in whole.items()}, kept, 1.0 - kept / size)


def needed_predictors(model: Model, equation: ModelEquation, given: set[str] | None = None) -> set[str]:
    """Ids of the predictors that the equation's terms are made of, by way of derived values too, less those given."""
    needed: set[str] = set()
    for id in equation.uses - (given or set()):
        field = model.by_id[id]
        sources = field.sources if isinstance(field, NumberField) else ()
        needed |= {*sources} if sources else {id}
    return needed


def keep_people(model: Model, equation: ModelEquation, columns: Mapping[str, Column], size: int) -> Mask:
    """Who may stay, shape (n,): the equation applies, every number gives a number, no two values contradict."""
    inside = np.ones(size, dtype=np.bool_)
    for id, answers in equation.content.applies_when.items():
        field = model.by_id[id]
        if id in columns and isinstance(field, QuestionField):
            codes = [place for place, option in enumerate(field.options) if option.id in answers]
            inside &= np.isin(columns[id], codes)
    whole = _with_worked_out(model, equation, columns)
    for id, column in whole.items():
        found = model.by_id.get(id)
        if isinstance(found, NumberField):
            inside &= np.isfinite(column) & within_column(column, giving_limits(found))
    return inside & _agreeing(model, whole, size)


def _draw_batch(
    model: Model, equation: ModelEquation, population: Population, count: int, rng: np.random.Generator
) -> dict[str, Column]:
    columns: dict[str, Column] = {}
    scales: dict[str, Column] = {}
    size = len(population.numbers)
    if size:
        root = np.linalg.cholesky(np.array(population.correlations))
        normal = rng.standard_normal((size, count))
        for i, number in enumerate(population.numbers):
            standard = np.zeros(count)
            for j in range(i + 1):
                standard = standard + root[i, j] * normal[j]
            scales[number.id] = number.mean + number.sd * standard
            columns[number.id] = scales[number.id] if isinstance(number.log, UnsetType) else np.exp(scales[number.id])
    for answer in population.yes_no:
        odds = np.full(count, answer.intercept)
        for id, slope in answer.coefficients.items():
            odds = odds + slope * scales[id]
        share = 1.0 / (1.0 + np.exp(np.minimum(-odds, 700.0)))
        columns[answer.id] = scales[answer.id] = (rng.random(count) < share).astype(np.float64)
    for choice in () if isinstance(population.choices, UnsetType) else population.choices:
        field = model.by_id[choice.id]
        assert isinstance(field, QuestionField)
        ends = np.cumsum([choice.shares[option.id] for option in field.options])
        places = np.searchsorted(ends, rng.random(count) * ends[-1], side="right")
        columns[choice.id] = places.astype(np.float64)
    for id, answer_id in _settled(equation).items():
        if id not in columns:
            field = model.by_id[id]
            assert isinstance(field, QuestionField)
            place = next(place for place, option in enumerate(field.options) if option.id == answer_id)
            columns[id] = np.full(count, float(place))
    return columns


def _settled(equation: ModelEquation) -> dict[str, str]:
    """Questions to which everybody of this equation gives the same answer."""
    return {id: answers[0] for id, answers in equation.content.applies_when.items() if len(set(answers)) == 1}


def _with_worked_out(model: Model, equation: ModelEquation, columns: Mapping[str, Column]) -> dict[str, Column]:
    whole = dict(columns)
    for field in model.derived:
        if field.id in equation.uses and field.id not in whole:
            column = work_out(model, field, columns)
            if column is not None:
                whole[field.id] = column
    return whole


def _agreeing(model: Model, columns: Mapping[str, Column], size: int) -> Mask:
    """Who has no two values that stop the model by contradicting each other."""
    inside = np.ones(size, dtype=np.bool_)
    fields = [field for id in columns if isinstance(field := model.by_id.get(id), NumberField)]
    for check in cross_checks():
        for lower in (field for field in fields if field.quantity.id == check.lower and check.grade == "stop"):
            for upper in (field for field in fields if field.quantity.id == check.upper):
                try:
                    into = conversion(lower.quantity, lower.unit, upper.unit, lower.factor)
                except UnitError:
                    continue
                low, high = round_significant(into.apply(columns[lower.id])), round_significant(columns[upper.id])
                inside &= (low <= high) if check.may_equal else (low < high)
    return inside


def _equation_path(equation: ModelEquation) -> str:
    return f"/model/equations/{equation.place}"


def _population_path(equation: ModelEquation) -> str:
    own = not isinstance(equation.content.population, UnsetType)
    return f"{_equation_path(equation)}/population" if own else "/model/population"
