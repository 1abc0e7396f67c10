"""A fit as the packaging takes it, whatever the family: a baseline with every term at zero, slopes, precision."""

from dataclasses import dataclass
from enum import StrEnum

from clinicalc.coefficients.schema import Matrix

Row = tuple[float, ...]


class FitKind(StrEnum):
    """What was fitted."""

    LOGISTIC = "logistic"
    CLOGLOG = "cloglog"
    COX = "cox"
    FINE_GRAY = "fine-gray"

    @property
    def link(self) -> str:
        """The link of the coefficient file."""
        return "logit" if self is FitKind.LOGISTIC else "cloglog"

    @property
    def has_intercept(self) -> bool:
        """Whether the baseline is a coefficient of the fit, and not a hazard beside it."""
        return self in (FitKind.LOGISTIC, FitKind.CLOGLOG)


@dataclass(frozen=True, slots=True)
class FitBaseline:
    """At one horizon, in the terms' own units: eta = lp0 + x'b, var = variance + (x - centre)'V(x - centre).

    `time` is in the fit's own unit of time, None where the fit has an intercept and no time; `variance` and `centre`
    are None where the precision of the baseline is not known.
    """

    time: float | None
    lp0: float
    variance: float | None = None
    centre: Row | None = None


@dataclass(frozen=True, slots=True)
class Fit:
    """Slopes by name (the intercept is in `baselines`), their covariance in the same order, and the baselines.

    `remarks` are sentences for the person who packages: what was taken for granted and what was checked.
    """

    kind: FitKind
    names: tuple[str, ...]
    coefficients: Row
    covariance: Matrix | None
    robust: bool
    baselines: tuple[FitBaseline, ...]
    remarks: tuple[str, ...] = ()
