"""A binomial fit to arrays, logit or complementary log-log, as the packaging takes it."""

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from clinicalc.development.estimated_hazards import FixedTerms
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.fitted import fit_with_intercept
from clinicalc.estimation.logistic import Link, LogisticFit, fit_logistic, robust_covariance

Array = NDArray[np.float64]
Codes = NDArray[np.int64]


def fit_risks(
    y: Array, x: Array, names: Sequence[str], fixed: FixedTerms, kind: FitKind, *, robust: bool, cluster: Codes | None
) -> tuple[LogisticFit, Fit]:
    """The engine's fit, and the Fit: intercept with every term, fixed ones too, at zero. Raises FitRefused.

    A robust covariance is White's with the factor n / (n - k), with clusters G / (G - 1) times (n - 1) / (n - k).
    """
    link = Link.LOGIT if kind is FitKind.LOGISTIC else Link.CLOGLOG
    offset = fixed.sum if len(fixed.coefficients) else None
    fit = fit_logistic(y, x, link=link, offset=offset)
    covariance = fit.covariance
    if robust:
        covariance = robust_covariance(y, x, fit, cluster=cluster, offset=offset)
    at_zero = np.zeros(x.shape[1]).tolist()
    made = fit_with_intercept(kind, names, fit.coefficients.tolist(), covariance, reference=at_zero, robust=robust)
    words = "Logistic fit" if kind is FitKind.LOGISTIC else "Binomial fit with complementary log-log link"
    remark = f"{words} to {int(fit.people):,} people with {int(fit.events):,} events."
    return fit, replace(made, remarks=(remark,))
