"""Knots of the splines of a study, laid at quantiles of the people a fit is made from, and then frozen."""

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from clinicalc.coefficients.pointers import listed
from clinicalc.covariates.transforms import Column, apply_transform, compile_step
from clinicalc.development.study_people import FitPeople
from clinicalc.development.study_tables import SplineOf
from clinicalc.development.study_terms import Knots, default_knots, splines_of


@dataclass(frozen=True, slots=True)
class LaidKnots:
    """Knots by the number of the term, and what is wrong with some of them, with that number."""

    at: Mapping[int, Knots]
    faults: tuple[tuple[int, str], ...]

    def find(self, number: int, _: SplineOf) -> Knots:
        """Those of the term of that number."""
        return self.at[number]


def lay_knots(equation: Mapping[str, object], people: FitPeople) -> LaidKnots:
    """The knots of each spline of an equation: those stated, or the default quantiles after the spline's own steps."""
    at: dict[int, Knots] = {}
    faults: list[tuple[int, str]] = []
    for number, spline in splines_of(equation):
        if isinstance(spline.knots, tuple):
            at[number] = spline.knots
            continue
        at[number] = default_knots(_values_of(spline, people), spline.knots)
        if any(later <= earlier for earlier, later in pairwise(at[number])):
            faults.append((number, _say_heaped(spline, at[number])))
    return LaidKnots(at, tuple(faults))


def _values_of(spline: SplineOf, people: FitPeople) -> Column:
    values = people.columns[spline.spline_of][people.complete]
    values = np.ascontiguousarray(values[~np.isnan(values)])  # where values are filled in, of those who have them
    with np.errstate(all="ignore"):
        for step in spline.steps:
            values = apply_transform(compile_step(step, {}), values)
    return values


def _say_heaped(spline: SplineOf, knots: Knots) -> str:
    shown = listed(f"{knot:.6g}" for knot in knots)
    return (
        f"the values of {spline.spline_of} heap so that two knots fall together: {shown}. State the knots, as in "
        "knots = [40, 55, 70], or take fewer of them, or a straight line."
    )
