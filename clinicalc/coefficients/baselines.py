"""lp0, the linear predictor of an equation at one horizon with every term at zero."""

import math
from typing import Literal

from msgspec import UnsetType

from clinicalc.coefficients.schema import Horizon


def baseline(horizon: Horizon, link: Literal["logit", "cloglog"]) -> float | None:
    """The intercept (logit) or log H0 (cloglog); None where what the link needs is incomplete.

    log H0 is the log cumulative hazard as given, or log(−log S0) less the mean linear predictor that S0 holds at.
    """
    if link == "logit":
        return None if isinstance(horizon.intercept, UnsetType) else horizon.intercept
    if not isinstance(horizon.log_cumulative_hazard, UnsetType):
        return horizon.log_cumulative_hazard
    survival, mean = horizon.baseline_survival, horizon.mean_linear_predictor
    if isinstance(survival, UnsetType) or isinstance(mean, UnsetType) or not 0 < survival < 1:
        return None
    return math.log(-math.log(survival)) - mean
