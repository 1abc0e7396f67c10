"""Closed testing among keeping a model, its intercept, intercept and slope, and a refit.

Vergouwe, Nieboer, Oostenbrink, Debray, Murray, Kattan, Koffijberg, Moons, Steyerberg, Stat Med 2017;36:4529: the
fullest model is tested against the original, then against a new intercept, then against intercept and slope, each on
the difference of their parameters; the first that is not significantly worse is taken.
"""

from collections.abc import Sequence
from dataclasses import dataclass

from clinicalc.assessment.rarity import chi_square_beyond
from clinicalc.validation.updated import Testing, UpdateMethod, UpdateTest
from clinicalc.validation.updating_people import EquationPeople


@dataclass(frozen=True, slots=True)
class Rung:
    """One of the models compared: its parameters that are free, and how much worse it is than the fullest, as chi2."""

    method: UpdateMethod
    free: int
    worse_by: float
    loglik: float | None = None


def choose_closed(rungs: Sequence[Rung], alpha: float, without_refit: str = "") -> Testing:
    """The tests and the choice; `rungs` in the order of their freedom, the fullest last."""
    fullest = rungs[-1]
    tests = []
    chosen: UpdateMethod | None = None
    for rung in rungs[:-1]:
        df = fullest.free - rung.free
        if df <= 0:
            continue
        chi2 = max(rung.worse_by, 0.0)
        tests.append(UpdateTest(fullest.method, rung.method, chi2, df, chi_square_beyond(chi2, df)))
        if chosen is None and not tests[-1].p < alpha:
            chosen = rung.method
    logliks = tuple((rung.method, rung.loglik) for rung in rungs)
    return Testing(logliks, tuple(tests), alpha, chosen or fullest.method, without_refit)


def why_not_nested(part: EquationPeople) -> str:
    """Why a refit is not tested against intercept and slope, "" where it can be."""
    if len(part.estimated) < len(part.equation.content.terms):
        return "terms that were not estimated stay as they are in a refit, which a new slope does not compare with"
    if len(part.estimated) < 2:
        return "with one term a refit is intercept and slope"
    return ""
