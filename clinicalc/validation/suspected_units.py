"""Which columns of numbers may stand in another unit than is thought, and how they would read in the right one.

A column is held against what the model says of its own people (a described population, else the derivation range, else
the usual range): where its middle lies, in standard deviations, and how widely it spreads.
"""

from collections.abc import Collection, Iterator, Mapping
from dataclasses import dataclass
from itertools import permutations
from math import exp, log, sqrt

import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model
from clinicalc.cohort.checked import Column
from clinicalc.errors import UnitError
from clinicalc.units.conversion import conversion
from clinicalc.units.unit import unit

Array = NDArray[np.float64]

ODD = 1.5
"""Standard deviations off from which a column is suspected."""
PLAIN = 2.0
"""The distance in which a column in its right unit has to lie, at most."""
CERTAIN = 4.0
NEAR = 1.5
"""A column so many standard deviations from the model's people, and so near them in another unit, is in that unit."""
_WITHIN_RANGE = 4.0
"""A range holds so many standard deviations: nineteen people of twenty, as most that are stated do."""
_SPREAD = 0.35
"""Standard deviation of the log of the ratio of two spreads, from one place to another."""
_PEOPLE = "the middle of the people the model was made from"
_RANGE = "the middle of the range the model was made from"
_USUAL = "the middle of what is usual"
MANY_REFUSED = 0.2
"""The share of values outside the limits of a model from which the unit of their column is doubted."""
_SLIPS = (10.0, 100.0, 1000.0)
_NEAR = (0.86, 0.9, 0.95, 1.0, 1.05, 1.1, 1.16)
"""Factors that bring a column near the middle of the model's people; how near they should bring it nobody knows."""


@dataclass(frozen=True, slots=True)
class Ordinary:
    """How a number is distributed among the model's own people, on its own scale or its logarithm."""

    mean: float
    sd: float
    logged: bool
    source: str
    """Whose middle it is, in words."""

    def middle(self) -> float:
        """The middle of the values themselves."""
        return exp(self.mean) if self.logged else self.mean

    def stray(self, values: Column) -> float:
        """How far the middle of a column is from it, in standard deviations."""
        middle = float(np.median(values))
        if self.logged:
            return abs(log(middle) - self.mean) / self.sd if middle > 0.0 else float("inf")
        return abs(middle - self.mean) / self.sd

    def distance(self, values: Column) -> float:
        """How far a column is from it, in standard deviations: its middle and its spread."""
        known = values[np.isfinite(values)]
        if self.logged:
            if (known <= 0.0).any():
                return float("inf")
            known = np.log(known)
        low, middle, high = np.quantile(known, [0.25, 0.5, 0.75])
        sd = max(float(high - low) / 1.349, 1e-9 * self.sd)
        return sqrt(((float(middle) - self.mean) / self.sd) ** 2 + (log(sd / self.sd) / _SPREAD) ** 2)


@dataclass(frozen=True, slots=True, eq=False)
class Suspicion:
    """A number predictor as it would be in another unit; `before` is 0 for a column that is not odd by itself.

    `values` (n,) is the column corrected: scale times what stands there plus offset. `meant` is the code of the unit
    that the digits seem to stand in, `taken` of the one they were taken for; both "" for a factor that no unit has.
    `before` and `after` are the distances to the model's people.
    """

    id: str
    values: Column
    scale: float
    offset: float
    meant: str
    taken: str
    before: float
    after: float

    @property
    def middles(self) -> tuple[float, float]:
        """The middle of the column as it stands, and as it would be."""
        then = float(np.median(self.values))
        return (then - self.offset) / self.scale, then

    @property
    def is_certain(self) -> bool:
        """Whether the column is so far from the model's people, and so near them anew, that it needs no other proof."""
        return self.is_named and self.before >= CERTAIN and self.after <= NEAR

    @property
    def is_named(self) -> bool:
        """Whether a unit explains it, or the point in another place."""
        return bool(self.meant) or self.scale in (*_SLIPS, *(1.0 / slip for slip in _SLIPS))

    @property
    def words(self) -> str:
        """What seems to be wrong with the column, to stand after its name."""
        if self.meant:
            return f"seems to be in {unit(self.meant).spelling} and was taken for {unit(self.taken).spelling}"
        if self.scale < 1.0:
            return f"seems to be about {1.0 / self.scale:.2g} times too large"
        return f"seems to be about {self.scale:.2g} times too small"


