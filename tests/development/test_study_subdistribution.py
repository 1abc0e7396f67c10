"""A Fine–Gray study from the file of people to the bedside, what competing events come to, and what is refused.

R's figures: tests/reference/data/mgus2_finegray_coxph.json and tests/estimation/r_fine_gray.py, each with its calls.
"""

from pathlib import Path
from typing import Any

import numpy as np
import pytest
from scipy.stats import norm

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.spans import Span
from clinicalc.development.estimating import FittedStudy
from clinicalc.errors import DescriptionRefused
from clinicalc.estimation.incidence import kaplan_meier
from clinicalc.estimation.screened import Screen
from clinicalc.estimation.screening_words import word_screened
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study
from tests.development.describing import Tree, linear_terms
from tests.development.studying import BINARY, plain_study, run_study, timed, write_people, write_study
from tests.development.test_study_against_r import estimate_at
from tests.estimation import cohorts
from tests.estimation.r_fine_gray import BY_YEAR_OF_DIAGNOSIS, CURVES, CURVES_LATE, EFRON
from tests.reference.figures import SubdistributionLimits, load

LIMIT = 1e-10  # relative, of probabilities and limits
NAMES = ("age", "male", "hgb", "mspike")
HORIZONS = tuple({"time": time, "unit": "mo"} for time in (60, 120, 240))
SUBDISTRIBUTION = {"handled": "subdistribution", "which": "death without progression"}
CENSORED = SUBDISTRIBUTION | {"handled": "censored"}


def write_mgus2(folder: Path) -> None:
    """The 1360 complete cases; status 1 progression, 2 death before it."""
    people = cohorts.mgus2_competing()
    columns: dict[str, Any] = dict(zip(NAMES, people.x.T, strict=True))
    columns |= {"time": people.times, "status": people.status.astype(int), "dxyr": cohorts.mgus2_years_of_diagnosis()}
    write_people(folder / "people.csv", columns)


def study(competing: Tree, estimate: Tree, **more: Any) -> Tree:
    outcome = timed("mo", competing="2")
    tree = plain_study(NAMES, outcome, estimate, horizons=HORIZONS, **more)
    tree["equations"][0]["competing_events"] = competing
    return tree


def fine_gray(**more: Any) -> Tree:
    return study(SUBDISTRIBUTION, {"kind": "fine-gray"} | more)


def fit(folder: Path, tree: Tree) -> FittedStudy:
    read, course = open_study(write_study(folder, tree)), Course()
    return fit_study(read, check_data(read, course), course)


def refuse(folder: Path, tree: Tree) -> dict[str, str]:
    """What is said against a study, by place."""
    with pytest.raises(DescriptionRefused) as refused:
        fit(folder, tree)
    return {problem.path: problem.message for problem in refused.value.problems}


def test_survfit_of_finegray_at_the_bedside(tmp_path: Path) -> None:
    """The limits are those of log(-log(1 - risk)) with R's robust standard error of the cumulative hazard."""
    expected = load("mgus2_finegray_coxph", SubdistributionLimits)
    write_mgus2(tmp_path)
    model = run_study(write_study(tmp_path, fine_gray())).model
    equation = model.equations[0].content
    assert equation.competing_events.handled == "subdistribution"
    assert [term.coefficient for term in equation.terms] == pytest.approx(expected.coefficients, rel=LIMIT)
    covariance = np.array(equation.uncertainty.covariance)  # type: ignore[union-attr]
    assert covariance == pytest.approx(np.array(expected.robust_covariance), rel=LIMIT)
    assert (model.content.source.derivation.people, equation.horizons[2].still_at_risk) == (1360, 56)  # type: ignore[union-attr]
    assert len(expected.predictions) == 15
    for shown in expected.predictions:
        hazard = -np.log1p(-shown.probability)
        half = norm.isf(0.025) * shown.se_cumulative_hazard / hazard
        values = dict(zip(NAMES, map(repr, expected.profiles[shown.profile]), strict=True))
        found = estimate_at(model, values, Span(shown.time, "mo"))
        assert found.band is not None
        assert found.probability == pytest.approx(shown.probability, rel=LIMIT)
        limits = tuple(-np.expm1(-hazard * np.exp(side)) for side in (-half, half))
        assert (found.band.lower, found.band.upper) == pytest.approx(limits, rel=LIMIT)


