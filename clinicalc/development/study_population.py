"""The people of a fit described by their moments, as the file has it: for values that will not be measured.

Numbers by mean, SD and correlations, as natural logarithms where these are closer to symmetric; yes/no questions by a
logistic row given the numbers and the questions before them; choices by their shares.
"""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import ModelEquation
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.coefficients.schema import ChoicePredictor, NumberPredictor, YesNoPredictor
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fitted import rows_of
from clinicalc.development.study_people import equations_of, predictors_of
from clinicalc.development.study_terms import Tree, parts
from clinicalc.errors import FitRefused
from clinicalc.estimation.logistic import fit_logistic

Array = NDArray[np.float64]

SKEWED = 1.0
"""Skewness from which the logarithm of a number is described instead, where that is less skewed."""


@dataclass(frozen=True, slots=True, eq=False)
class _Number:
    id: str
    values: Array
    logged: bool


def with_populations(fitted: FittedStudy, model: Tree) -> tuple[Tree, tuple[str, ...]]:
    """The model with its people described, for each equation where there are several; and what could not be described.

    What a study describes itself stays.
    """
    if model.get("population") is not None:
        return model, ()
    described: dict[str, Tree | str] = {}
    for plan in fitted.study.fits:
        for place, equation in enumerate(equations_of(fitted.model, plan)):
            described[equation.content.id] = _describe(fitted, plan.id, place, equation)
    remarks = tuple(text for text in described.values() if isinstance(text, str))
    if len(described) == 1:
        only = next(iter(described.values()))
        return (model if isinstance(only, str) else {**model, "population": only}), remarks
    equations = []
    for part in parts(model, "equations"):
        found = described.get(str(part.get("id")), "")
        equations.append(part if isinstance(found, str) or "population" in part else {**part, "population": found})
    return {**model, "equations": equations}, remarks


def _describe(fitted: FittedStudy, fit: str, place: int, equation: ModelEquation) -> Tree | str:
    people = fitted.people[fit]
    rows = people.complete & (people.stratum == place)
    predictors = fitted.model.content.predictors
    used = predictors_of(fitted.model, equations_of(fitted.model, next(p for p in fitted.study.fits if p.id == fit)))
    values = {id: _whole(fitted, fit, rows, id) for id in used}
    numbers = [_scale(p.id, values[p.id]) for p in predictors if isinstance(p, NumberPredictor) and p.id in values]
    numbers = [number for number in numbers if np.ptp(number.values) > 0]
    answers = [p.id for p in predictors if isinstance(p, YesNoPredictor) and p.id in values]
    choices = [p for p in predictors if isinstance(p, ChoicePredictor) and p.id in values]
    correlations = _correlate(numbers)
    if numbers and judge_matrix(rows_of(correlations), len(numbers), "numbers"):
        return f"The people of {equation.content.id} are not described: two of their numbers follow from one another."
    filled = f", over {len(fitted.sets[fit])} sets of filled-in values" if fitted.sets[fit] else ""
    return {
        "source": f"The {int(rows.sum()):,} people this was fitted to, described when it was packaged{filled}.",
        "numbers": [_moments(number) for number in numbers],
        "correlations": [list(row) for row in rows_of(correlations)],
        "yes_no": _answer_rows(answers, values, numbers),
        "choices": [_shares(choice, values[choice.id]) for choice in choices],
    }


def _whole(fitted: FittedStudy, fit: str, rows: NDArray[np.bool_], id: str) -> Array:
    """The values of these people; where some were filled in, those of all sets one after the other."""
    people = fitted.people[fit]
    if not fitted.sets[fit]:
        return people.columns[id][rows]
    return np.concatenate([each.columns[id][rows[people.complete]] for each in fitted.sets[fit]])


def _scale(id: str, values: Array) -> _Number:
    if values.min() > 0 and _skewness(values) > SKEWED:
        logs = np.log(values)
        if abs(_skewness(logs)) < _skewness(values):
            return _Number(id, logs, logged=True)
    return _Number(id, values, logged=False)


def _skewness(values: Array) -> float:
    away = values - values.mean()
    spread = np.sqrt((away * away).mean())
    return float((away * away * away).mean() / (spread * spread * spread)) if spread > 0 else 0.0


def _moments(number: _Number) -> Tree:
    found: Tree = {"id": number.id, "mean": float(number.values.mean()), "sd": float(number.values.std(ddof=1))}
    return {**found, "log": "natural"} if number.logged else found


def _correlate(numbers: Sequence[_Number]) -> Array:
    if not numbers:
        return np.empty((0, 0))
    found = np.atleast_2d(np.corrcoef(np.stack([number.values for number in numbers])))
    np.fill_diagonal(found, 1.0)
    return np.asarray(found, dtype=np.float64)


def _answer_rows(ids: Sequence[str], values: dict[str, Array], numbers: Sequence[_Number]) -> list[Tree]:
    known = {number.id: number.values for number in numbers}
    rows: list[Tree] = []
    for id in ids:
        names = list(known)
        rows.append(_answer_row(id, values[id], names, [known[name] for name in names]))
        if np.ptp(values[id]) > 0:
            known[id] = values[id]
    return rows


def _answer_row(id: str, y: Array, names: Sequence[str], columns: Sequence[Array]) -> Tree:
    """A logistic row; by its share alone where no such fit can be made."""
    if names:
        try:
            fit = fit_logistic(y, np.column_stack(columns))
        except FitRefused:
            pass
        else:
            slopes = dict(zip(names, fit.coefficients[1:].tolist(), strict=True))
            return {"id": id, "intercept": float(fit.coefficients[0]), "coefficients": slopes}
    yes = float(y.sum())
    odds = (yes + 0.5) / (len(y) - yes + 0.5)  # finite where all answer alike
    return {"id": id, "intercept": float(np.log(odds)), "coefficients": {}}


def _shares(choice: ChoicePredictor, values: Array) -> Tree:
    counts = [int((values == place).sum()) for place in range(len(choice.choices))]
    shares = {answer.id: count / len(values) for answer, count in zip(choice.choices, counts, strict=True)}
    return {"id": choice.id, "shares": shares}