def suspect_units(model: Model, columns: Mapping[str, Column], doubted: Collection[str] = ()) -> Iterator[Suspicion]:
    """Every other unit and every slip of the point in which a column would be less odd than it is.

    `doubted` are ids of columns that do not do what the model says they do: of these every unit is tried in which they
    would not be odd, and where nothing is known of how they are distributed every slip of the point.
    """
    for id, values in columns.items():
        field = model.by_id[id]
        if not isinstance(field, NumberField):
            continue
        ordinary = find_ordinary(model, field)
        if ordinary is None:
            for scale, offset, meant, taken in _readings(field) if id in doubted else ():
                yield Suspicion(id, values * scale + offset, scale, offset, meant, taken, 0.0, 0.0)
        elif ordinary.stray(values) >= ODD:
            yield from _suspect_odd(id, values, field, ordinary)
        elif id in doubted:
            for scale, offset, meant, taken in _readings(field):
                corrected = values * scale + offset
                after = ordinary.distance(corrected)
                if meant and after < PLAIN and _is_possible(field, corrected):
                    yield Suspicion(id, corrected, scale, offset, meant, taken, 0.0, after)


def _suspect_odd(id: str, values: Column, field: NumberField, ordinary: Ordinary) -> Iterator[Suspicion]:
    before = ordinary.distance(values)
    for scale, offset, meant, taken in _readings(field):
        corrected = values * scale + offset
        after = ordinary.distance(corrected)
        if after < min(before, PLAIN) and _is_possible(field, corrected):
            yield Suspicion(id, corrected, scale, offset, meant, taken, before, after)
    middle = float(np.median(values))
    for near in _NEAR if middle * ordinary.middle() > 0.0 else ():
        factor = near * ordinary.middle() / middle
        after = ordinary.distance(values * factor)
        if after < min(before, PLAIN) and _is_possible(field, values * factor):
            yield Suspicion(id, values * factor, factor, 0.0, "", "", before, after)


def suspect_refused(model: Model, columns: Mapping[str, Column], refused_by: Mapping[str, int]) -> Iterator[Suspicion]:
    """The unit that the digits of a column fit for which many were refused; `columns` (rows of the file,)."""
    for id, count in refused_by.items():
        column = columns.get(id)
        known = np.empty(0) if column is None else column[np.isfinite(column)]
        if len(known) and count >= MANY_REFUSED * len(known):
            found = [one for one in suspect_units(model, {id: known}) if one.is_certain]
            if found:
                yield min(found, key=lambda one: one.after)


def find_ordinary(model: Model, field: NumberField) -> Ordinary | None:
    """What the model says of how a number is distributed among its own people; None where it says nothing."""
    found = [
        Ordinary(float(people.mean[at]), float(people.sd[at]), field.id in people.logged, _PEOPLE)
        for equation in model.equations
        if (people := equation.people) is not None and field.id in people.numbers
        for at in [people.numbers.index(field.id)]
    ]
    if found and len({one.logged for one in found}) == 1:
        mean = float(np.mean([one.mean for one in found]))
        within = float(np.mean([one.sd**2 + (one.mean - mean) ** 2 for one in found]))
        return Ordinary(mean, sqrt(within), found[0].logged, _PEOPLE)
    for (low, high), source in ((field.derivation, _RANGE), (field.usual, _USUAL)):
        if low is not None and high is not None and low < high:
            if low > 0.0 and high / low > 5.0:
                return Ordinary((log(low) + log(high)) / 2.0, log(high / low) / _WITHIN_RANGE, True, source)
            return Ordinary((low + high) / 2.0, (high - low) / _WITHIN_RANGE, False, source)
    return None


def _readings(field: NumberField) -> Iterator[tuple[float, float, str, str]]:
    """Scale and offset from the column as it was read to the same digits in another unit; each once."""
    seen = list[tuple[float, float]]()
    pairs = sorted(permutations(field.quantity.units, 2), key=lambda pair: pair[1] != field.unit)
    for meant, taken in pairs:
        try:
            back = conversion(field.quantity, field.unit, taken, field.factor)
            into = conversion(field.quantity, meant, field.unit, field.factor)
        except UnitError:
            continue
        line = (back.scale * into.scale, back.offset * into.scale + into.offset)
        if not any(np.allclose(line, one, rtol=1e-3, atol=1e-9) for one in (*seen, (1.0, 0.0))):
            seen.append(line)
            yield *line, meant, taken
    for slip in _SLIPS:
        for scale in (slip, 1.0 / slip):
            if not any(np.allclose((scale, 0.0), one, rtol=1e-3, atol=1e-9) for one in seen):
                yield scale, 0.0, "", ""


def _is_possible(field: NumberField, values: Column) -> bool:
    low, high = field.possible
    known = values[np.isfinite(values)]
    inside = np.ones(len(known), dtype=np.bool_)
    if low is not None:
        inside &= known >= low
    if high is not None:
        inside &= known <= high
    return float(inside.mean()) >= 0.98
