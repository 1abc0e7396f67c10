"""Matching age: the age at which the reference person has the patient's probability.

eta_reference(age) = eta_patient on the link scale of one horizon, so baseline and recalibration cancel. Its standard
error is that of the implicit function: w'Vw with w = (x_patient - x_reference(age)) / (d eta_reference / d age) over
the estimated terms (delta method; with draws, the SD of w'b over the draws).
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from enum import StrEnum
from math import ceil

import numpy as np

from clinicalc.assessment.case import Case
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.limits import giving_limits
from clinicalc.assessment.reference_person import ReferencePerson, find_reference
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Draws, Line
from clinicalc.prediction.predict import predict

Design = tuple[Column, ...]

_GRID = 0.1
"""Years between the ages at which the reference person's predictor is looked at."""
_PARTS, _ROUNDS = 512, 4
"""A step of the grid is parted so often: to 2e-12 years."""
_CLOSE = 1e-9
"""So near to the patient's the found linear predictor has to lie; further off it is a jump."""
_NUDGE = 1e-4
"""Years to both sides over which the slope in age is taken."""


class AgePlace(StrEnum):
    """Where the solution lies in the ages for which the model gives a number."""

    WITHIN = "within"
    BELOW = "below"
    ABOVE = "above"


@dataclass(frozen=True, slots=True)
class MatchingAge:
    """The age in years with its standard error; outside the model's ages only the side is known.

    `lowest` and `highest` are those ages, nought where there is no age to speak of. `standard_error` is None without a
    band. Without any answer (`because` says why) `place` is None.
    """

    place: AgePlace | None
    age: float | None
    standard_error: float | None
    lowest: float
    highest: float
    because: str


def match_age(case: Case) -> MatchingAge:
    """The matching age of a patient, on the adjusted link scale of the same equation and horizon.

    The reference person's own age, where the file names one, has no say: it is what is looked for. Nothing is carried
    on beyond the ages for which the model gives a number. For those who ask only: a comparison with others persuades.
    """
    reference = find_reference(case)
    field = _age_field(case, reference)
    if isinstance(field, str):
        return _none(field)
    if reference.because:
        return _none(reference.because)
    low, high = giving_limits(field)
    if low is None or high is None or low >= high:
        return _none(f"The model sets no limits to {field.label}, so there is nothing to look for an age in.")
    fixed = {id: value for id, value in reference.values.items() if id != field.id}
    return _Search(case, field, fixed, low, high).run()


@dataclass(frozen=True, slots=True, eq=False)
class _Search:
    """The reference person at every age from `low` to `high` years, the one unit in which age is given."""

    case: Case
    field: NumberField
    fixed: Mapping[str, float]
    low: float
    high: float

    def run(self) -> MatchingAge:
        low, high = self.low, self.high
        grid = np.linspace(low, high, max(2, ceil((high - low) / _GRID - 1e-9) + 1))
        own = self.case.design_with({})
        etas, target = self._eta_of(self._design(grid)), float(self._eta_of(own)[0])
        because = _judge_course(self.field.label, etas)
        if because:
            return MatchingAge(None, None, None, low, high, because)
        slack = _CLOSE * max(1.0, abs(target))
        if target < etas[0] - slack:
            return MatchingAge(AgePlace.BELOW, None, None, low, high, "")
        if target > etas[-1] + slack:
            return MatchingAge(AgePlace.ABOVE, None, None, low, high, "")
        age = self._narrow_down(grid, etas, target)
        ages = np.array([age, max(age - _NUDGE, low), min(age + _NUDGE, high)])
        near = self._design(ages)
        if abs(float(self._eta_of(near)[0]) - target) > slack:
            because = (
                f"The reference person’s number jumps at {self.field.label} {age:.1f} years, over the"
                " patient’s: at no age is it the same."
            )
            return MatchingAge(None, None, None, low, high, because)
        error = self._standard_error(own, near, float(ages[2] - ages[1]))
        return MatchingAge(AgePlace.WITHIN, age, error, low, high, "")

    def _narrow_down(self, grid: Column, etas: Column, target: float) -> float:
        """The age between two neighbours of the grid, each time parted more finely."""
        for _ in range(_ROUNDS):
            place = min(max(int(np.searchsorted(etas, target)), 1), grid.size - 1)
            low, high = grid[place - 1], grid[place]
            grid = np.linspace(low, high, _PARTS + 1)
            etas = self._eta_of(self._design(grid))
        place = int(np.argmin(np.abs(etas - target)))
        return float(grid[place])

    def _standard_error(self, own: Design, near: Design, width: float) -> float | None:
        """In years; None where the line has no band. `near` holds the age found and the two `width` years round it."""
        line = self.case.line
        if line.band is None:
            return None
        rise = sum(b * (column[2] - column[1]) for b, column in zip(line.coefficients, near, strict=True))
        slope = float(rise) / width
        away = [float(x[0] - column[0]) / slope for x, column in zip(own, near, strict=True)]
        return _spread_of(line, away)

    def _eta_of(self, design: Design) -> Column:
        return predict(self.case.line, design, adjustment=self.case.adjustment, band=False).eta

    def _design(self, ages: Column) -> Design:
        fixed = {id: np.full(ages.size, value) for id, value in self.fixed.items()}
        return self.case.design_with(fixed | {self.field.id: np.ascontiguousarray(ages)})


def _none(because: str) -> MatchingAge:
    return MatchingAge(None, None, None, 0.0, 0.0, because)


def _age_field(case: Case, reference: ReferencePerson) -> NumberField | str:
    """The one value of age that the number depends on, or why there is none."""
    reached = frozenset().union(*reference.roots.values())
    ages = [
        field
        for field in case.model.fields
        if isinstance(field, NumberField) and field.quantity.id == "age" and field.id in reached
    ]
    if not ages:
        return "The number does not depend on age."
    named = [field for field in ages if field.id == "age"] or ages
    return named[0] if len(named) == 1 else "The equation takes several ages, and none of them is simply the age."


def _judge_course(label: str, etas: Column) -> str:
    """Why no age can be found on this course from the lowest to the highest age; "" where it rises throughout."""
    if not np.isfinite(etas).all():
        return "The equation has no finite result for the reference person at some ages."
    steps = np.diff(etas)
    if (steps > 0).all():
        return ""
    if not steps.any():
        return f"The reference person’s number is the same at every value of {label}."
    if (steps <= 0).all():
        return f"The reference person’s number falls with {label}: an age would say the opposite of what it seems to."
    if (steps >= 0).all():
        return f"The equation counts {label} in steps or not everywhere: many ages have the same number."
    return f"The reference person’s number rises and falls with {label}: several ages can have the same number."


def _spread_of(line: Line, away: Sequence[float]) -> float:
    """The SD of w'b under the imprecision of the coefficients."""
    band = line.band
    assert band is not None
    some = [away[term] for term in band.estimated]
    if isinstance(band, Draws):
        drawn = np.zeros(band.baselines.size)
        for weight, row in zip(some, band.coefficients, strict=True):
            drawn += weight * row
        return float(drawn.std(ddof=1))
    parts = [sum(band.root[j, k] * some[j] for j in range(k, len(some))) for k in range(len(some))]
    return float(np.sqrt(sum(part * part for part in parts)))
