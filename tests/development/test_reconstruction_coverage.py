"""Rebuilt bands of repeated fits to invented data: how often they hold the true risk, and how wide they are.

400 replicates, generator PCG64, seed 20261201: 3,000 people with seven related values, fitted by a short Newton of the
test's own; of each fit only what a paper prints is kept (coefficients, standard errors, baseline, events); 1,000 other
people are the reference; 300 further people are the patients. Takes some seconds.
"""

from dataclasses import dataclass

import msgspec
import numpy as np
import pytest
from numpy.typing import NDArray

from clinicalc.coefficients.schema import (
    CompetingEvents,
    Equation,
    Factor,
    Horizon,
    ModelContent,
    NoBand,
    ReconstructedBand,
    Term,
)
from clinicalc.covariates.design import compile_terms, design_columns
from clinicalc.development.reconstruction import reconstruct_bands
from clinicalc.development.reconstruction_plan import EquationPlan, ReconstructionPlan, ReferenceRows
from clinicalc.prediction.line import lines_of
from clinicalc.prediction.predict import predict
from tests.development.published import content_of, numbers

Array = NDArray[np.float64]

REPLICATES = 400
FITTED, REFERENCE, PATIENTS = 3000, 1000, 300
SEED = 20261201
UPPER_95 = 1.959963984540054

NAMES = ("age", "pressure", "lipid", "hdl", "weight", "smoker", "treated")
TRUE_MAIN = np.array([0.07, 0.012, 0.25, -0.5, 0.015, 0.6, 0.3])
PRODUCTS = (("age", "age"), ("age", "smoker"), ("pressure", "treated"))
TRUE_PRODUCTS = np.array([0.0006, -0.012, -0.006])
# about the middle (55 years, 135 mmHg) the slopes stay those of the main effects
TRUE_BESIDE = TRUE_MAIN + np.array([-2 * 0.0006 * 55, 0.0, 0.0, 0.0, 0.0, 0.012 * 55, 0.006 * 135])


@dataclass(frozen=True, slots=True)
class Fit:
    """What a fit leaves: slopes, their covariance, the baseline at nought, and the events by the horizon."""

    slopes: Array
    covariance: Array
    baseline: float
    events: int


def draw_values(rng: np.random.Generator, count: int) -> Array:
    """Related values, far from nought as a paper has them: years, mmHg, mmol/L, kg, and two answers."""
    z = rng.standard_normal((count, 5))
    age = 55 + 10 * z[:, 0]
    pressure = 135 + 18 * (0.45 * z[:, 0] + 0.89 * z[:, 1])
    lipid = 5.6 + 1.0 * (0.2 * z[:, 0] + 0.2 * z[:, 1] + 0.96 * z[:, 2])
    hdl = 1.4 + 0.35 * (-0.25 * z[:, 2] + 0.97 * z[:, 3])
    weight = 78 + 13 * (0.3 * z[:, 1] - 0.3 * z[:, 3] + 0.9 * z[:, 4])
    smoker = rng.random(count) < 1 / (1 + np.exp(0.6 + 0.03 * (age - 55)))
    treated = rng.random(count) < 1 / (1 + np.exp(1.2 - 0.05 * (age - 55) - 0.03 * (pressure - 135)))
    return np.column_stack([age, pressure, lipid, hdl, weight, smoker, treated]).astype(np.float64)


def design(values: Array, *, products: bool) -> Array:
    place = {name: index for index, name in enumerate(NAMES)}
    more = [values[:, place[one]] * values[:, place[other]] for one, other in PRODUCTS]
    return np.column_stack([values, *more]) if products else values


def whiten(x: Array) -> tuple[Array, Array]:
    """The columns' means, and what makes them unrelated and alike in spread: Newton then needs no care."""
    return x.mean(axis=0), np.linalg.inv(np.linalg.cholesky(np.cov(x, rowvar=False))).T


def fit_hazard(x: Array, time: Array, event: Array, horizon: float) -> Fit:
    """Cox's partial likelihood by Newton's method, no ties; the cumulative hazard at the horizon by Breslow's sum."""
    order = np.argsort(-time)
    middle, turn = whiten(x)
    z, died, when = ((x - middle) @ turn)[order], event[order] == 1, time[order]
    b = np.zeros(x.shape[1])
    for _ in range(50):
        r = np.exp(z @ b)
        s0 = np.cumsum(r)[died]
        mean = np.cumsum(r[:, None] * z, axis=0)[died] / s0[:, None]
        # sum over the events of the mean square at risk, by person: each counts in all risk sets that hold him
        shares = np.cumsum(np.where(died, 1 / np.cumsum(r), 0.0)[::-1])[::-1]
        information = (z * (r * shares)[:, None]).T @ z - mean.T @ mean
        step = np.linalg.solve(information, (z[died] - mean).sum(axis=0))
        step = step / max(1.0, float(np.abs(step).max()) / 0.5)  # from far off a whole step may run away
        b = b + step
        if np.abs(step).max() < 1e-10:
            break
    hazard = float((1 / s0)[when[died] <= horizon].sum())
    slopes = turn @ b
    covariance = turn @ np.linalg.inv(information) @ turn.T
    return Fit(slopes, covariance, float(np.log(hazard) - middle @ slopes), int((when[died] <= horizon).sum()))


