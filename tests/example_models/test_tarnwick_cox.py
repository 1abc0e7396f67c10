"""The shipped Cox example against the people it was fitted to.

The other opinions are statsmodels' PHReg for coefficients and covariance, and Efron's sums written out here, death by
death, for the baseline and what its band is made of. Source of both: Therneau & Grambsch, Modeling Survival Data, 2000,
sections 3.3 and 10.2; the variance of a log cumulative hazard at x is A/H^2 + (x - q/H)'V(x - q/H).
"""

import json
import re
import subprocess
import sys
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest
import statsmodels.api as sm
from numpy.typing import NDArray

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model
from clinicalc.coefficients.schema import CovarianceBand
from example_models import make_tarnwick_cohort as script
from example_models.make_tarnwick_cohort import TRUTH

Array = NDArray[np.float64]
FOLDER = Path(__file__).parents[2] / "example_models"
SHIPPED = FOLDER / "tarnwick-cvd-10y-cox.json"
STUDY = FOLDER / "tarnwick-cvd-10y-cox.toml"
TEN_YEARS = 3652.5
"""Days: 10 times 365.25."""


@dataclass(frozen=True, slots=True)
class People:
    """Those with every value: days of follow-up, whether the event ended it, and the true rule's columns by name."""

    days: Array
    event: NDArray[np.bool_]
    terms: pd.DataFrame


def file_terms(values: dict[str, Array]) -> pd.DataFrame:
    """The true rule's columns with age as the file has it: as it is typed."""
    return pd.DataFrame(script.true_terms(values)).assign(age=values["age"])


@pytest.fixture(scope="module")
def people() -> People:
    table = pd.read_csv(FOLDER / "tarnwick-cohort.csv", na_values=["unknown"], parse_dates=["entry_date", "exit_date"])
    table = table.dropna()
    numbers = {"age": "age", "systolic_bp": "sbp", "bp_treated": "bp_tablets", "diabetes": "diabetes", "egfr": "egfr"}
    numbers |= {"total_cholesterol": "chol", "hdl_cholesterol": "hdl"}
    values = {name: table[column].to_numpy(dtype=np.float64) for name, column in numbers.items()}
    values["male"] = (table["sex"] == "M").to_numpy(dtype=np.float64)
    values["smoker"] = (table["smoker"] == "yes").to_numpy(dtype=np.float64)
    days = (table["exit_date"] - table["entry_date"]).dt.days.to_numpy().astype(np.float64)
    return People(days, (table["status"] == 1).to_numpy(), file_terms(values))


@pytest.fixture(scope="module")
def refit(people: People) -> Any:
    """PHReg's results, Efron's ties; deaths of anything else are censored."""
    return sm.PHReg(people.days, people.terms, status=people.event, ties="efron").fit(maxiter=100, tol=1e-12, disp=0)


@pytest.fixture(scope="module")
def model() -> Model:
    return load_model(SHIPPED)


