"""The apparent calibration of a study: predictions as its coefficient file gives them, people as its fit uses them."""

from pathlib import Path

import numpy as np
import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.coefficients.spans import Span
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.package import Package
from clinicalc.development.study_calibration import FitCalibration, calibrate_fit
from clinicalc.estimation.calibrated import Observed, Smoother
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study, package_study
from tests.development.describing import Tree, linear_terms
from tests.development.studying import BINARY, plain_study, timed, write_people, write_study
from tests.estimation import cohorts

HORIZONS = [{"time": 180, "unit": "d"}, {"time": 365, "unit": "d"}]


def fitted(folder: Path, study: Tree) -> tuple[FittedStudy, Package]:
    opened, course = open_study(write_study(folder, study)), Course()
    found = fit_study(opened, check_data(opened, course), course)
    return found, package_study(found, course)


def number(package: Package, values: dict[str, object], span: Span | None) -> float:
    """The number that the coefficient file gives for somebody."""
    model = package.model
    found = assess(model, entry_from_texts({key: str(value) for key, value in values.items()}), span=span)
    assert found.estimate is not None, found.findings
    return found.estimate.probability


def assert_mean(found: FitCalibration, numbers: list[float]) -> None:
    assert found.calibration.overall.people == len(numbers)
    assert found.calibration.overall.predicted == pytest.approx(float(np.mean(numbers)), rel=1e-9)
    assert found.calibration.spread.predictions == pytest.approx(np.sort(numbers), rel=1e-9)


def test_each_horizon_of_a_cox_fit(tmp_path: Path) -> None:
    people = cohorts.lung().cohort
    names = ("age", "sex_code", "ph_ecog", "wt_loss")
    columns = dict(zip(names, people.x.T, strict=True))
    write_people(tmp_path / "people.csv", columns | {"time": people.times, "status": people.events.astype(int)})
    study, package = fitted(tmp_path, plain_study(names, timed(), {"kind": "cox"}, horizons=HORIZONS))
    half, year = calibrate_fit(study)
    assert [each.span for each in (half, year)] == [Span(180, "d"), Span(365, "d")]
    assert (half.fit, half.equations, half.censored) == ("all", ("all",), False)
    for each in (half, year):
        values = [dict(zip(names, row, strict=True)) for row in people.x.tolist()]
        assert_mean(each, [number(package, person, each.span) for person in values])
        assert each.calibration.observed is Observed.KAPLAN_MEIER
        # fitted to these very people, so the whole is right, but for the difference of mean and product of survivals
        assert each.calibration.overall.observed == pytest.approx(each.calibration.overall.predicted, abs=0.02)
    assert year.calibration.horizon == 365.0
    assert year.calibration.curve is not None
    assert year.calibration.curve.smoother is Smoother.COX_SPLINE


def test_a_logistic_fit_predicts_as_many_as_there_were(tmp_path: Path) -> None:
    people = cohorts.birthwt()
    names = [f"x{place}" for place in range(people.x.shape[1])]
    columns = dict(zip(names, people.x.T, strict=True))
    write_people(tmp_path / "people.csv", columns | {"y": people.y.astype(int)})
    study, package = fitted(tmp_path, plain_study(names, BINARY, {"kind": "logistic"}))
    (found,) = calibrate_fit(study)
    values = [dict(zip(names, row, strict=True)) for row in people.x.tolist()]
    assert_mean(found, [number(package, person, found.span) for person in values])
    overall = found.calibration.overall
    assert overall.observed == pytest.approx(overall.predicted, rel=1e-9)  # the score of the intercept
    assert found.calibration.curve is not None
    assert found.calibration.curve.smoother is Smoother.LOWESS
    assert found.calibration.curve.resamples == 200


