"""The Brier score of predicted risks, and what it gains over giving everybody the observed risk.

Brier, Mon Weather Rev 1950;78:1; where some were lost from sight, weighted after Graf, Schmoor, Sauerbrei & Schumacher,
Stat Med 1999;18:2529. The scaled score is one minus its share of the score p0 (1 - p0) of the observed risk p0, which
is one minus Kaplan-Meier, or Aalen & Johansen's incidence. Standard errors by the influence of each person.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.watching_weights import Known

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class SquaredErrors:
    """The Brier score, that of the observed risk, the scaled one (None where nobody or everybody has it)."""

    brier: float
    se: float
    null: float
    scaled: float | None
    scaled_se: float | None


def find_squared_errors(known: Known, risks: Array) -> SquaredErrors:
    """The scores of the risks of n people, (n,)."""
    people = len(risks)
    terms = _weigh_errors(known, risks)
    brier = float(terms.sum())
    moved = known.influence(terms) - brier / people
    shares = known.weights * known.happened / people
    observed = float(shares.sum())
    null = observed * (1.0 - observed)
    se = _root(moved)
    # 1 minus itself, were nobody else there, is only nearly 0
    if null <= 1e-12:
        return SquaredErrors(brier, se, 0.0, None, None)
    null_moved = (1.0 - 2.0 * observed) * (known.influence(shares) - observed / people)
    scaled_moved = (brier / null * null_moved - moved) / null
    return SquaredErrors(brier, se, null, 1.0 - brier / null, _root(scaled_moved))


def find_brier(known: Known, risks: Array) -> float:
    """The Brier score alone, for samples of which no limits are asked."""
    return float(_weigh_errors(known, risks).sum())


def _weigh_errors(known: Known, risks: Array) -> Array:
    errors = known.happened - risks
    return known.weights * errors * errors / len(risks)


def _root(moved: Array) -> float:
    return float(np.sqrt((moved * moved).sum()))
