"""Re-measurement spread: how far the number would move if the same patient were measured again.

The delta method on the (recalibrated) link scale: Var = sum over values of (d eta / dx)^2 s^2, with s the within-person
SD that the file states for x, and errors of different values taken as independent (Carroll, Ruppert, Stefanski &
Crainiceanu, Measurement Error in Nonlinear Models, 2nd ed. 2006, for the model of error; the delta method is general).
Coefficients that were fitted to single readings are attenuated already, so the number itself is not corrected.
"""

from collections.abc import Iterator
from dataclasses import dataclass
from statistics import NormalDist

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.case import Case
from clinicalc.assessment.fields import Field
from clinicalc.assessment.limits import clamp, giving_limits
from clinicalc.assessment.not_measured import integrate, moved_case
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.coefficients.questions import WithinPerson
from clinicalc.covariates.design import design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.links import probability
from clinicalc.prediction.predict import predict
from clinicalc.units.averaged import Averaged

Rows = NDArray[np.bool_]
Varying = tuple[tuple[TakenNumber, float], ...]
"""Numbers with their within-person SD."""

STEP = 1e-4
"""Steps of the central difference, in SDs: error of the formula about (STEP s / x)^2, of rounding about 1e-10."""

STEP_OPEN = 1e-2
"""The same where the number is itself an average, known to fewer digits."""

_ROWS = 4
"""Rows for each value: a step down and up, and a whole SD down and up."""


@dataclass(frozen=True, slots=True)
class SpreadPart:
    """What one value adds: its within-person SD in the file's unit, and the SD that gives on the link scale.

    The SD is that of the value as typed: of a mean, where it was stated to be one.
    """

    field: str
    label: str
    sd: float
    link_sd: float
    source: str


@dataclass(frozen=True, slots=True)
class Spread:
    """The probabilities between which the number would lie on re-measurement, in a share `level` of times.

    The values as typed are taken for the patient's usual ones. Two readings, which both vary, lie further apart: by the
    square root of two.
    """

    level: float
    lower: float
    upper: float
    link_sd: float
    parts: tuple[SpreadPart, ...]


@dataclass(frozen=True, slots=True, eq=False)
class _Moved:
    """The values as used in row 0, then `_ROWS` rows for each varying number.

    `kept` marks the rows in which a limit held a worked-out value back, `crossed` those across a cut that counts.
    """

    columns: dict[str, Column]
    kept: Rows
    crossed: Rows

    def ends_of(self, place: int) -> tuple[int, int]:
        """The rows between which the slope along a varying number is taken."""
        first = 1 + _ROWS * place
        down, up = first, first + 1
        if self.crossed[first + 2 : first + 4].any():
            down, up = first + 2, first + 3
        # a worked-out value held back at its limit did not follow: the other side alone tells the slope
        if self.kept[down] != self.kept[up]:
            down, up = (0, up) if self.kept[down] else (down, 0)
        return down, up


def spread_of(case: Case, open: tuple[Field, ...] = ()) -> Spread | None:
    """The spread at the case's level; None where no value behind the number has a stated within-person variation.

    None too where the model has no finite result beside a value, so that nothing can be said. A value worked out from
    typed ones carries their variation on; a typed value that could be worked out has none stated and takes no part.
    `open` are the values behind the number that were not measured: the slope is then that of the average over them,
    what is expected of them moving along with the measured values.

    The derivative is a central difference over a small step, one-sided at the limits within which the model gives a
    number. A value that meets a cut (above, from, below, up_to) within one SD has no derivative that tells of it: there
    the secant over one SD to both sides stands in, so that a jump counts. On the cut itself half the jump is the SD of
    what falls on either side as often. The limits then reach at least the numbers one SD away.
    """
    varying = tuple(_find_varying(case, open))
    if not varying:
        return None
    moved = _move(case, varying, STEP_OPEN if open else STEP)
    ends = [moved.ends_of(place) for place in range(len(varying))]
    eta = _eta_averaged(case, moved, varying, ends, open) if open else _eta(case, moved)
    if eta is None:
        return None
    parts = []
    for (number, sd), (down, up) in zip(varying, ends, strict=True):
        x, within = moved.columns[number.field.id], number.field.within_person
        assert within is not None  # it is what made the number a varying one
        width = x[up] - x[down]
        link_sd = float(abs(eta[up] - eta[down]) / width * sd) if width > 0.0 else float("nan")
        parts.append(SpreadPart(number.field.id, number.field.label, sd, link_sd, within.source))
    link_sd = float(np.sqrt(sum(part.link_sd * part.link_sd for part in parts)))
    if not np.isfinite(link_sd):
        return None
    away = NormalDist().inv_cdf(0.5 + case.level / 2.0) * link_sd
    # the number across a cut is met at least one time in six, so it belongs to what may come
    there = [float(eta[row]) for pair in ends for row in pair]
    limits = np.array([min(float(eta[0]) - away, *there), max(float(eta[0]) + away, *there)])
    lower, upper = probability(case.line.link, limits).tolist()
    return Spread(case.level, lower, upper, link_sd, tuple(parts))


