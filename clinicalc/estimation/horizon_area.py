"""The area under the ROC curve at a horizon: who had the event by then against who had not (cumulative, dynamic).

Heagerty, Lumley & Pepe, Biometrics 2000;56:337, with weights for those lost from sight (Blanche, Dartigues &
Jacqmin-Gadda, Stat Med 2013;32:5381; someone with another event by the horizon is one who had not the event, their
second definition). Without times it is the share of pairs of Hanley & McNeil, Radiology 1982;143:29. The standard error
is by the influence of each person, the weights counted as estimated.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.ranks import rank
from clinicalc.estimation.watching_weights import Known

Array = NDArray[np.float64]
Places = NDArray[np.int64]


@dataclass(frozen=True, slots=True)
class Area:
    """The area, with predictions that are the same counting 1/2, and its standard error."""

    area: float
    se: float


def find_area(known: Known, predictions: Array, ranks: Places | None = None) -> Area | None:
    """The area of n predictions, (n,); None where nobody is known to have had the event, or nobody not to have.

    `ranks` are those of the predictions (`rank`), where they have been found already.
    """
    cases = known.weights * known.happened
    others = known.weights * (1.0 - known.happened)
    all_cases, all_others = float(cases.sum()), float(others.sum())
    if not (all_cases and all_others):
        return None
    ranks = rank(predictions) if ranks is None else ranks
    own, other = np.bincount(ranks, weights=cases), np.bincount(ranks, weights=others)
    below = (np.cumsum(other) - 0.5 * other)[ranks] / all_others
    above = (all_cases - np.cumsum(own) + 0.5 * own)[ranks] / all_cases
    area = float((cases * below).sum() / all_cases)
    moved = known.influence(cases * (below - area) / all_cases + others * (above - area) / all_others)
    return Area(area, float(np.sqrt((moved * moved).sum())))
