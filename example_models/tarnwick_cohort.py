"""The invented Tarnwick cohort, the rule its outcome is drawn by, and the logistic model fitted to it.

No person in it exists. The design is written out here in numpy and does not pass through the program, so that the one
can be checked by the other.
"""

from collections.abc import Mapping
from dataclasses import dataclass
from statistics import NormalDist
from typing import Any

import numpy as np
import pandas as pd
import statsmodels.api as sm
from numpy.typing import NDArray

Array = NDArray[np.float64]
Knots = tuple[float, float, float, float]

PEOPLE = 6000
SEED = 20260301
TRUE_INTERCEPT = -3.6
TRUTH: Mapping[str, float] = {
    "age": 0.85,
    "age_squared": -0.06,
    "male": 0.45,
    "systolic_bp": 0.14,
    "bp_treated": 0.35,
    "total_cholesterol": 0.20,
    "hdl_cholesterol": -0.75,
    "smoker": 0.75,
    "diabetes": 0.65,
    "age_smoker": -0.15,
    "age_systolic_bp": -0.02,
}
"""The rule by which the outcome is drawn; bent in age by a square, which the fit does not know and has splines for."""


def draw_cohort() -> pd.DataFrame:
    """The cohort: one row a person, answers as 0 and 1, values rounded as they are measured, `event` last.

    Made from the raw output of the bit generator, which numpy promises not to change, unlike its distributions.
    """
    raw = np.random.PCG64(SEED).random_raw(9 * PEOPLE).astype(np.uint64).reshape(9, PEOPLE)
    u = ((raw >> np.uint64(11)).astype(np.float64) + 0.5) * 2.0**-53
    normal = NormalDist()
    body, z_sbp, z_tc, z_hdl = (np.array([normal.inv_cdf(float(x)) for x in row]) for row in u[:4])
    age = 35.0 + np.floor(45.0 * u[4] ** 1.15)
    male = (u[5] < 0.48).astype(np.float64)
    a = (age - 55.0) / 10.0
    # `body` stands for what weight and habits do to all of them at once, and is not recorded
    sbp = np.rint(np.exp(4.85 + 0.04 * a + 0.02 * male + 0.045 * body + 0.10 * z_sbp))
    tc = np.round(np.maximum(5.3 + 0.10 * a - 0.15 * male + 0.25 * body + 0.95 * z_tc, 2.4), 1)
    hdl = np.round(np.exp(0.42 - 0.20 * male - 0.08 * body + 0.20 * z_hdl), 1)
    diabetes = (u[6] < _expit(-2.9 + 0.45 * a + 0.6 * body)).astype(np.float64)
    treated = (u[7] < _expit(-1.9 + 0.8 * a + 0.4 * body + 0.6 * diabetes + 0.02 * (sbp - 130.0))).astype(np.float64)
    smoker, event = _split(u[8], _expit(-1.2 - 0.25 * a + 0.2 * male))
    people = pd.DataFrame(
        {
            "age": age,
            "male": male,
            "systolic_bp": sbp,
            "bp_treated": treated,
            "total_cholesterol": tc,
            "hdl_cholesterol": hdl,
            "smoker": smoker,
            "diabetes": diabetes,
        }
    )
    return people.assign(event=(event < true_probability(people)).astype(np.float64))


def true_probability(people: pd.DataFrame) -> Array:
    """The probability by which each person's event is drawn, shape (n,)."""
    columns = _plain_terms(people)
    columns["age_squared"] = columns["age"] ** 2
    eta = TRUE_INTERCEPT + sum(value * columns[name].to_numpy() for name, value in TRUTH.items())
    return _expit(np.asarray(eta, dtype=np.float64))


def _split(u: Array, share: Array) -> tuple[Array, Array]:
    """A yes/no with the given shares, and what is left of u: uniform again and independent of the answer."""
    yes = u < share
    return yes.astype(np.float64), np.where(yes, u / share, (u - share) / (1.0 - share))


def _expit(eta: Array) -> Array:
    return 1.0 / (1.0 + np.exp(-eta))


