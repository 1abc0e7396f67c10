"""The screening of one fit: its terms and its outcome among the people used, and what is missing among all of them."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from msgspec import UnsetType

from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.coefficients.schema import ChoicePredictor, Term
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, Codes
from clinicalc.covariates.design import DesignTerm
from clinicalc.development.study_people import Column, FitPeople, predictors_of
from clinicalc.estimation.sample_size import R2Origin, SampleSize
from clinicalc.estimation.screened import Screened, ScreenedColumn, ScreenedOutcome
from clinicalc.estimation.screening import StatedR2, minimum_size, screen


@dataclass(frozen=True, slots=True)
class Screening:
    """What was found, stops first; how many people lack each predictor, by id ("" for the outcome); people needed."""

    found: tuple[Screened, ...]
    missing: Mapping[str, int]
    minimum: SampleSize | None = None


def screen_fit(
    model: Model,
    equations: Sequence[ModelEquation],
    people: FitPeople,
    cohort: CheckedCohort,
    r2: float | None = None,
    *,
    horizon: float | None = None,
) -> Screening:
    """Everything to be known of a fit; `r2` is its apparent Cox-Snell R2 where it has been made already.

    Columns are named after terms; where values are missing or levels rare, after predictors.
    """
    waiting = equations[0].content.competing_events.handled == "subdistribution"
    whole = _outcome_of(cohort, people.rows, horizon, waiting)
    terms = [term for term in equations[0].terms if not term.fixed]
    levels = _levels(model)
    values = [
        ScreenedColumn(id, people.columns[id], levels.get(id, ())) for id in predictors_of(model, tuple(equations))
    ]
    stated = None if r2 is None else StatedR2(r2, R2Origin.APPARENT)
    found = screen(
        list(_columns_of(terms, people)),
        whole,
        categories=list(_categories(model, equations[0].content.terms, people)),
        measured=values,
        r2=stated,
    )
    missing = {column.name: int(np.isnan(column.values).sum()) for column in values}
    missing[""] = int((~np.isfinite(whole.events)).sum())
    minimum = minimum_size(len(terms), _outcome_of(cohort, people.used, horizon, waiting), stated)
    return Screening(found, {id: count for id, count in missing.items() if count}, minimum)


def _columns_of(terms: Sequence[DesignTerm], people: FitPeople) -> Iterator[ScreenedColumn]:
    """Each term for everybody to whom the fit applies; not known where a value that it is made of is not."""
    with np.errstate(all="ignore"):
        for term in terms:
            used = tuple(dict.fromkeys(factor.of for factor in term.factors))
            unknown = np.logical_or.reduce([np.isnan(people.columns[id]) for id in used])
            yield ScreenedColumn(term.id, np.where(unknown, np.nan, term.values(people.columns)), made_of=used)


def _categories(model: Model, terms: Sequence[Term], people: FitPeople) -> Iterator[ScreenedColumn]:
    """The choices of which every answer but one has a term of its own."""
    for predictor in model.content.predictors:
        if not isinstance(predictor, ChoicePredictor) or predictor.id not in people.columns:
            continue
        told = {answer for term in terms if (answer := _answer_of(term, predictor.id))}
        if len(told) == len(predictor.choices) - 1:
            yield ScreenedColumn(
                predictor.id, people.columns[predictor.id], _levels(model)[predictor.id], (predictor.id,)
            )


def _levels(model: Model) -> dict[str, tuple[str, ...]]:
    """The answers of every choice in words, by its id: its codes are no numbers that could lie far out."""
    choices = [predictor for predictor in model.content.predictors if isinstance(predictor, ChoicePredictor)]
    return {choice.id: tuple(answer.label for answer in choice.choices) for choice in choices}


def _answer_of(term: Term, choice: str) -> str:
    """The one answer to the choice for which the term is 1, "" where it is of another form."""
    if isinstance(term.product, UnsetType) or len(term.product) != 1 or term.fixed is True:
        return ""
    factor = term.product[0]
    steps = () if isinstance(factor.steps, UnsetType) else factor.steps
    if factor.of != choice or len(steps) != 1 or isinstance(steps[0].is_, UnsetType) or len(steps[0].is_) != 1:
        return ""
    return steps[0].is_[0]


def _outcome_of(cohort: CheckedCohort, rows: Codes, horizon: float | None, waiting: bool) -> ScreenedOutcome:
    """The outcome of these rows; where the fit is of a subdistribution, whoever had a competing event stays, `waiting`.

    He stays until the last event, so that events for each person's time come to the share who have the event.
    """
    outcome = cohort.outcome
    if isinstance(outcome, BinaryOutcome):
        return ScreenedOutcome(outcome.y[rows])
    status = outcome.status[rows]
    events: Column = np.where(np.isnan(status), np.nan, status == 1)
    entry = None if outcome.entry is None else outcome.entry[rows]
    times = outcome.times[rows]
    if waiting:
        times = np.where(status == 2, np.maximum(times, times[status == 1].max(initial=0.0)), times)
    return ScreenedOutcome(events, times, entry, horizon)