def test_ties_by_efron_and_clusters(tmp_path: Path) -> None:
    write_mgus2(tmp_path)
    (found,) = fit(tmp_path, fine_gray(ties="efron", covariance="cluster", cluster="dxyr")).fits.values()
    assert found.coefficients == pytest.approx(EFRON.coefficients, rel=LIMIT)
    assert np.array(found.covariance) == pytest.approx(np.array(BY_YEAR_OF_DIAGNOSIS["efron"]), rel=LIMIT)
    assert found.robust


def test_a_fixed_term_is_an_offset(tmp_path: Path) -> None:
    """Held at what was estimated, it leaves every other coefficient and each probability as they were."""
    write_mgus2(tmp_path)
    whole = run_study(write_study(tmp_path, fine_gray())).model
    slope = whole.equations[0].content.terms[0].coefficient
    held = linear_terms(["age"])[0] | {"coefficient": slope, "fixed": True}
    tree = study(SUBDISTRIBUTION, {"kind": "fine-gray"}, terms=[held, *linear_terms(NAMES[1:])])
    part = run_study(write_study(tmp_path, tree)).model
    person = dict(zip(NAMES, ("61", "1", "12.4", "1.3"), strict=True))
    for span in whole.spans:
        one, other = estimate_at(whole, person, span), estimate_at(part, person, span)
        assert other.probability == pytest.approx(one.probability, rel=1e-9)


@pytest.mark.parametrize("kind", ["cox", "fine-gray"])
def test_what_competing_events_come_to(kind: str, tmp_path: Path) -> None:
    write_mgus2(tmp_path)
    counted = kind == "fine-gray"
    (figures,) = fit(tmp_path, study(SUBDISTRIBUTION if counted else CENSORED, {"kind": kind})).figures
    assert (figures.people, figures.events, figures.competing) == (1360, 114, 849)
    assert [one.span.words for one in figures.incidences] == ["60 months", "120 months", "240 months"]
    assert [one.incidence for one in figures.incidences] == pytest.approx(CURVES.incidence, rel=1e-12)
    assert [one.se for one in figures.incidences] == pytest.approx(CURVES.se, rel=1e-12)
    assert [one.other for one in figures.incidences] == pytest.approx(CURVES.other, rel=1e-12)
    assert [1 - one.naive for one in figures.incidences] == pytest.approx(CURVES.survival, rel=1e-12)
    code = Screen.COMPETING_COUNTED if counted else Screen.COMPETING_CENSORED
    (said,) = [one for one in figures.screened if "competing" in one.code]
    # 0.2109 / 0.1003 - 1
    assert (said.code, said.gravity, said.level) == (code, Grade.NOTE if counted else Grade.CAUTION, "240 months")
    assert figures.incidences[2].excess == pytest.approx(1.1035465674953834, rel=1e-10)
    grades = [one.gravity for one in figures.screened]
    assert grades == sorted(grades, key=[Grade.STOP, Grade.CAUTION, Grade.NOTE].index)


def test_a_small_excess_is_a_note(tmp_path: Path) -> None:
    """By 12 months few have died: one minus Kaplan-Meier is less than a tenth above."""
    write_mgus2(tmp_path)
    tree = study(CENSORED, {"kind": "cox"})
    tree["equations"][0]["horizons"] = [{"time": 12, "unit": "mo"}]
    (figures,) = fit(tmp_path, tree).figures
    (said,) = [one for one in figures.screened if one.code is Screen.COMPETING_CENSORED]
    assert 0 < figures.incidences[0].excess < 0.1
    assert said.gravity is Grade.NOTE


def test_strata_have_figures_of_their_own(tmp_path: Path) -> None:
    write_mgus2(tmp_path)
    sex = {"id": "male", "label": "Male", "kind": "yes_no", "group": "Values"}
    outcome = timed("mo", competing="2")
    estimate, terms = {"kind": "cox", "strata": "male"}, linear_terms(["age"])
    tree = plain_study(["age", sex], outcome, estimate, horizons=HORIZONS[:1], terms=terms)
    tree["equations"][0]["competing_events"] = CENSORED
    tree["cohort"]["columns"] = {"male": {"levels": {"yes": "1.0", "no": "0.0"}}}
    (figures,) = fit(tmp_path, tree).figures
    people = cohorts.mgus2_competing()
    assert len(figures.incidences) == 2
    for one in figures.incidences:
        rows = people.x[:, 1] == (1 if "yes" in one.equation else 0)
        (alone,) = kaplan_meier(people.times[rows], (people.status[rows] == 1) * 1.0, [60.0])
        assert one.naive == pytest.approx(alone.share, rel=1e-12)
    (said,) = [one for one in figures.screened if one.code is Screen.COMPETING_CENSORED]
    assert said.level.startswith("60 months (all_")