@dataclass(frozen=True, slots=True, eq=False)
class Fit:
    """The fitted model: `result` is statsmodels' own object, whose first parameter is the intercept."""

    cohort: pd.DataFrame
    knots: Knots
    result: Any

    @property
    def slopes(self) -> Array:
        """The coefficients in file order, without the intercept."""
        return np.asarray(self.result.params, dtype=np.float64)[1:]

    @property
    def fitted(self) -> Array:
        """The fitted probability of each person, shape (n,)."""
        return np.asarray(self.result.predict(), dtype=np.float64)

    def limits(self, people: pd.DataFrame) -> Array:
        """Probability, lower and upper 95 % limit by statsmodels' get_prediction, shape (n, 3)."""
        prediction = self.result.get_prediction(with_constant(design_frame(people, self.knots)), which="mean")
        return np.column_stack([prediction.predicted, prediction.conf_int(alpha=0.05)])


def fit_model(cohort: pd.DataFrame) -> Fit:
    """The logistic model of the event. Raises RuntimeError where it does not converge."""
    low, lower, upper, high = (float(np.rint(np.quantile(cohort["age"], q))) for q in (0.05, 0.35, 0.65, 0.95))
    knots = (low, lower, upper, high)
    return Fit(cohort, knots, maximise(cohort["event"], design_frame(cohort, knots)))


def maximise(answer: pd.Series, design: pd.DataFrame) -> Any:
    """Statsmodels' logistic fit by maximum likelihood, the intercept first; RuntimeError where it does not converge."""
    result = sm.Logit(answer, with_constant(design)).fit(method="newton", maxiter=100, tol=1e-11, disp=False)
    if not result.mle_retvals["converged"]:
        raise RuntimeError("the fit did not converge")
    return result


def concordance(fit: Fit, among: NDArray[np.bool_] | None = None) -> float:
    """The C statistic: of all pairs with and without the event, the share in which the former has the higher figure."""
    people = np.full(PEOPLE, True) if among is None else among
    rank = pd.Series(fit.fitted[people]).rank().to_numpy()
    event = fit.cohort["event"].to_numpy()[people] == 1.0
    cases, others = int(event.sum()), int((~event).sum())
    return float((rank[event].sum() - cases * (cases + 1) / 2) / (cases * others))


def widest_gap(fit: Fit) -> float:
    """The largest difference of observed and mean fitted share over tenths of the fitted probability."""
    order = np.argsort(fit.fitted, kind="stable")
    event = fit.cohort["event"].to_numpy()
    return max(abs(float(event[part].mean() - fit.fitted[part].mean())) for part in np.array_split(order, 10))


def design_frame(people: pd.DataFrame, knots: Knots) -> pd.DataFrame:
    """The design terms in file order, one column each, without the intercept."""
    design, years = _plain_terms(people), people["age"].to_numpy(dtype=np.float64)
    design.insert(1, "age_spline_1", _spline(years, knots, 0) / 10.0)
    design.insert(2, "age_spline_2", _spline(years, knots, 1) / 10.0)
    return design


def _plain_terms(people: pd.DataFrame) -> pd.DataFrame:
    decades, pressure = (people["age"] - 55.0) / 10.0, (people["systolic_bp"] - 120.0) / 10.0
    return pd.DataFrame(
        {
            "age": decades,
            "male": people["male"],
            "systolic_bp": pressure,
            "bp_treated": people["bp_treated"],
            "total_cholesterol": people["total_cholesterol"] - 5.0,
            "hdl_cholesterol": people["hdl_cholesterol"] - 1.4,
            "smoker": people["smoker"],
            "diabetes": people["diabetes"],
            "age_smoker": decades * people["smoker"],
            "age_systolic_bp": decades * pressure,
        }
    )


def with_constant(design: pd.DataFrame) -> pd.DataFrame:
    """The design with the intercept's column of ones in front."""
    return pd.concat([pd.Series(1.0, index=design.index, name="intercept"), design], axis=1)


def _spline(x: Array, knots: Knots, j: int) -> Array:
    """Restricted cubic spline function j (from 0). Source: Harrell, Regression Modeling Strategies, 2015, eq. 2.25."""
    cubes = [np.clip(x - knot, 0.0, None) ** 3 for knot in knots]
    gap = knots[3] - knots[2]
    restricted = cubes[j] - cubes[2] * (knots[3] - knots[j]) / gap + cubes[3] * (knots[2] - knots[j]) / gap
    return np.asarray(restricted / (knots[3] - knots[0]) ** 2, dtype=np.float64)