def test_strata_are_looked_at_together_each_with_its_own_baseline(tmp_path: Path) -> None:
    people = cohorts.veteran()
    assert people.strata is not None
    names = ("trt", "karno", "age")
    cells = [("squamous", "smallcell", "adeno", "large")[code] for code in people.strata]
    columns = dict(zip(names, people.cohort.x.T, strict=True))
    times = {"time": people.cohort.times, "status": people.cohort.events.astype(int)}
    write_people(tmp_path / "people.csv", columns | {"cell": cells} | times)
    choices = [{"id": id, "label": id} for id in ("squamous", "smallcell", "adeno", "large")]
    cell: Tree = {"id": "cell", "label": "Cell type", "kind": "choice", "group": "Values", "choices": choices}
    horizons = [{"time": 90, "unit": "d"}]
    plan = {"kind": "cox", "strata": "cell"}
    asked = plain_study([*names, cell], timed(), plan, horizons=horizons, terms=linear_terms(list(names)))
    study, package = fitted(tmp_path, asked)
    (found,) = calibrate_fit(study)
    assert found.equations == tuple(f"all_{choice['id']}" for choice in choices)
    rows = zip(people.cohort.x.tolist(), cells, strict=True)
    values = [dict(zip(names, row, strict=True)) | {"cell": own} for row, own in rows]
    assert_mean(found, [number(package, person, found.span) for person in values])


def test_a_fine_gray_fit_is_held_against_incidence(tmp_path: Path) -> None:
    people = cohorts.mgus2_competing()
    names = [f"x{place}" for place in range(people.x.shape[1])]
    columns = dict(zip(names, people.x.T, strict=True))
    write_people(tmp_path / "people.csv", columns | {"time": people.times, "status": people.status.astype(int)})
    horizons = [{"time": 120, "unit": "mo"}]
    study = plain_study(names, timed("mo", competing=["2"]), {"kind": "fine-gray"}, horizons=horizons)
    study["equations"][0]["competing_events"] = {"handled": "subdistribution", "which": "Death of another cause."}
    made, package = fitted(tmp_path, study)
    (found,) = calibrate_fit(made)
    assert not found.censored
    assert found.calibration.observed is Observed.AALEN_JOHANSEN
    assert found.calibration.overall.observed == pytest.approx(found.calibration.overall.predicted, abs=0.01)
    assert found.calibration.curve is not None
    assert found.calibration.curve.smoother is Smoother.FINE_GRAY_SPLINE
    values = [dict(zip(names, row, strict=True)) for row in people.x.tolist()]
    assert_mean(found, [number(package, person, found.span) for person in values])


def test_competing_events_that_a_fit_censors_are_censored_here(tmp_path: Path) -> None:
    rng = np.random.default_rng(4)
    x = rng.normal(size=400)
    own, other = rng.exponential(8 * np.exp(-x)), rng.exponential(12, 400)
    lost = rng.uniform(1, 12, 400)
    times = np.round(np.minimum(np.minimum(own, other), lost), 3) + 0.001
    status = np.where(lost <= np.minimum(own, other), 0, np.where(own < other, 1, 2))
    write_people(tmp_path / "people.csv", {"x": x, "time": times, "status": status})
    outcome = timed("a", competing=["2"])
    study = plain_study(["x"], outcome, {"kind": "cox"}, horizons=[{"years": 5}])
    study["equations"][0]["competing_events"] = {"handled": "censored", "which": "Death of another cause."}
    (found,) = calibrate_fit(fitted(tmp_path, study)[0])
    assert found.censored
    assert found.calibration.observed is Observed.KAPLAN_MEIER
    assert found.calibration.overall.observed == pytest.approx(found.calibration.overall.predicted, abs=0.02)


def test_people_with_filled_in_values_are_among_them(tmp_path: Path) -> None:
    rng = np.random.default_rng(6)
    x, z = rng.normal(size=(2, 300))
    y = (rng.random(300) < 1 / (1 + np.exp(1.0 - x - 0.5 * z))).astype(int)
    lacking = rng.random(300) < 0.15
    write_people(tmp_path / "people.csv", {"x": np.where(lacking, np.nan, x), "z": z, "y": y})
    imputation = {"sets": 5, "rounds": 5, "seed": 1}
    study, package = fitted(tmp_path, plain_study(["x", "z"], BINARY, {"kind": "logistic"}, imputation=imputation))
    (found,) = calibrate_fit(study)
    overall = found.calibration.overall
    assert (overall.people, overall.events) == (300, int(y.sum()))
    assert overall.observed == pytest.approx(overall.predicted, abs=0.01)
    # whoever lacks nothing has the number that the file gives
    known = [number(package, {"x": x[place], "z": z[place]}, found.span) for place in np.flatnonzero(~lacking)]
    apart = np.abs(found.calibration.spread.predictions[:, None] - np.array(known)).min(axis=0)
    assert apart.max() < 1e-9