def remeasured_sd(within: WithinPerson, value: float, averaged: Averaged | None) -> float:
    """The within-person SD of a value, in its unit.

    That of a mean of n visits with m readings each is sqrt((total^2 - part^2) / n + part^2 / (n m)), `part` being what
    differs among readings of one visit. Where the file does not state that part, readings of one visit share all of the
    variation, and only visits divide it.
    """
    relative = isinstance(within.sd, UnsetType)
    total, part = (within.cv, within.within_visit_cv) if relative else (within.sd, within.within_visit_sd)
    assert not isinstance(total, UnsetType)  # the rules want one of the two
    inside = 0.0 if isinstance(part, UnsetType) else part
    visits, readings = (1, 1) if averaged is None else (averaged.visits, averaged.readings)
    shared = (total - inside) * (total + inside)
    sd = float(np.sqrt(shared / visits + inside * inside / (visits * readings)))
    return sd * abs(value) if relative else sd


def _find_varying(case: Case, open: tuple[Field, ...]) -> Iterator[tuple[TakenNumber, float]]:
    """The numbers behind this result whose variation the file states, with their SD, in page order.

    Where values are open every such number may be behind it, by what it lets expect of them.
    """
    behind = case.behind
    for field in case.model.fields:
        number = case.numbers.get(field.id)
        within = None if number is None else number.field.within_person
        if number is None or within is None or not (open or field.id in behind):
            continue
        sd = remeasured_sd(within, number.value, number.averaged)
        if sd > 0.0:
            yield number, sd


def _move(case: Case, varying: Varying, step: float) -> _Moved:
    rows = 1 + _ROWS * len(varying)
    columns = {number.field.id: np.full(rows, number.value) for number, _ in varying}
    kept = np.zeros(rows, dtype=np.bool_)
    for place, (number, sd) in enumerate(varying):
        limits = giving_limits(number.field)
        for row, way in enumerate((-step, step, -1.0, 1.0), 1 + _ROWS * place):
            columns[number.field.id][row] = clamp(number.value + way * sd, limits)
    wide = case.columns_with(columns)
    uses = case.equation.uses
    for field in case.model.derived:
        if field.id in case.worked_out and field.id in uses:
            low, high = giving_limits(field)
            value = wide[field.id]
            kept |= (value == low) | (value == high) | ~np.isfinite(value)
    return _Moved(wide, kept, _crossing(case, wide, rows))


def _crossing(case: Case, columns: dict[str, Column], rows: int) -> Rows:
    """For each row, whether a cut that counts falls otherwise than at the values as used, shape (rows,).

    A cut in a value that was not measured is none: the number is averaged over both sides.
    """
    crossed = np.zeros(rows, dtype=np.bool_)
    with np.errstate(all="ignore"):
        for term in case.equation.terms:
            factors = term.factors
            cuts = [factor for factor in factors if factor.cuts and factor.of in columns]
            if not cuts:
                continue
            elsewhere = np.zeros(rows, dtype=np.bool_)
            for factor in cuts:
                side = factor.values(columns)
                elsewhere |= side != side[0]
            if elsewhere.any() and all(factor.of in columns for factor in factors):
                value = term.values(columns)
                elsewhere &= value != value[0]
            crossed |= elsewhere
    return crossed


def _eta(case: Case, moved: _Moved) -> Column | None:
    """The recalibrated linear predictor in every row; None where a value behind the number is not there."""
    if not case.equation.uses <= moved.columns.keys():
        return None
    design = design_columns(case.equation.terms, moved.columns)
    return predict(case.line, design, adjustment=case.adjustment, level=case.level, band=False).eta


def _eta_averaged(
    case: Case, moved: _Moved, varying: Varying, ends: list[tuple[int, int]], open: tuple[Field, ...]
) -> Column | None:
    """The link of the average over the open values, in the rows that are asked for; None without one as typed."""
    people = case.equation.people
    now = None if people is None else integrate(case, open, people)
    if people is None or now is None:
        return None
    eta = np.full(moved.kept.size, np.nan)
    eta[0] = now.eta
    for (number, _), rows in zip(varying, ends, strict=True):
        for row in rows:
            if row:
                value = float(moved.columns[number.field.id][row])
                there = integrate(moved_case(case, {number.field.id: value}), open, people)
                eta[row] = np.nan if there is None else there.eta
    return eta