def test_where_people_came_late(tmp_path: Path) -> None:
    """Half a year late in turn; and one who was watched alone at first, whose death would be that of everybody."""
    people = cohorts.mgus2_competing()
    entry = np.arange(1, len(people.times) + 1, dtype=np.float64) % 4 * 6
    there = people.times > entry
    columns: dict[str, Any] = {"age": people.x[there, 0], "time": people.times[there], "came": entry[there]}
    columns["status"] = people.status[there].astype(int)
    tree = plain_study(
        ["age"],
        timed("mo", competing="2", entry="came"),
        {"kind": "cox"},
        horizons=HORIZONS,
        terms=linear_terms(["age"]),
    )
    tree["equations"][0]["competing_events"] = CENSORED
    write_people(tmp_path / "people.csv", columns)
    (figures,) = fit(tmp_path, tree).figures
    assert [one.incidence for one in figures.incidences] == pytest.approx(CURVES_LATE.incidence, rel=1e-12)
    assert [one.se for one in figures.incidences] == pytest.approx(CURVES_LATE.se, rel=1e-12)
    (said,) = [one for one in figures.screened if one.code is Screen.COMPETING_CENSORED]
    assert "people who came late are in no Fine–Gray fit here" in word_screened(said)
    alone = {"age": 60.0, "time": 0.5, "came": 0.0, "status": 2}
    late = columns | {"came": np.maximum(columns["came"], 0.6), "time": columns["time"] + 1.0}
    write_people(tmp_path / "people.csv", {name: [*late[name], alone[name]] for name in late})
    (figures,) = fit(tmp_path, tree).figures
    assert figures.competing == (columns["status"] == 2).sum() + 1
    assert figures.incidences == ()


def test_c_follow_up_and_sample_of_a_subdistribution(tmp_path: Path) -> None:
    """Whoever died first waits: behind everybody for C, to the last event for the sample size.

    R: concordance(Surv(ifelse(st == 2, 1e4, etime), st == 1) ~ lp, reverse = TRUE);
    quantile(survfit(Surv(etime, st == 0) ~ 1), 0.5).
    """
    write_mgus2(tmp_path)
    fitted = fit(tmp_path, fine_gray())
    (figures,) = fitted.figures
    assert figures.concordance is not None
    assert figures.follow_up is not None
    assert (figures.concordance.c, figures.concordance.se) == pytest.approx(C_OF_R, rel=1e-10)
    assert figures.follow_up.median == FOLLOW_UP_OF_R
    (cox,) = fit(tmp_path, study(CENSORED, {"kind": "cox"})).figures
    assert figures.minimum is not None
    assert cox.minimum is not None
    # the share expected at 240 months: 0.100 have had it, 0.211 were nobody to die
    assert figures.minimum.risk < 0.13 < cox.minimum.risk
    assert "849 competing events were counted" in fitted.remarks[0]


C_OF_R = (0.671896371389492, 0.0255879233393830)
FOLLOW_UP_OF_R = 185


def test_what_a_fine_gray_study_may_not_say(tmp_path: Path) -> None:
    sex = {"id": "sex", "label": "Sex", "kind": "yes_no", "group": "Values"}
    estimate = {"kind": "fine-gray", "covariance": "model", "strata": "sex"}
    outcome = timed("mo", competing="2", entry="came")
    tree = plain_study(["age", sex], outcome, estimate, horizons=HORIZONS, terms=linear_terms(["age"]))
    tree["equations"][0]["competing_events"] = SUBDISTRIBUTION
    said = refuse(tmp_path, tree)
    assert said["estimate.all.covariance"].endswith('Say "robust" or "cluster", or leave it out, which means "robust".')
    assert "one baseline" in said["estimate.all.strata"]
    assert said["cohort.outcome.entry"].startswith("a Fine–Gray fit is made here from people who are all watched")


