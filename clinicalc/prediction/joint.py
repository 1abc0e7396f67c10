"""Two linear predictors of the same people under one set of uncertain coefficients, as a bivariate normal."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Line, Precision
from clinicalc.prediction.predict import adjustment_variance, linear_predictor


@dataclass(frozen=True, slots=True)
class JointNormal:
    """eta1 and eta2 = eta1 + step: means, variances, and the covariance of eta1 with the step.

    Kept as a step and not as two variances with a covariance: where the two rows differ little, the step's variance
    would be the small difference of large ones.
    """

    first: float
    second: float
    variance: float
    with_step: float
    step_variance: float

    @property
    def turned(self) -> "JointNormal":
        """The same two, the other one first."""
        variance = max(self.variance + 2.0 * self.with_step + self.step_variance, 0.0)
        return JointNormal(
            self.second, self.first, variance, -(self.with_step + self.step_variance), self.step_variance
        )

    @property
    def slope(self) -> float:
        """How far eta2 moves on average when eta1 moves by one standard deviation of its own."""
        if self.variance == 0.0:
            return 0.0
        return float((self.variance + self.with_step) / np.sqrt(self.variance))

    @property
    def remainder(self) -> float:
        """Standard deviation of eta2 where eta1 is known."""
        explained = 0.0 if self.variance == 0.0 else self.with_step * self.with_step / self.variance
        return float(np.sqrt(max(self.step_variance - explained, 0.0)))


def join_rows(
    line: Line, band: Precision | None, design: Sequence[Column], adjustment: Adjustment | None
) -> JointNormal:
    """The joint normal of two rows of design columns, each of shape (2,), adjusted as asked.

    cov(eta1, eta2) = a + (x1 - c)'V(x2 - c); an adjustment multiplies it with its slope squared and adds
    [1, eta1] C [1, eta2]' with C the covariance of its intercept and slope. Without `band` only the latter is left.
    """
    own, changed = (float(eta) for eta in linear_predictor(line, design))
    variance = with_step = step_variance = 0.0
    if band is not None:
        centre = np.array(band.centre)
        rows = np.array([design[term] for term in band.estimated]).reshape(centre.size, 2)
        away = band.root.T @ (rows[:, 0] - centre)  # one patient, so a matrix product cannot differ between rows
        apart = band.root.T @ (rows[:, 1] - rows[:, 0])
        variance = band.variance + float(away @ away)
        with_step, step_variance = float(away @ apart), float(apart @ apart)
    if adjustment is None:
        return JointNormal(own, changed, variance, with_step, step_variance)
    squared, step = adjustment.slope * adjustment.slope, changed - own
    v01, v11 = (0.0, 0.0) if adjustment.covariance is None else adjustment.covariance[1:]
    return JointNormal(
        first=adjustment.intercept + adjustment.slope * own,
        second=adjustment.intercept + adjustment.slope * changed,
        variance=squared * variance + float(adjustment_variance(adjustment, np.array([own]))[0]),
        with_step=squared * with_step + step * (v01 + own * v11),
        step_variance=squared * step_variance + step * step * v11,
    )
