"""The invented Tarnwick file against the fit that made it; statsmodels is the other opinion throughout."""

import re
from datetime import UTC, datetime
from pathlib import Path

import numpy as np
import pandas as pd
import pytest
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.findings import FindingCode
from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model
from clinicalc.coefficients.reader import read_bytes, read_file
from clinicalc.coefficients.schema import CovarianceBand, NumberPredictor
from clinicalc.coefficients.writer import write_bytes
from example_models import make_tarnwick_cvd_10y as script
from example_models.tarnwick_cohort import Fit, design_frame, draw_cohort, fit_model, true_probability

SHIPPED = Path(__file__).parents[2] / "example_models" / "tarnwick-cvd-10y.json"
PATIENTS = 1000
MOMENT = datetime(2026, 6, 1, tzinfo=UTC)


@pytest.fixture(scope="module")
def refit() -> Fit:
    return fit_model(draw_cohort())


@pytest.fixture(scope="module")
def model() -> Model:
    return load_model(SHIPPED)


def band_of(model: Model) -> CovarianceBand:
    band = model.content.equations[0].uncertainty
    assert isinstance(band, CovarianceBand)
    return band


# ---------------------------------------------------------------- the script


def test_the_script_makes_the_shipped_figures_again(model: Model, tmp_path: Path) -> None:
    # not the same bytes: another linear algebra library moves last digits, another installation has other versions
    made = load_model(script.main(tmp_path))
    shipped_equation, made_equation = model.content.equations[0], made.content.equations[0]
    assert [term.id for term in made_equation.terms] == [term.id for term in shipped_equation.terms]
    assert [term.product for term in made_equation.terms] == [term.product for term in shipped_equation.terms]
    for shipped_term, made_term in zip(shipped_equation.terms, made_equation.terms, strict=True):
        assert made_term.coefficient == pytest.approx(shipped_term.coefficient, rel=1e-9)
    assert made_equation.horizons[0].intercept == pytest.approx(shipped_equation.horizons[0].intercept, rel=1e-9)
    covariance = np.array(band_of(model).covariance)
    deviations = np.sqrt(np.diag(covariance))
    difference = (np.array(band_of(made).covariance) - covariance) / np.outer(deviations, deviations)
    assert np.abs(difference).max() < 1e-9
    assert made.content.predictors == model.content.predictors
    assert made.content.use == model.content.use


def test_the_file_stands_as_the_writer_writes_it() -> None:
    data = SHIPPED.read_bytes()
    assert write_bytes(read_bytes(data, SHIPPED.name).content) == data
    assert read_file(SHIPPED).content.signatures == ()


# ---------------------------------------------------------------- the band


def draw_patients(cohort: pd.DataFrame, in_mg: NDArray[np.bool_]) -> tuple[pd.DataFrame, list[dict[str, str]]]:
    """Patients anywhere within the cohort's ranges: their values as the fit takes them, and as they are typed.

    Where `in_mg` is true the two cholesterols are typed in whole mg/dL.
    """
    rng = np.random.default_rng(7)
    low, high = cohort.min(), cohort.max()
    age = rng.integers(int(low["age"]), int(high["age"]) + 1, PATIENTS)
    pressure = rng.integers(int(low["systolic_bp"]), int(high["systolic_bp"]) + 1, PATIENTS)
    total = rng.uniform(low["total_cholesterol"], high["total_cholesterol"], PATIENTS)
    # HDL is a part of total cholesterol
    hdl = rng.uniform(low["hdl_cholesterol"], np.minimum(high["hdl_cholesterol"], total - 0.1))
    answers = rng.integers(0, 2, (4, PATIENTS))
    rows, texts = [], []
    for i in range(PATIENTS):
        # 1 mg/dL of cholesterol is 0.02586 mmol/L (molar mass 386.65 g/mol), rounded as the unit tables print it
        unit, decimals, factor = ("mg/dL", 0, 0.02586) if in_mg[i] else ("mmol/L", 1, 1.0)
        typed = [f"{value / factor:.{decimals}f}" for value in (total[i], hdl[i])]
        male, treated, smoker, diabetes = (int(answer) for answer in answers[:, i])
        rows.append([age[i], male, pressure[i], treated, *(float(t) * factor for t in typed), smoker, diabetes])
        texts.append(
            {
                "prior_cvd": "no",
                "age": str(age[i]),
                "sex": ("female", "male")[male],
                "systolic_bp": str(pressure[i]),
                "bp_treated": ("no", "yes")[treated],
                "total_cholesterol": f"{typed[0]} {unit}" if in_mg[i] or i % 2 else typed[0],
                "hdl_cholesterol": f"{typed[1]} {unit}" if in_mg[i] or i % 2 else typed[1],
                "smoker": ("no", "yes")[smoker],
                "diabetes": ("no", "yes")[diabetes],
            }
        )
    return pd.DataFrame(rows, columns=cohort.columns[:-1], dtype=np.float64), texts