def test_a_fine_gray_study_without_competing_events(tmp_path: Path) -> None:
    tree = fine_gray()
    del tree["cohort"]["outcome"]["competing"]
    assert "names none: say competing = [...]" in refuse(tmp_path, tree)["estimate.all.kind"]
    tree = plain_study(NAMES, BINARY, {"kind": "fine-gray"})
    tree["equations"][0]["competing_events"] = SUBDISTRIBUTION
    assert "a Fine–Gray fit needs a time" in refuse(tmp_path, tree)["estimate.all.kind"]


@pytest.mark.parametrize(
    ("kind", "competing", "sentence"),
    [
        ("fine-gray", CENSORED, 'a Fine–Gray fit handles competing events as "subdistribution"'),
        ("fine-gray", {"handled": "not_applicable"}, 'a Fine–Gray fit handles competing events as "subdistribution"'),
        ("cox", SUBDISTRIBUTION, "a cox fit is not of a subdistribution"),
        ("cox", {"handled": "not_applicable"}, 'If that share is wanted, fit kind = "fine-gray".'),
    ],
)
def test_what_the_equation_says_of_competing_events_is_what_is_fitted(
    kind: str, competing: Tree, sentence: str, tmp_path: Path
) -> None:
    said = refuse(tmp_path, study(competing, {"kind": kind}))
    assert sentence in said['equations "all", competing_events, handled']


def test_a_competing_event_that_never_happens(tmp_path: Path) -> None:
    """Nobody died first: it would be a Cox fit, and the file would say that deaths were allowed for."""
    people = cohorts.mgus2_competing()
    columns: dict[str, Any] = dict(zip(NAMES, people.x.T, strict=True))
    status = np.where(people.status == 2, 0, people.status).astype(int)
    write_people(tmp_path / "people.csv", columns | {"time": people.times, "status": status})
    said = refuse(tmp_path, fine_gray())
    assert said["estimate.all.kind"] == (
        "none of the 1,360 people used has a competing event, and without one a Fine–Gray fit is a Cox fit by another "
        "name: the file would say that competing events were allowed for where none was seen. Check competing in "
        '[cohort]; if there really is none, leave it out there and say kind = "cox" and competing_events = '
        '{handled = "not_applicable"}.'
    )
    (figures,) = fit(tmp_path, study(CENSORED, {"kind": "cox"})).figures
    assert (figures.competing, figures.incidences) == (0, ())


def test_too_few_clusters(tmp_path: Path) -> None:
    """Three for four coefficients; the advice does not name a covariance that a Fine–Gray fit has not."""
    people = cohorts.mgus2_competing()
    columns: dict[str, Any] = dict(zip(NAMES, people.x.T, strict=True))
    columns |= {"time": people.times, "status": people.status.astype(int), "ward": np.arange(len(people.times)) % 3}
    write_people(tmp_path / "people.csv", columns)
    said = refuse(tmp_path, fine_gray(covariance="cluster", cluster="ward"))
    assert said["estimate.all.cluster"] == (
        'column "ward" has 3 clusters among the people used, and the covariance of 4 coefficients needs more than 4, '
        'and some tens before it can be trusted. Take another column, or say covariance = "robust".'
    )


def test_everybody_in_one_cluster_and_everybody_his_own(tmp_path: Path) -> None:
    people = cohorts.mgus2_competing()
    columns: dict[str, Any] = dict(zip(NAMES, people.x.T, strict=True))
    columns |= {"time": people.times, "status": people.status.astype(int)}
    write_people(tmp_path / "people.csv", columns | {"ward": np.ones(len(people.times), dtype=int)})
    tree = fine_gray(covariance="cluster", cluster="ward")
    assert "everybody is in one cluster" in refuse(tmp_path, tree)["cohort"]
    write_people(tmp_path / "people.csv", columns | {"ward": np.arange(len(people.times))})
    (alone,), (robust,) = fit(tmp_path, tree).fits.values(), fit(tmp_path, fine_gray()).fits.values()
    assert np.array(alone.covariance) == pytest.approx(np.array(robust.covariance), rel=1e-13)
