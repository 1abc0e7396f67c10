"""The band of a published model that prints intervals of single coefficients and no covariance.

The correlation of coefficient estimates is that of the inverse information, and the information of a fit is the
covariance of its design terms weighted with the risk. So, with reference people like those of the paper: w_i the risk
predicted by the horizon (cloglog) or p_i(1 - p_i) (logit); c the weighted mean of the terms; S their weighted
covariance; R the inverse of S scaled to a unit diagonal; V = D R D with D the printed standard errors;
var = a + (x - c)'V(x - c), a the variance of the baseline. Approximate, and said to be so wherever it is shown.
"""

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace

import msgspec
import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import Model, ModelEquation, prepare_model
from clinicalc.coefficients.described import population_of
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.reader import ReadFile
from clinicalc.coefficients.rules import check_model
from clinicalc.coefficients.schema import (
    AtCentre,
    CoefficientFile,
    CovarianceBand,
    Derivation,
    DrawsBand,
    Equation,
    ModelContent,
    NoBand,
    ReconstructedBand,
    RobustBand,
)
from clinicalc.coefficients.spans import span_of
from clinicalc.covariates.design import design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.development.reconstruction_baseline import BaselineVariance, find_baseline_variance
from clinicalc.development.reconstruction_intervals import StandardError, take_standard_errors
from clinicalc.development.reconstruction_plan import FEWEST_PEOPLE, EquationPlan, ReconstructionPlan
from clinicalc.development.reconstruction_rougher import find_rougher_faults, weigh_at_means
from clinicalc.development.reconstruction_words import word_assumptions
from clinicalc.development.reference_people import (
    ReferencePeople,
    draw_people,
    find_population_faults,
    take_rows,
)
from clinicalc.errors import Problem, ReconstructionRefused
from clinicalc.prediction.line import Line
from clinicalc.prediction.links import complement, probability
from clinicalc.prediction.predict import linear_predictor

Array = NDArray[np.float64]

SMALLEST_EIGENVALUE = 1e-9
"""Of the weighted correlations of the terms: below it two terms say the same of everybody."""


_NOT_YET = re.compile(r"^/model/worked_examples|^/model/equations/\d+/terms/\d+/interval")


@dataclass(frozen=True, slots=True, eq=False)
class Weighed:
    """For one horizon: the centre of the band, the correlations of the estimates there, and the mean weight."""

    centre: Array
    correlations: Array
    mean_weight: float


def rebuild_bands(content: ModelContent, plan: ReconstructionPlan) -> ModelContent:
    """The model with a reconstructed band at every equation, its assumptions beside it.

    V is one matrix an equation, its correlations those at the longest horizon; centre and variance are each horizon's
    own. Raises ReconstructionRefused with everything that is lacking in any equation.
    """
    model = make_bare_model(content, plan)
    problems: list[Problem] = []
    equations = []
    for equation in model.equations:
        try:
            equations.append(_reconstruct(model, equation, plan))
        except ReconstructionRefused as refused:
            problems += refused.problems
    if problems:
        raise ReconstructionRefused(tuple(problems))
    return msgspec.structs.replace(content, equations=tuple(equations))


def make_bare_model(content: ModelContent, plan: ReconstructionPlan) -> Model:
    """The model without any band, ready to predict. Raises ReconstructionRefused where plan or content forbid it."""
    problems = list(_find_plan_faults(content, plan))
    none = NoBand("It is being rebuilt.")
    bare = msgspec.structs.replace(
        content, equations=tuple(msgspec.structs.replace(e, uncertainty=none) for e in content.equations)
    )
    # worked examples may state limits of the band that is still to be made; intervals are judged by themselves
    problems += [fault for fault in check_model(bare) if not _NOT_YET.search(fault.path)]
    if problems:
        for place, equation in enumerate(content.equations):
            problems += take_standard_errors(equation, place, plan.of(equation.id))[1]
        raise ReconstructionRefused(tuple(problems))
    return prepare_model(ReadFile(content.id, CoefficientFile("clinicalc.coefficients/1", bare, ()), b"", ""))


def gather_people(model: Model, equation: ModelEquation, plan: ReconstructionPlan) -> ReferencePeople | None:
    """The reference people of an equation; None where nobody described them. Raises ReconstructionRefused."""
    if plan.rows is not None:
        return take_rows(model, equation, plan.rows.columns)
    population = population_of(model.content, equation.content)
    if population is None:
        return None
    problems = tuple(find_population_faults(model, equation, population))
    if problems:
        raise ReconstructionRefused(problems)
    return draw_people(model, equation, population, count=plan.people, seed=plan.seed)


def _reconstruct(model: Model, equation: ModelEquation, plan: ReconstructionPlan) -> Equation:
    content = equation.content
    own = _with_people(model.content, plan.of(content.id))
    errors, faults = take_standard_errors(content, equation.place, own)
    problems = list(faults)
    people: ReferencePeople | None = None
    weighed: list[Weighed] = []
    try:
        people = gather_people(model, equation, plan)
        if people is None:
            problems += find_rougher_faults(model, equation, own)
        else:
            weighed = [_weigh(equation, line, people) for line in equation.lines]
    except ReconstructionRefused as refused:
        problems += refused.problems
    if problems:
        raise ReconstructionRefused(tuple(problems))
    if people is None:
        weighed = [Weighed(*weigh_at_means(equation, line, own)) for line in equation.lines]
    baselines = [
        find_baseline_variance(content, equation.place, horizon, own, part.mean_weight, plan.survival_limits)
        for horizon, part in zip(content.horizons, weighed, strict=True)
    ]
    assumptions = word_assumptions(model, equation, plan, people, errors, [part.because for part in baselines])
    band = _band(content, errors, weighed, baselines, assumptions)
    return msgspec.structs.replace(content, uncertainty=band)