def test_probability_and_band_of_a_thousand_patients_are_those_of_statsmodels(model: Model, refit: Fit) -> None:
    people, texts = draw_patients(refit.cohort, np.arange(PATIENTS) % 3 == 0)
    constant = np.column_stack([np.ones(PATIENTS), design_frame(people, refit.knots)])
    # on the mean, get_prediction's limits are those of the link scale, transformed at their ends
    prediction = refit.result.get_prediction(constant, which="mean")
    expected = np.column_stack([prediction.predicted, prediction.conf_int(alpha=0.05)])
    found = np.empty((PATIENTS, 3))
    for i, typed in enumerate(texts):
        estimate = assess(model, entry_from_texts(typed), at=MOMENT).estimate
        assert estimate is not None, typed
        assert estimate.band is not None
        assert estimate.band.basis == "covariance"
        found[i] = estimate.probability, estimate.band.lower, estimate.band.upper
    assert np.abs(found - expected).max() < 1e-9
    assert np.abs(found / expected - 1.0).max() < 1e-9
    # patients all alike would prove little
    assert expected[:, 0].min() < 0.01
    assert expected[:, 0].max() > 0.7


def test_band_is_narrowest_at_the_weighted_mean_of_the_terms(model: Model, refit: Fit) -> None:
    # in a maximum-likelihood logistic fit the centre is the p(1-p)-weighted mean of the terms and the variance there
    # is one over the sum of the weights: it follows from the information matrix X'WX with an intercept in X
    at = band_of(model).at_centre[0]
    weight = refit.fitted * (1.0 - refit.fitted)
    terms = design_frame(refit.cohort, refit.knots)
    assert at.variance == pytest.approx(1.0 / weight.sum(), rel=1e-9)
    assert at.centre == pytest.approx(tuple(np.average(terms, axis=0, weights=weight)), rel=1e-8)


# ---------------------------------------------------------------- what the file says


def test_documented_figures_are_those_of_the_refit(model: Model, refit: Fit) -> None:
    said = {entry.item: entry.text for entry in model.content.documentation}
    again = {entry.item: entry.text for entry in script.document(refit)}
    assert {**said, "software": ""} == {**again, "software": ""}

    event = refit.cohort["event"].to_numpy() == 1.0
    derivation = model.content.source.derivation
    assert not isinstance(derivation, UnsetType)
    assert (derivation.people, derivation.events) == (event.size, event.sum())
    assert f"{event.size:,} people, {event.sum():,} events" in said["sample size and events"]

    # by counting pairs, where the script goes by ranks
    cases, others = refit.fitted[event], refit.fitted[~event]
    above = (cases[:, None] > others[None, :]).mean() + 0.5 * (cases[:, None] == others[None, :]).mean()
    assert f"C statistic {above:.3f} in" in said["discrimination"]

    quantiles = refit.cohort["age"].quantile([0.05, 0.35, 0.65, 0.95]).round()
    assert [float(knot) for knot in re.findall(r"\d+", said["spline knots"])[:4]] == quantiles.tolist()
    away = 100 * np.abs(refit.fitted - true_probability(refit.cohort)).mean()
    assert f"are {away:.2f} percentage points apart" in said["distance from the truth"]

    tenths = refit.cohort.assign(p=refit.fitted).groupby(pd.qcut(refit.fitted, 10, labels=False))[["event", "p"]].mean()
    gap = 100 * (tenths["event"] - tenths["p"]).abs().max()
    assert f"at most {gap:.1f} percentage points" in said["apparent calibration"]