@pytest.fixture(scope="module")
def made(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """What the command makes of the study now; in a process of its own, whose number of threads it settles itself."""
    path = tmp_path_factory.mktemp("made") / SHIPPED.name
    words = [sys.executable, "-m", "clinicalc", "fit", str(STUDY), "-o", str(path)]
    done = subprocess.run(words, capture_output=True, text=True)
    assert done.returncode == 0, done.stderr
    return path


def band_of(model: Model) -> CovarianceBand:
    band = model.content.equations[0].uncertainty
    assert isinstance(band, CovarianceBand)
    return band


def coefficients(model: Model) -> dict[str, float]:
    return {term.id: term.coefficient for term in model.content.equations[0].terms}


def efron_sums(people: People, slopes: Array, until: float) -> tuple[float, float, Array]:
    """H, A and q at the point where every term is zero, tied death by tied death."""
    x = people.terms.to_numpy()
    ratio = np.exp(x @ slopes)
    hazard, square, weighted = 0.0, 0.0, np.zeros(slopes.size)
    for time in np.unique(people.days[people.event & (people.days <= until)]):
        at_risk, dying = people.days >= time, people.event & (people.days == time)
        for place in range(int(dying.sum())):
            share = ratio * at_risk - place / dying.sum() * ratio * dying
            total = share.sum()
            hazard += 1.0 / total
            square += 1.0 / total**2
            weighted += x.T @ share / total**2
    return hazard, square, weighted


# ---------------------------------------------------------------- the file and the command


def leaves(node: object, place: str = "") -> Iterator[tuple[str, object]]:
    """Everything that a tree says, each with its place."""
    if isinstance(node, dict):
        for name, value in node.items():
            yield from leaves(value, f"{place}/{name}")
    elif isinstance(node, list):
        for index, value in enumerate(node):
            yield from leaves(value, f"{place}/{index}")
    else:
        yield place, node


def test_fit_makes_the_shipped_file_again(model: Model, made: Path) -> None:
    if load_model(made).fingerprint == model.fingerprint:  # the same libraries: the same bits
        assert made.read_bytes() == SHIPPED.read_bytes()
        return
    # another linear algebra library moves last digits, another installation has other versions
    shipped = json.loads(SHIPPED.read_bytes())
    software = [item["item"] for item in shipped["model"]["documentation"]].index("software")
    apart = f"/model/documentation/{software}/text"
    here, there = dict(leaves(json.loads(made.read_bytes()))), dict(leaves(shipped))
    assert here.keys() == there.keys()
    deviations = np.sqrt(np.diag(band_of(model).covariance))
    for place, said in there.items():
        if found := re.fullmatch(r"/model/equations/0/uncertainty/covariance/([0-9]+)/([0-9]+)", place):
            scale = deviations[int(found[1])] * deviations[int(found[2])]
            assert here[place] == pytest.approx(said, rel=1e-9, abs=1e-9 * scale), place
        elif isinstance(said, float):
            assert here[place] == pytest.approx(said, rel=1e-9), place
        elif place != apart:
            assert here[place] == said, place


def test_the_file_is_not_too_kind_to_itself(model: Model) -> None:
    content = model.content
    assert content.source.kind == "local"
    texts = (content.title, content.outcome, content.source.citation, content.use.population, *content.use.cautions[:1])
    assert all("invented" in text.lower() for text in texts)
    assert "any patient" in content.use.not_for
    assert "says nothing about you" in content.use.plain.cautions[0]
    said = {entry.item: entry.text for entry in content.documentation}
    assert said["true rule"].replace("−", "-") == script.describe_truth()
    assert content.equations[0].competing_events.handled == "censored"
    assert any("died" in caution or "Deaths" in caution for caution in content.use.cautions)


# ---------------------------------------------------------------- the figures


def test_coefficients_and_covariance_are_those_of_phreg(model: Model, refit: Any) -> None:
    found = coefficients(model)
    assert list(found) == list(TRUTH)
    assert list(found.values()) == pytest.approx(list(refit.params), rel=1e-8)
    covariance, deviations = np.array(band_of(model).covariance), refit.bse
    gaps = (covariance - np.asarray(refit.cov_params())) / np.outer(deviations, deviations)
    assert np.abs(gaps).max() < 1e-8


def test_the_true_coefficients_lie_within_four_standard_errors(model: Model) -> None:
    covariance = np.array(band_of(model).covariance)
    gaps = np.array([coefficients(model)[name] - true for name, true in TRUTH.items()])
    assert np.abs(gaps / np.sqrt(np.diag(covariance))).max() < 4.0


def test_baseline_and_centre_are_efrons_sums(model: Model, people: People) -> None:
    slopes = np.array(list(coefficients(model).values()))
    hazard, square, weighted = efron_sums(people, slopes, TEN_YEARS)
    horizon = model.content.equations[0].horizons[0]
    assert horizon.log_cumulative_hazard == pytest.approx(np.log(hazard), rel=1e-11)
    at = band_of(model).at_centre[0]
    assert at.variance == pytest.approx(square / hazard**2, rel=1e-9)
    assert at.centre == pytest.approx(tuple(weighted / hazard), rel=1e-9)


def test_people_and_events_are_those_of_the_cohort(model: Model, people: People) -> None:
    derivation = model.content.source.derivation
    assert (derivation.people, derivation.events) == (people.event.size, people.event.sum())  # type: ignore[union-attr]
    for predictor, column in (("age", "age"), ("systolic_bp", "systolic_bp"), ("egfr", "egfr")):
        (stated,) = (entry for entry in model.content.predictors if entry.id == predictor)
        terms = people.terms[column].to_numpy()
        observed = {"age": terms, "systolic_bp": 120.0 + 10.0 * terms, "egfr": 85.0 + 10.0 * terms}[predictor]
        assert stated.derivation == pytest.approx((observed.min(), observed.max()))  # type: ignore[union-attr]


def harrell(people: People, line: Array) -> float:
    """Of all pairs of which one is known to have had the event first, the share in which that one's line is higher."""
    right, pairs = 0.0, 0
    for i in np.flatnonzero(people.event):
        # whoever left on the day of the event was there after it
        later = (people.days > people.days[i]) | ((people.days == people.days[i]) & ~people.event)
        right += float((line[later] < line[i]).sum()) + 0.5 * float((line[later] == line[i]).sum())
        pairs += int(later.sum())
    return right / pairs


def median_follow_up(people: People) -> float:
    """Reverse Kaplan-Meier: the day at which half would have been censored if nobody had had the event."""
    left = 1.0
    for day in np.unique(people.days):
        # an event comes before a censoring on the same day
        at_risk = int((people.days >= day).sum() - (people.event & (people.days == day)).sum())
        ended = int((~people.event & (people.days == day)).sum())
        if at_risk:
            left *= 1.0 - ended / at_risk
        if left <= 0.5:
            return float(day)
    raise AssertionError("half are never censored")


def test_documented_figures_are_those_of_the_people(model: Model, people: People, refit: Any) -> None:
    said = {entry.item: entry.text.replace("\u202f", " ") for entry in model.content.documentation}
    table = pd.read_csv(FOLDER / "tarnwick-cohort.csv", na_values=["unknown"])
    whole = table.dropna()
    dead, count = int((whole["status"] == 2).sum()), int(people.event.sum())
    share = f"{100 * count / len(whole):.1f} %"
    assert said["sample size and events"].startswith(
        f"{len(whole):,} people, {count} events ({share}), {dead} with a competing event first;"
        f" {count / len(TRUTH):.1f} events for each of {len(TRUTH)} coefficients"
    )
    missing = said["missing data (figures of the fit)"]
    assert f"{len(table) - len(whole)} people of {len(table):,} were left out" in missing
    for column, label in (("sbp", "Systolic blood pressure"), ("hdl", "HDL cholesterol"), ("smoker", "Smokes now")):
        lost = int(table[column].isna().sum())
        assert f"{label} {lost} ({100 * lost / len(table):.1f} %)" in missing
    line = people.terms.to_numpy() @ np.asarray(refit.params)
    assert f"C statistic {harrell(people, line):.3f} " in said["discrimination"]
    assert f"Median {median_follow_up(people):.0f} days" in said["follow-up"]
    # Riley et al., Stat Med 2019;38:1276, eq. 7 for the likelihood ratio and criterion (i) for a shrinkage of 0.9;
    # with so many events it is the largest of the criteria
    ratio = 2.0 * (refit.llf - refit.model.loglike(np.zeros(len(TRUTH))))
    apparent = -np.expm1(-ratio / len(whole))
    adjusted = (1.0 + len(TRUTH) / (len(whole) * np.log1p(-apparent))) * apparent
    needed = int(np.ceil(len(TRUTH) / ((0.9 - 1.0) * np.log1p(-adjusted / 0.9))))
    assert said["sample size needed"].startswith(f"{needed} people")


# ---------------------------------------------------------------- the numbers


def draw_patients() -> tuple[dict[str, Array], list[dict[str, str]]]:
    """Invented patients anywhere within the cohort's ranges, as the true rule's values and as they are typed."""
    rng, count = np.random.default_rng(11), 300
    values = {
        "age": rng.integers(30, 80, count).astype(np.float64),
        "male": rng.integers(0, 2, count).astype(np.float64),
        "systolic_bp": rng.integers(90, 190, count).astype(np.float64),
        "bp_treated": rng.integers(0, 2, count).astype(np.float64),
        "total_cholesterol": rng.integers(35, 80, count) / 10.0,
        "hdl_cholesterol": rng.integers(8, 24, count) / 10.0,
        "smoker": rng.integers(0, 2, count).astype(np.float64),
        "diabetes": rng.integers(0, 2, count).astype(np.float64),
        "egfr": rng.integers(40, 120, count).astype(np.float64),
    }
    texts = []
    for i in range(count):
        typed = {name: f"{column[i]:g}" for name, column in values.items() if name != "male"}
        typed |= {name: ("no", "yes")[int(values[name][i])] for name in ("bp_treated", "smoker", "diabetes")}
        texts.append(typed | {"sex": ("female", "male")[int(values["male"][i])], "prior_cvd": "no"})
    return values, texts


def test_number_and_band_are_those_of_the_refit(model: Model, people: People, refit: Any) -> None:
    values, texts = draw_patients()
    x = file_terms(values).to_numpy()
    slopes = np.asarray(refit.params)
    hazard, square, weighted = efron_sums(people, slopes, TEN_YEARS)
    line = np.log(hazard) + x @ slopes
    away = x - weighted / hazard
    spread = np.sqrt(square / hazard**2 + np.einsum("ij,jk,ik->i", away, np.asarray(refit.cov_params()), away))
    # 0.975 quantile of the normal distribution
    expected = -np.expm1(
        -np.exp(line[:, None] + spread[:, None] * np.array([0.0, -1.959963984540054, 1.959963984540054]))
    )
    found = []
    for typed in texts:
        estimate = assess(model, entry_from_texts(typed)).estimate
        assert estimate is not None, typed
        assert estimate.band is not None
        found.append((estimate.probability, estimate.band.lower, estimate.band.upper))
    assert np.abs(np.array(found) - expected).max() < 1e-9
    assert expected[:, 0].min() < 0.01
    assert expected[:, 0].max() > 0.6
    # and the rule that made the people lies in nearly all bands, as it should in about 19 of 20 patients
    risk = script.true_risk(values, 10.0)
    assert np.mean((expected[:, 1] <= risk) & (risk <= expected[:, 2])) > 0.8