def _with_people(content: ModelContent, plan: EquationPlan) -> EquationPlan:
    """The plan with the people the whole model was made from, where the model is one equation and none are given."""
    derivation = content.source.derivation
    if plan.people is None and len(content.equations) == 1 and isinstance(derivation, Derivation):
        return replace(plan, people=derivation.people)
    return plan


def _band(
    content: Equation,
    errors: Sequence[StandardError],
    weighed: Sequence[Weighed],
    baselines: Sequence[BaselineVariance],
    assumptions: tuple[str, ...],
) -> ReconstructedBand:
    deviations = np.array([error.value for error in errors])
    spans = [span_of(horizon) for horizon in content.horizons]
    longest = max(range(len(spans)), key=lambda place: 0.0 if (span := spans[place]) is None else span.days)
    covariance = weighed[longest].correlations * (deviations[:, None] * deviations[None, :])
    return ReconstructedBand(
        covariance=tuple(tuple(float(entry) for entry in row) for row in covariance),
        at_centre=tuple(
            AtCentre(
                variance=baseline.value,
                centre=tuple(float(entry) for entry in part.centre),
                years=horizon.years,
                time=horizon.time,
                unit=horizon.unit,
            )
            for horizon, part, baseline in zip(content.horizons, weighed, baselines, strict=True)
        ),
        assumptions=assumptions,
    )


def _weigh(equation: ModelEquation, line: Line, people: ReferencePeople) -> Weighed:
    design = design_columns(equation.terms, people.columns)
    eta = linear_predictor(line, design)
    weight = probability(line.link, eta)
    if line.link == "logit":
        weight = weight * complement(line.link, eta)
    estimated = [place for place, term in enumerate(equation.terms) if not term.fixed]
    names = [equation.terms[place].id for place in estimated]
    path = f"/model/equations/{equation.place}/terms"
    total = float(weight.sum())
    if not (np.isfinite(eta).all() and total > 0):
        text = "the model has no finite prediction for some of the reference people. Are their values in its units?"
        raise ReconstructionRefused((Problem(path, text),))
    centre = np.array([float((weight * design[place]).sum()) / total for place in estimated])
    away = [design[place] - middle for place, middle in zip(estimated, centre, strict=True)]
    covariance = np.array([[float((weight * one * other).sum()) / total for other in away] for one in away])
    return Weighed(centre, _invert(covariance, away, names, path), total / people.count)


def _invert(covariance: Array, away: Sequence[Column], names: Sequence[str], path: str) -> Array:
    """The inverse of a covariance scaled to a unit diagonal; it is inverted on the correlation scale."""
    still = [name for name, column in zip(names, away, strict=True) if float(np.ptp(column)) == 0.0]
    if still:
        ids = listed(map(quoted, still))
        text = f"{ids}: everybody among the reference people has the same value there, so nothing tells its part apart."
        raise ReconstructionRefused((Problem(path, text),))
    deviations = np.sqrt(np.diag(covariance))
    scaled = covariance / deviations[:, None] / deviations[None, :]
    values, vectors = np.linalg.eigh((scaled + scaled.T) / 2.0)
    if not values[0] > SMALLEST_EIGENVALUE:
        load = np.abs(vectors[:, 0])
        ids = listed(quoted(name) for name, part in zip(names, load, strict=True) if part > 0.1)
        text = f"{ids} say the same of everybody among the reference people, so they cannot be told apart."
        raise ReconstructionRefused((Problem(path, text),))
    inverse = np.linalg.inv(scaled)
    roots = np.sqrt(np.diag(inverse))
    correlations = inverse / roots[:, None] / roots[None, :]
    correlations = (correlations + correlations.T) / 2.0
    np.fill_diagonal(correlations, 1.0)
    return np.asarray(correlations, dtype=np.float64)


def _find_plan_faults(content: ModelContent, plan: ReconstructionPlan) -> Iterator[Problem]:
    if plan.rows is None and plan.people < FEWEST_PEOPLE:
        yield Problem("", f"{plan.people:,} people to be drawn are too few; at least {FEWEST_PEOPLE:,} are needed.")
    known = [equation.id for equation in content.equations]
    for one in plan.equations:
        if one.equation not in known:
            yield Problem("/model/equations", f"the plan names the equation {quoted(one.equation)}; there is none.")
    for place, equation in enumerate(content.equations):
        if isinstance(equation.uncertainty, CovarianceBand | RobustBand | DrawsBand):
            yield Problem(
                f"/model/equations/{place}/uncertainty",
                f"{quoted(equation.id)} has a band from its own fit; a rebuilt one would be worse. Leave it.",
            )
        if all(term.fixed is True for term in equation.terms):
            yield Problem(f"/model/equations/{place}/terms", "every term is fixed: there is no band to rebuild.")
