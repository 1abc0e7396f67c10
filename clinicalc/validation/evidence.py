"""What people say about predictions on the scale on which they add up: eta, who had the event, how long each counted.

A yes or no: Bernoulli, eta the log odds of the predicted risk. Times: the event by the horizon as a Poisson count with
mean A exp(eta), eta = log(-log(1 - risk)) and A the share of the horizon's hazard under which somebody stood, from the
people's own hazard with eta as offset (Crowson, Atkinson & Therneau, Stat Methods Med Res 2016;25:1692, who take the
model's own). Competing events: the hazard of the subdistribution, under which people stand on after another event as
long as they would still have been watched (Fine & Gray, J Am Stat Assoc 1999;94:496).
"""

from dataclasses import dataclass
from math import log

import numpy as np
from numpy.typing import NDArray

from clinicalc.estimation.calibration_groups import Watched
from clinicalc.estimation.fine_gray import CompetingCohort, sum_subdistribution
from clinicalc.estimation.hazard_sums import Cohort, Ties, sum_hazards
from clinicalc.estimation.watching_weights import find_watching
from clinicalc.validation.predicted import Outcome, PredictedPeople, YesNo

Array = NDArray[np.float64]

MOST_STEPS = 60
_FAR = 700.0
"""exp(-700) is about the least risk that a number can hold."""


@dataclass(frozen=True, slots=True, eq=False)
class Evidence:
    """Shapes (n,). `exposure` is None for a yes or no. `spread` is how much wider than a count's the intercept's
    variance is, since the hazard late in the follow-up rests on few (1 for a yes or no).
    """

    happened: Array
    exposure: Array | None
    spread: float = 1.0

    @property
    def events(self) -> int:
        """How many had the event."""
        return int(self.happened.sum())

    def expect(self, eta: Array) -> Array:
        """The expected events of each, (n,)."""
        if self.exposure is None:
            return np.asarray(1.0 / (1.0 + np.exp(-eta)), dtype=np.float64)
        return np.asarray(self.exposure * np.exp(eta), dtype=np.float64)

    def weigh(self, expected: Array) -> Array:
        """The information of each about eta, (n,)."""
        return expected if self.exposure is not None else expected * (1.0 - expected)

    def loglik(self, eta: Array) -> float:
        """The log-likelihood but for a constant."""
        if self.exposure is None:
            return float((self.happened * eta - np.logaddexp(0.0, eta)).sum())
        return float((self.happened * eta).sum() - self.expect(eta).sum())


@dataclass(frozen=True, slots=True, eq=False)
class Fitted:
    """eta of everybody after the columns' part was added, its coefficients, their covariance, the log-likelihood."""

    eta: Array
    coefficients: Array
    covariance: Array
    loglik: float


def scale_of(predicted: PredictedPeople, outcome: Outcome) -> Array:
    """The predictions on the scale on which they add up, (n,), moved to where a risk has just rounded to 0 or 1."""
    if isinstance(outcome, YesNo):
        return np.clip(predicted.log_odds, -_FAR, _FAR)
    return np.clip(predicted.log_hazard, -_FAR, log(_FAR))


def gather_evidence(eta: Array, outcome: Outcome, horizon: float) -> Evidence:
    """The evidence of people with an outcome by the horizon, in the unit of their times; eta is finite."""
    if isinstance(outcome, YesNo):
        return Evidence(outcome.y, None)
    happened = outcome.seen(horizon).astype(np.float64)
    at = np.unique(outcome.times[happened == 1.0])
    hazards, squares = _sum_up(eta, outcome, at)
    whole = float(hazards[-1])
    running = np.append(0.0, hazards)
    exposure = running[np.searchsorted(at, np.minimum(outcome.times, horizon), side="right")]
    if outcome.entry is not None:
        exposure = exposure - running[np.searchsorted(at, outcome.entry, side="right")]
    if outcome.competing:
        exposure = exposure + _stand_on(outcome, at, hazards, horizon)
    spread = float(squares[-1]) / (whole * whole) * float(happened.sum())
    return Evidence(happened, np.asarray(exposure / whole, dtype=np.float64), max(spread, 1.0))


def fit_beside(evidence: Evidence, eta: Array, columns: tuple[Array, ...]) -> Fitted | None:
    """The coefficients of columns (n,) beside the offset eta, by Newton's steps; None where there is no estimate."""
    x = np.column_stack(columns) if columns else np.empty((len(eta), 0))
    b = np.zeros(x.shape[1])
    now, loglik = eta, evidence.loglik(eta)
    for _ in range(MOST_STEPS):
        expected = evidence.expect(now)
        information = (x * evidence.weigh(expected)[:, None]).T @ x
        score = x.T @ (evidence.happened - expected)
        try:
            covariance = np.asarray(np.linalg.inv(information), dtype=np.float64)
        except np.linalg.LinAlgError:
            return None
        step = covariance @ score
        if not np.isfinite(step).all():
            return None
        if float(step @ score) <= 1e-10:
            return Fitted(now, b, covariance, loglik)
        for _ in range(MOST_STEPS):
            tried = eta + x @ (b + step)
            with np.errstate(over="ignore", invalid="ignore"):
                found = evidence.loglik(tried)
            if found >= loglik:  # not for NaN
                break
            step = step / 2.0
        else:
            return Fitted(now, b, covariance, loglik)
        b, now, loglik = b + step, tried, found
    return None


def _sum_up(eta: Array, outcome: Watched, at: Array) -> tuple[Array, Array]:
    """H and A at each of the times, with eta as offset."""
    x, one = eta[:, None], np.ones(1)
    if outcome.competing:
        found = sum_subdistribution(CompetingCohort(outcome.times, outcome.status, x), one, at.tolist())
    else:
        events = (outcome.status == 1).astype(np.float64)
        found = sum_hazards(Cohort(outcome.times, events, x, outcome.entry), one, at.tolist(), Ties.EFRON)
    return np.array([sums.hazard for sums in found]), np.array([sums.squares for sums in found])


def _stand_on(outcome: Watched, at: Array, hazards: Array, horizon: float) -> Array:
    """What people stand under after another event: the sum of G(u) dH(u) / G(time) from there to the horizon."""
    left = (outcome.status == 2) & (outcome.times < horizon)
    watching = find_watching(outcome.times, outcome.status)
    steps = np.append(0.0, np.cumsum(np.diff(hazards, prepend=0.0) * watching.before(at)))
    rest = steps[-1] - steps[np.searchsorted(at, outcome.times, side="right")]
    own = watching.before(outcome.times)
    return np.where(left & (own > 0.0), rest / np.where(own > 0.0, own, 1.0), 0.0)
