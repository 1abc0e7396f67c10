"""The people of a fit with what they lack filled in, several times over: each set another ground for the same fit.

Numbers and answers of yes and no are filled in, from one another, from choices and from the outcome: a binary outcome
itself; of a time the kinds of event and the Nelson-Aalen hazard up to it (White & Royston, Stat Med 2009;28:1982). Who
lacks a choice of several answers, the outcome, or what decides which equation applies is left out. Values worked out
and terms are made afterwards, from what was filled in; where a term is a product, the imputation has the product of
the other value with the outcome.
"""

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.schema import ChoicePredictor, YesNoPredictor
from clinicalc.cohort.checked import BinaryOutcome, Codes, Column, SurvivalOutcome
from clinicalc.development.fit_ground import Ground
from clinicalc.development.study_people import FitPeople, fillable_of, predictors_of, work_out_columns
from clinicalc.development.study_tables import ImputationTable
from clinicalc.errors import DescriptionRefused, Problem
from clinicalc.estimation.chained_equations import ChainColumn, ChainPlan, fill_in
from clinicalc.estimation.nelson_aalen import find_hazards
from clinicalc.estimation.unfillable import FoundUnfillable, Unfillable, find_unfillable

Array = NDArray[np.float64]

_OUTCOME = "the outcome"
"""Names of columns that are no predictors have spaces, which ids have not."""


@dataclass(frozen=True, slots=True, eq=False)
class Filling:
    """The grounds of the sets, whose people all have everything, and how they came about.

    `filled` counts the values filled in, and `mixing` is the ratio of Gelman & Rubin, by predictor id.
    """

    grounds: tuple[Ground, ...]
    table: ImputationTable
    filled: Mapping[str, int]
    not_filled: Mapping[str, int]
    rounds: int
    mixing: Mapping[str, float]
    settled: bool


def lacks_values(ground: Ground) -> bool:
    """Whether somebody the fit is made from lacks a value, which then has to be filled in."""
    people = ground.people
    return any(np.isnan(people.columns[id][people.complete]).any() for id in _fillable(ground))


def fill_values(ground: Ground, table: ImputationTable) -> Filling:
    """The sets. Raises DescriptionRefused for values that nothing can tell, and Stopped."""
    ids, columns = zip(*_columns_of(ground), strict=True)
    columns = _with_products(ground, ids, columns)
    problems = tuple(_say_unfillable(ground, ids, found) for found in find_unfillable(columns))
    if problems:
        raise DescriptionRefused(ground.plan.id, problems)

    def tell(done: int, of: int) -> None:
        ground.course.go_on()
        ground.course.say(f"Filling in values for {ground.plan.id}", done, of)

    with np.errstate(all="ignore"):
        found = fill_in(columns, ChainPlan(table.sets, table.rounds, table.seed), tell)
    return Filling(
        grounds=tuple(_ground_of(ground, ids, filled) for filled in found.sets),
        table=table,
        filled={ids[place]: int(np.isnan(columns[place].values).sum()) for place in sorted(found.mixing)},
        not_filled=dict(_count_not_filled(ground)),
        rounds=found.rounds,
        mixing={ids[place]: found.mixing[place] for place in sorted(found.mixing)},
        settled=found.settled,
    )


def _fillable(ground: Ground) -> tuple[str, ...]:
    return fillable_of(ground.model, ground.equations)


def _columns_of(ground: Ground) -> Iterator[tuple[str, ChainColumn]]:
    """Every column of the imputation with its name: predictors, a column for each answer of a choice, the outcome."""
    people = ground.people
    fillable = _fillable(ground)
    for predictor in ground.model.content.predictors:
        if predictor.id not in predictors_of(ground.model, ground.equations):
            continue
        values = np.ascontiguousarray(people.columns[predictor.id][people.complete])
        if predictor.id in fillable:
            yield predictor.id, ChainColumn(values, isinstance(predictor, YesNoPredictor))
            continue
        answers = [one.id for one in predictor.choices] if isinstance(predictor, ChoicePredictor) else ["no", "yes"]
        for answer in np.unique(values)[1:]:
            yield f"{predictor.id} = {answers[int(answer)]}", ChainColumn((values == answer).astype(np.float64))
    for name, column in _outcome_columns(ground):
        if np.ptp(column) > 0:
            yield name, ChainColumn(column)


