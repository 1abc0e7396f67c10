"""Calibration in the large of a yes or no: the intercept of a binomial model with the predicted line as offset.

Cox, Biometrika 1958;45:562, for log odds; the same for log(-log(1 - p)). One unknown, so Newton's steps are taken on
the sum of the scores, halved where they go too far; the variance is one over the expected information at the root.
"""

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.binomial import Link, find_slopes
from clinicalc.estimation.faults import FitFault, refuse_fit

Array = NDArray[np.float64]

_MOST_STEPS = 100


def fit_intercept(y: Array, line: Array, link: Link = Link.LOGIT) -> tuple[float, float]:
    """The intercept beside `line` on the scale of the link, and its standard error; y is 0 or 1, both (n,).

    Raises FitRefused where nobody, or everybody, has the event, or a value is not finite.
    """
    if not len(y):
        raise refuse_fit(FitFault.NO_PEOPLE)
    if not np.isfinite(line).all():
        raise refuse_fit(FitFault.NOT_FINITE)
    events = float(y.sum())
    if not 0.0 < events < len(y):
        raise refuse_fit(FitFault.NO_EVENTS if not events else FitFault.NO_OTHERS)
    # the root lies between these, each of which makes every risk lie on one side of the share
    share = _link(events / len(y), link)
    low, high = share - float(line.max()), share - float(line.min())
    at = share - float(line.mean())
    for _ in range(_MOST_STEPS):
        score, information = _slopes(at, y, line, link)
        low, high = (at, high) if score > 0 else (low, at)
        step = score / information if information else np.inf
        after = at + step if low <= at + step <= high else 0.5 * (low + high)
        moved, at = abs(after - at), after
        if moved <= 1e-14 * max(1.0, abs(at)):
            break
    information = _slopes(at, y, line, link)[1]
    if not information:
        raise refuse_fit(FitFault.NOT_CONVERGED)
    return at, 1.0 / float(np.sqrt(information))


def _link(share: float, link: Link) -> float:
    return float(np.log(share / (1.0 - share)) if link is Link.LOGIT else np.log(-np.log1p(-share)))


def _slopes(at: float, y: Array, line: Array, link: Link) -> tuple[float, float]:
    """The sum of the scores at an intercept, and the expected information."""
    scores, information = find_slopes(np.ones((len(y), 1)), np.array([at]), y, link, line)
    return float(scores.sum()), float(information.sum())