def test_population_and_ranges_are_those_of_the_cohort(model: Model, refit: Fit) -> None:
    population, cohort = model.content.population, refit.cohort
    assert population is not None
    scale = {}
    for number in population.numbers:
        scale[number.id] = np.log(cohort[number.id]) if number.log == "natural" else cohort[number.id]
        assert number.mean == pytest.approx(np.mean(scale[number.id]), rel=1e-12)
        assert number.sd == pytest.approx(np.std(scale[number.id], ddof=1), rel=1e-12)
    assert np.array(population.correlations) == pytest.approx(pd.DataFrame(scale).corr().to_numpy(), abs=1e-12)
    assert [row.id for row in population.yes_no] == ["diabetes", "bp_treated", "smoker"]
    for row in population.yes_no:
        columns = {**scale, **{name: cohort[name] for name in cohort.columns if name not in scale}}
        eta = row.intercept + sum(value * columns[name] for name, value in row.coefficients.items())
        # a logistic fit with an intercept gets the share right, and each given value's mean among those who say yes
        residual = cohort[row.id] - 1.0 / (1.0 + np.exp(-eta))
        assert residual.mean() == pytest.approx(0.0, abs=1e-10)
        assert all((residual * columns[name]).mean() == pytest.approx(0.0, abs=1e-8) for name in row.coefficients)
    for predictor in model.content.predictors:
        if isinstance(predictor, NumberPredictor):
            assert predictor.derivation == (cohort[predictor.id].min(), cohort[predictor.id].max())


def test_nobody_can_take_it_for_a_model_of_real_people(model: Model) -> None:
    content = model.content
    assert content.source.kind == "local"
    assert content.unconfirmed == ()
    texts = (content.title, content.outcome, content.source.citation, content.use.population, *content.use.cautions)
    assert all("invented" in text.lower() for text in texts)
    assert "any patient" in content.use.not_for
    assert "says nothing about you" in content.use.plain.cautions[0]


@pytest.mark.parametrize(
    ("field", "typed"), [("age", "34"), ("age", "80"), ("prior_cvd", "yes"), ("diabetes", ""), ("hdl_cholesterol", "6")]
)
def test_a_patient_it_is_not_for_gets_no_number(model: Model, field: str, typed: str) -> None:
    patient = {
        "prior_cvd": "no",
        "age": "61",
        "sex": "female",
        "systolic_bp": "142",
        "bp_treated": "no",
        "total_cholesterol": "5.2 mmol/L",
        "hdl_cholesterol": "1.3 mmol/L",
        "smoker": "yes",
        "diabetes": "no",
    }
    whole = assess(model, entry_from_texts(patient), at=MOMENT)
    # nothing about this patient's values: that the band crosses the file's decision point, and what it says of itself
    said = [f"About this model: {caution}" for caution in model.content.use.cautions]
    assert [finding.message for finding in whole.findings if finding.code is FindingCode.MODEL] == said
    assert {finding.code for finding in whole.findings} == {FindingCode.DECISION_POINT, FindingCode.MODEL}
    assert whole.estimate is not None
    assert assess(model, entry_from_texts(patient | {field: typed}), at=MOMENT).estimate is None