def _outcome_columns(ground: Ground) -> Iterator[tuple[str, Column]]:
    outcome, used = ground.cohort.outcome, ground.people.used
    if isinstance(outcome, BinaryOutcome):
        yield _OUTCOME, outcome.y[used]
        return
    assert isinstance(outcome, SurvivalOutcome)
    times, status = outcome.times[used], outcome.status[used]
    entry = None if outcome.entry is None else outcome.entry[used]
    for kind, name in ((1, _OUTCOME), (2, "the competing event")):
        if (events := status == kind).any():
            yield name, events.astype(np.float64)
            yield f"the hazard of {name}", find_hazards(times, events, entry)


def _with_products(ground: Ground, ids: tuple[str, ...], columns: tuple[ChainColumn, ...]) -> tuple[ChainColumn, ...]:
    """For each value that goes with another in a term, that other's product with the outcome, which tells of it."""
    places = {id: place for place, id in enumerate(ids)}
    if _OUTCOME not in places:  # nobody has it, or everybody, which is said of the fit
        return columns
    asked: dict[int, set[tuple[int, int]]] = {}
    for term in ground.equations[0].terms:
        used = [places[id] for id in dict.fromkeys(factor.of for factor in term.factors) if id in places]
        for one in used:
            asked.setdefault(one, set()).update((other, places[_OUTCOME]) for other in used if other != one)
    return tuple(replace(column, products=tuple(sorted(asked.get(place, ())))) for place, column in enumerate(columns))


def _ground_of(ground: Ground, ids: tuple[str, ...], filled: Mapping[int, Array]) -> Ground:
    """The same ground with people who lack nothing: those the fit is made from, alone."""
    people = ground.people
    taken = predictors_of(ground.model, ground.equations)
    columns: dict[str, Column] = {id: np.ascontiguousarray(people.columns[id][people.complete]) for id in taken} | {
        ids[place]: values for place, values in filled.items()
    }
    whole = work_out_columns(ground.model, ground.equations, columns)
    every = np.ones(len(people.used), dtype=np.bool_)
    return replace(ground, people=FitPeople(people.used, people.stratum[people.complete], whole, every))


def _count_not_filled(ground: Ground) -> Iterator[tuple[str, int]]:
    """How many of those left out lack what is not filled in, by its id; "" is the outcome."""
    people = ground.people
    out: Codes = people.rows[~people.complete]
    outcome = ground.cohort.outcome
    if isinstance(outcome, BinaryOutcome):
        lacking = np.isnan(outcome.y)
    else:
        lacking = np.isnan(outcome.times) | np.isnan(outcome.status)
        lacking |= np.zeros(len(lacking), dtype=np.bool_) if outcome.entry is None else np.isnan(outcome.entry)
    counts = {"": int(lacking[out].sum())}
    for id, column in people.columns.items():
        if id not in _fillable(ground):
            counts[id] = int((~np.isfinite(column[~people.complete])).sum())
    for derived in ground.model.content.derived:
        if derived.id in counts:  # who lacks an input lacks the value too, and is filled in
            inputs = [people.columns[id] for id in derived.inputs.values() if id in people.columns]
            known = np.logical_and.reduce([np.isfinite(column) for column in inputs])
            counts[derived.id] = int((~np.isfinite(people.columns[derived.id]) & known & ~people.complete).sum())
    yield from ((id, count) for id, count in counts.items() if count)


def _say_unfillable(ground: Ground, ids: tuple[str, ...], found: FoundUnfillable) -> Problem:
    name, path = quoted(ids[found.place]), f"estimate.{ground.plan.id}"
    people = f"{len(ground.people.used):,}"
    match found.why:
        case Unfillable.NOBODY:
            what = (
                f"{name} is missing for all {people} people, so nothing can be filled in. Check which column is read "
                "for it, its unit and its codes for missing."
            )
        case Unfillable.CONSTANT:
            what = (
                f"{name} is {found.value:g} for everybody who has it ({found.known:,} of {people} people), so that "
                "nothing tells what the others have. Leave it out, or check how its values are read."
            )
        case Unfillable.FEW:
            what = (
                f"only {found.known:,} of {people} people have {name}, and it would be told from {len(found.others)} "
                "other columns, the outcome among them. Leave it or others out, or bring in more people who have it."
            )
        case Unfillable.FOLLOWS:
            others = listed(quoted(ids[place]) for place in found.others)
            what = (
                f"{name} follows exactly from {others}, so that filling it in would only repeat what they say. Leave "
                "it or one of them out."
            )
        case Unfillable.APART:
            what = (
                f"{name} and {quoted(ids[found.others[0]])} are never both known of the same person ({people} people), "
                "so that nothing tells how they go together. If they measure the same, make one column of them; if "
                "not, leave one out."
            )
    return Problem(path, what)
