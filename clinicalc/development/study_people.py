"""The people each fit of a study is made from: those to whom its equations apply, and whose values are complete."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import Model, ModelEquation, prepare_model
from clinicalc.assessment.worked_out import work_out
from clinicalc.coefficients.reader import ReadFile
from clinicalc.coefficients.schema import ChoicePredictor, CoefficientFile, ModelContent
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, SurvivalOutcome
from clinicalc.covariates.design import DesignTerm, answer_codes
from clinicalc.development.study_strata import FitPlan

Column = NDArray[np.float64]
Codes = NDArray[np.int64]
Mask = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class FitPeople:
    """The m people to whom one fit of a study applies; `rows` are their places in the cohort.

    `stratum` (m,) is the place of each one's equation among those of the fit. `columns` has, with NaN where missing,
    the predictors used and the values worked out from them. `complete` are the n of them that have every value and the
    outcome, or lack only values that are filled in: a fit is made from these. Columns have what people had; what was
    filled in stands in the people of each set, who lack nothing.
    """

    rows: Codes
    stratum: Codes
    columns: Mapping[str, Column]
    complete: Mask

    @property
    def used(self) -> Codes:
        """The places in the cohort of those the fit is made from, (n,)."""
        return self.rows[self.complete]


def ready_model(name: str, content: ModelContent) -> Model:
    """The content of a study, ready to work out values and terms; its figures may be stand-ins."""
    return prepare_model(ReadFile(name, CoefficientFile("clinicalc.coefficients/1", content, ()), b"", ""))


def equations_of(model: Model, plan: FitPlan) -> tuple[ModelEquation, ...]:
    """The equations that a fit fills, in their order."""
    return tuple(equation for equation in model.equations if equation.content.id in plan.equations)


def choose_people(model: Model, plan: FitPlan, cohort: CheckedCohort, *, fill: bool = False) -> FitPeople:
    """Those to whom one of the fit's equations applies, with everything its terms are made of.

    With `fill`, those who lack only what can be filled in are `complete` too.
    """
    equations = equations_of(model, plan)
    stratum = np.full(cohort.rows, -1, dtype=np.int64)
    codes = answer_codes(model.content)
    for place, equation in enumerate(equations):
        applies = np.ones(cohort.rows, dtype=np.bool_)
        for id, answers in equation.content.applies_when.items():
            applies &= np.isin(cohort.columns[id], [codes[id][answer] for answer in answers])
        stratum[applies] = place
    rows = np.flatnonzero(stratum >= 0)
    columns = _columns_of(model, equations, cohort, rows)
    complete = ~_outcome_missing(cohort)[rows]
    gaps = _gaps_of(model, equations, columns) if fill else {}
    for id, column in columns.items():
        complete &= np.isfinite(column) | gaps.get(id, False)
    if cohort.cluster is not None and plan.table.covariance_kind == "cluster":
        complete &= cohort.cluster[rows] >= 0
    return FitPeople(rows, stratum[rows], columns, complete)


def predictors_of(model: Model, equations: tuple[ModelEquation, ...]) -> tuple[str, ...]:
    """Ids of the predictors that the terms are made of, also by way of a derived value, or that choose the equation."""
    named = set[str]()
    for equation in equations:
        named |= equation.uses | set(equation.content.applies_when)
    for derived in model.content.derived:
        if derived.id in named:
            named |= set(derived.inputs.values())
    return tuple(predictor.id for predictor in model.content.predictors if predictor.id in named)


def term_columns(terms: tuple[DesignTerm, ...], people: FitPeople) -> tuple[Column, ...]:
    """Each term of those the fit is made from, shape (n,), as computed for a patient."""
    used = {factor.of for term in terms for factor in term.factors}
    whole = bool(people.complete.all())
    columns = {
        id: column if whole else np.ascontiguousarray(column[people.complete])
        for id, column in people.columns.items()
        if id in used
    }
    with np.errstate(all="ignore"):
        return tuple(term.values(columns) for term in terms)


def fillable_of(model: Model, equations: tuple[ModelEquation, ...]) -> tuple[str, ...]:
    """Ids of the predictors used whose missing values can be filled in: numbers, and yes or no.

    A choice of several answers is not, and neither is what decides which equation applies.
    """
    used = predictors_of(model, equations)
    deciding = {id for equation in equations for id in equation.content.applies_when}
    return tuple(
        predictor.id
        for predictor in model.content.predictors
        if predictor.id in used and predictor.id not in deciding and not isinstance(predictor, ChoicePredictor)
    )


def _gaps_of(model: Model, equations: tuple[ModelEquation, ...], columns: Mapping[str, Column]) -> dict[str, Mask]:
    """Where each column lacks what can be filled in, or what is worked out from something that can, (m,)."""
    gaps = {id: np.isnan(columns[id]) for id in fillable_of(model, equations)}
    for derived in model.content.derived:
        if derived.id in columns:
            masks = [gaps[id] for id in derived.inputs.values() if id in gaps]
            gaps[derived.id] = np.logical_or.reduce(masks) if masks else np.zeros(len(columns[derived.id]), np.bool_)
    return gaps


def _columns_of(
    model: Model, equations: tuple[ModelEquation, ...], cohort: CheckedCohort, rows: Codes
) -> dict[str, Column]:
    columns = {id: np.ascontiguousarray(cohort.columns[id][rows]) for id in predictors_of(model, equations)}
    return work_out_columns(model, equations, columns)


def work_out_columns(
    model: Model, equations: tuple[ModelEquation, ...], predictors: Mapping[str, Column]
) -> dict[str, Column]:
    """The columns of the predictors used, and with them the values that the equations work out from them."""
    columns = dict(predictors)
    for derived in model.derived:
        if any(derived.id in equation.uses for equation in equations):
            found = work_out(model, derived, columns)
            assert found is not None  # all it is made of is among the predictors used
            columns[derived.id] = found
    return columns


def _outcome_missing(cohort: CheckedCohort) -> Mask:
    outcome = cohort.outcome
    if isinstance(outcome, BinaryOutcome):
        return np.isnan(outcome.y)
    assert isinstance(outcome, SurvivalOutcome)
    missing = np.isnan(outcome.times) | np.isnan(outcome.status)
    return missing if outcome.entry is None else missing | np.isnan(outcome.entry)