def fit_logistic(x: Array, y: Array) -> Fit:
    middle, turn = whiten(x)
    z = np.column_stack([np.ones(len(y)), (x - middle) @ turn])
    b = np.zeros(z.shape[1])
    for _ in range(50):
        p = 1 / (1 + np.exp(-z @ b))
        information = (z * (p * (1 - p))[:, None]).T @ z
        step = np.linalg.solve(information, z.T @ (y - p))
        b = b + step
        if np.abs(step).max() < 1e-10:
            break
    slopes = turn @ b[1:]
    covariance = turn @ np.linalg.inv(information)[1:, 1:] @ turn.T
    return Fit(slopes, covariance, float(b[0] - middle @ slopes), int(y.sum()))


def paper(link: str, products: bool) -> ModelContent:
    """The model without figures: they are put in replicate by replicate."""
    terms = [Term(name, 0.0, product=(Factor(name),)) for name in NAMES]
    if products:
        terms += [Term(f"{one}_{other}", 0.0, product=(Factor(one), Factor(other))) for one, other in PRODUCTS]
    horizon = Horizon(years=10.0, intercept=0.0) if link == "logit" else Horizon(years=10.0, log_cumulative_hazard=0.0)
    equation = Equation(
        "all",
        {},
        "logit" if link == "logit" else "cloglog",
        CompetingEvents("not_applicable"),
        tuple(terms),
        (horizon,),
        NoBand("It is to be rebuilt."),
    )
    return content_of(numbers(NAMES), (equation,))


def filled(content: ModelContent, fit: Fit) -> ModelContent:
    (equation,) = content.equations
    terms = tuple(
        msgspec.structs.replace(term, coefficient=float(slope))
        for term, slope in zip(equation.terms, fit.slopes, strict=True)
    )
    horizon = (
        Horizon(years=10.0, intercept=fit.baseline)
        if equation.link == "logit"
        else Horizon(years=10.0, log_cumulative_hazard=fit.baseline, events=fit.events)
    )
    return msgspec.structs.replace(
        content, equations=(msgspec.structs.replace(equation, terms=terms, horizons=(horizon,)),)
    )


@dataclass(frozen=True, slots=True)
class Found:
    """Share of patients whose true risk the rebuilt band holds; its median width over that of the whole covariance,
    and that of the band without correlations and centre over its own, on the link scale."""

    coverage: float
    full_width: float
    naive_width: float


def simulate(link: str, *, products: bool) -> Found:
    rng = np.random.Generator(np.random.PCG64(SEED))
    truth = np.concatenate([TRUE_BESIDE, TRUE_PRODUCTS]) if products else TRUE_MAIN
    centre = design(draw_values(rng, 50_000), products=products).mean(axis=0)
    level = -2.25 if link == "logit" else -2.45
    content = paper(link, products)
    held, full, naive = [], [], []
    for _ in range(REPLICATES):
        values = draw_values(rng, FITTED)
        x = design(values, products=products)
        eta = level + (x - centre) @ truth
        if link == "logit":
            fit = fit_logistic(x, (rng.random(FITTED) < 1 / (1 + np.exp(-eta))).astype(np.float64))
        else:
            # exponential times with hazard exp(eta) over 10 years, under observation for 10 to 15 years
            time = -10 * np.log(rng.random(FITTED)) / np.exp(eta)
            until = rng.uniform(10, 15, FITTED)
            fit = fit_hazard(x, np.minimum(time, until), (time <= until).astype(np.float64), 10.0)
        errors = dict(
            zip((t.id for t in content.equations[0].terms), np.sqrt(np.diag(fit.covariance)).tolist(), strict=True)
        )
        others = draw_values(rng, REFERENCE)
        plan = ReconstructionPlan(
            seed=1,
            rows=ReferenceRows({name: others[:, i] for i, name in enumerate(NAMES)}, "Other people of the same kind."),
            equations=(EquationPlan("all", people=FITTED, standard_errors=errors),),
        )
        made = reconstruct_bands(filled(content, fit), plan)
        patients = draw_values(rng, PATIENTS)
        px = design(patients, products=products)
        columns = {name: patients[:, i].copy() for i, name in enumerate(NAMES)}
        (line,) = lines_of(made.equations[0])
        result = predict(line, design_columns(compile_terms(made, made.equations[0]), columns))
        assert result.eta_lower is not None
        assert result.eta_upper is not None
        true = level + (px - centre) @ truth
        held.append((result.eta_lower <= true) & (true <= result.eta_upper))
        width = result.eta_upper - result.eta_lower
        band = made.equations[0].uncertainty
        assert isinstance(band, ReconstructedBand)
        a = band.at_centre[0].variance
        away = px - np.array(band.at_centre[0].centre)
        full.append(width / (2 * UPPER_95 * np.sqrt(a + np.einsum("ij,jk,ik->i", away, fit.covariance, away))))
        # every standard error as if unrelated, with the values as they are: uncentred
        variances = np.diag(fit.covariance)
        naive.append(2 * UPPER_95 * np.sqrt((px * px) @ variances + a) / width)
    return Found(float(np.mean(held)), float(np.median(np.concatenate(full))), float(np.median(np.concatenate(naive))))


@pytest.mark.parametrize(
    ("link", "products", "too_wide"),
    [("cloglog", False, 5.0), ("cloglog", True, 15.0), ("logit", False, 5.0), ("logit", True, 15.0)],
)
def test_rebuilt_bands_hold_the_true_risk_as_often_as_they_say(link: str, products: bool, too_wide: float) -> None:
    found = simulate(link, products=products)
    assert 0.93 < found.coverage < 0.97, found
    # as wide as the band of the whole covariance
    assert 0.95 < found.full_width < 1.05, found
    # and the same standard errors, uncentred and as if unrelated, make a band several times too wide
    assert found.naive_width > too_wide, found
