"""Values marked as not measured: what is known of such people stands in for them, and how much that widens."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from clinicalc.assessment.bends import bends_in
from clinicalc.assessment.case import Case
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.limits import clamp_column, giving_limits
from clinicalc.coefficients.answers import leaves_open
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Array
from clinicalc.prediction.links import link_of, probability
from clinicalc.prediction.mixture import mixture_limits, weighted_quantiles
from clinicalc.prediction.open_band import AveragedPrediction, average_columns, average_prediction
from clinicalc.prediction.open_values import Cloud, spread_open
from clinicalc.prediction.people import People
from clinicalc.prediction.predict import predict

MOST_NOT_MEASURED = 2
"""So many values may stand open in one number; with more it would say little about this patient."""


@dataclass(frozen=True, slots=True)
class NotMeasured:
    """Which values stand open, and the number's range over them.

    `lower` and `upper`: the probabilities between which the number would lie if they were measured, in a share `level`
    of such people, coefficients taken as known. `known_lower`, `known_upper`: the band of the coefficients alone, with
    the expected values of the design terms in the place of the open ones; None without a band. `link_sd` is that of the
    open values alone.
    """

    fields: tuple[str, ...]
    level: float
    lower: float
    upper: float
    link_sd: float
    known_lower: float | None
    known_upper: float | None
    source: str


@dataclass(frozen=True, slots=True)
class Answered:
    """What the number would be with one set of answers (codes by id) to the open questions, and how many give it."""

    answers: Mapping[str, float]
    share: float
    probability: float
    complement: float


@dataclass(frozen=True, slots=True)
class OpenResult:
    """The number averaged over the open values; eta is the link of that average.

    `lower`, `upper` is the band of coefficients and open values together, None without a band; it always holds the
    average. `terms` are the places of the terms that are not nought for all such people.
    """

    eta: float
    probability: float
    complement: float
    lower: float | None
    upper: float | None
    terms: frozenset[int]
    answered: tuple[Answered, ...]
    not_measured: NotMeasured


def says_not_measured(field: Field, text: str) -> bool:
    """Whether a typed text says of a field that it was not measured."""
    if isinstance(field, QuestionField):
        return leaves_open(text, ((option.id, option.label) for option in field.options))
    return leaves_open(text)


def integrate(case: Case, open: tuple[Field, ...], people: People) -> OpenResult | None:
    """The number averaged over open values.

    None where no distribution of them follows from the description of the people, or a result is not finite.
    """
    cloud = cloud_of(case, open, people)
    return None if cloud is None else average(case, open, cloud, people.source)


def cloud_of(case: Case, open: tuple[Field, ...], people: People) -> Cloud | None:
    """Points that stand for the open values of people with the known ones; None where the description lacks them."""
    ids = tuple(field.id for field in open)

    def bends(id: str, before: Mapping[str, Column], low: Column, high: Column) -> Array:
        return bends_in(case, ids, id, before, (low, high))

    numbers = {id: float(case.columns[id][0]) for id in case.numbers}
    answers = {id: answer.code for id, answer in case.answers.items()}
    return spread_open(people, ids, numbers, answers, bends)


def average(case: Case, open: tuple[Field, ...], cloud: Cloud, source: str) -> OpenResult | None:
    """The number averaged over these points; None where a result is not finite."""
    design = case.design_with({field.id: _inside(field, cloud.columns[field.id]) for field in open})
    averaged = average_prediction(case.line, design, cloud.weights, cloud.combination, case.adjustment, case.level)
    if averaged is None:
        return None
    known = predict(case.line, average_columns(design, cloud.weights), adjustment=case.adjustment, level=case.level)
    over = _to_probability(case, _range_over(case, open, cloud, design, averaged))
    lower, upper = (None, None) if averaged.limits is None else _to_probability(case, averaged.limits)
    if lower is not None and upper is not None:
        # a rare answer that counts for much moves the average out of what is expected of nearly all
        lower, upper = min(lower, averaged.share), max(upper, averaged.share)
    return OpenResult(
        eta=float(link_of(case.line.link, np.array([averaged.share]), np.array([averaged.rest]))[0]),
        probability=averaged.share,
        complement=averaged.rest,
        lower=lower,
        upper=upper,
        terms=frozenset(place for place, column in enumerate(design) if column.any()),
        answered=_answered(cloud, averaged),
        not_measured=NotMeasured(
            fields=tuple(field.id for field in open),
            level=case.level,
            lower=over[0],
            upper=over[1],
            link_sd=averaged.sd,
            known_lower=None if known.lower is None else float(known.lower[0]),
            known_upper=None if known.upper is None else float(known.upper[0]),
            source=source,
        ),
    )


def moved_case(case: Case, moved: Mapping[str, float]) -> Case:
    """The case with some of its known numbers replaced: what is expected of open values moves with them."""
    columns = {id: np.array([value]) for id, value in moved.items()}
    wide = case.columns_with(columns)
    worked_out = {id: float(wide[id][0]) for id in case.worked_out}
    return replace(case, columns={**case.columns, **columns}, worked_out=worked_out)


def _inside(field: Field, column: Column) -> Column:
    """Values drawn beyond the limits for which the model gives a number are moved onto them.

    The steps of an equation are proved to have a value only inside.
    """
    return clamp_column(column, giving_limits(field)) if isinstance(field, NumberField) else column


def _range_over(
    case: Case, open: tuple[Field, ...], cloud: Cloud, design: Sequence[Column], averaged: AveragedPrediction
) -> tuple[float, float]:
    """The linear predictors between which a share `level` of such people lies.

    Normal within each set of open answers, as where terms are linear in open numbers. Across a cut in an open number
    there are two numbers and none between or beyond them: then the quantiles of the points themselves.
    """
    if not _has_open_cut(case, open):
        return mixture_limits(averaged.parts, case.level)
    eta = predict(case.line, design, adjustment=case.adjustment, level=case.level, band=False).eta
    low, high = weighted_quantiles(eta, cloud.weights, (0.5 - case.level / 2.0, 0.5 + case.level / 2.0)).tolist()
    return low, high


def _has_open_cut(case: Case, open: tuple[Field, ...]) -> bool:
    """Whether a term cuts an open number, or a value worked out from one."""
    moving = {field.id for field in open if isinstance(field, NumberField)}
    for field in case.model.derived:
        if field.id not in case.columns and any(source in moving for source in field.sources):
            moving.add(field.id)
    return any(factor.cuts and factor.of in moving for term in case.equation.terms for factor in term.factors)


def _to_probability(case: Case, ends: tuple[float, float]) -> tuple[float, float]:
    low, high = probability(case.line.link, np.array(ends))
    return float(low), float(high)


def _answered(cloud: Cloud, averaged: AveragedPrediction) -> tuple[Answered, ...]:
    if len(cloud.combinations) == 1 and not cloud.combinations[0]:
        return ()
    figures = zip(cloud.combinations, averaged.parts, averaged.shares, averaged.rests, strict=True)
    return tuple(Answered(codes, part.weight, share, rest) for codes, part, share, rest in figures)
