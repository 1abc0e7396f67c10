"""The invented Tarnwick cohort: what its script says of it is so, and its true rule can be found again.

statsmodels' PHReg is the other opinion; the program takes no part here.
"""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest
import statsmodels.api as sm

from example_models import make_tarnwick_cohort as script
from example_models.make_tarnwick_cohort import KNOTS, PEOPLE, TRUTH, Array, Cohort

SHIPPED = Path(__file__).parents[2] / "example_models" / "tarnwick-cohort.csv"
MOST_BYTES = 400_000


@pytest.fixture(scope="module")
def cohort() -> Cohort:
    return script.draw_cohort()


@pytest.fixture(scope="module")
def table() -> pd.DataFrame:
    return pd.read_csv(SHIPPED, parse_dates=["entry_date", "exit_date"], na_values=["unknown"])


def values_of(table: pd.DataFrame) -> dict[str, Array]:
    """The file's columns by the script's names, apart from the script."""
    return {
        "age": table["age"].to_numpy(dtype=np.float64),
        "male": (table["sex"] == "M").to_numpy(dtype=np.float64),
        "systolic_bp": table["sbp"].to_numpy(dtype=np.float64),
        "bp_treated": table["bp_tablets"].to_numpy(dtype=np.float64),
        "total_cholesterol": table["chol"].to_numpy(dtype=np.float64),
        "hdl_cholesterol": table["hdl"].to_numpy(dtype=np.float64),
        "smoker": (table["smoker"] == "yes").to_numpy(dtype=np.float64),
        "diabetes": table["diabetes"].to_numpy(dtype=np.float64),
        "egfr": table["egfr"].to_numpy(dtype=np.float64),
    }


def days_of(table: pd.DataFrame) -> Array:
    days: Array = (table["exit_date"] - table["entry_date"]).dt.days.to_numpy().astype(np.float64)
    return days


def test_the_script_writes_the_shipped_file(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    made = script.main(tmp_path)
    assert made.read_bytes() == SHIPPED.read_bytes()
    assert SHIPPED.stat().st_size <= MOST_BYTES
    printed = capsys.readouterr().out
    assert script.describe_truth() in printed
    assert all(f"{abs(figure):g} {name}" in printed for name, figure in TRUTH.items())


def test_what_the_script_prints_is_in_the_file(
    table: pd.DataFrame, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    script.main(tmp_path)
    counts = table["status"].value_counts()
    printed = capsys.readouterr().out
    assert f"{counts[1]} events, {counts[2]} other deaths first, {counts[0]} with neither" in printed
    assert f"{len(table.dropna())} people without a missing value" in printed


def test_the_file_holds_what_was_drawn(table: pd.DataFrame, cohort: Cohort) -> None:
    read = values_of(table)
    for name, column in cohort.values.items():
        lost = cohort.missing.get(name, np.zeros(PEOPLE, dtype=bool))
        if name != "smoker":
            assert (np.isnan(read[name]) == lost).all(), name
        assert (read[name][~lost] == column[~lost]).all(), name
    assert (table["smoker"].isna().to_numpy() == cohort.missing["smoker"]).all()
    assert (days_of(table) == cohort.days).all()
    assert (table["status"].to_numpy() == cohort.status).all()
    assert table["person"].is_unique
    assert set(table["practice"]) == set(script.PRACTICES)


def test_follow_up_is_such_as_practices_have(table: pd.DataFrame) -> None:
    days, status = days_of(table), table["status"].to_numpy()
    assert days.min() >= 1
    assert table["exit_date"].max() <= pd.Timestamp(script.END_OF_STUDY)
    assert (table["entry_date"] >= pd.Timestamp(script.FIRST_ENTRY)).all()
    # some leave before ten years, some are followed longer, and some die of anything else first
    assert 0.5 < (days > 10 * script.YEAR).mean() < 0.8
    assert ((status == 0) & (days < 5 * script.YEAR)).mean() > 0.05
    assert 0.05 < (status == 2).mean() < 0.12
    assert 0.08 < (status == 1).mean() < 0.16
    # whole days of some thousand people tie now and then
    events = days[status == 1]
    assert np.unique(events).size < events.size


def test_values_are_missing_by_the_stated_rule(table: pd.DataFrame, cohort: Cohort) -> None:
    lost = table.isna()
    assert not lost[["person", "entry_date", "exit_date", "status", "age", "sex", "bp_tablets", "diabetes"]].any().any()
    shares = lost.mean()
    # four standard errors of a share of 5,000 about the shares the rule asks for: fixed for two columns
    assert shares["sbp"] == pytest.approx(0.015, abs=4 * np.sqrt(0.015 * 0.985 / PEOPLE))
    assert shares["smoker"] == pytest.approx(0.02, abs=4 * np.sqrt(0.02 * 0.98 / PEOPLE))
    a = (table["age"].to_numpy() - 55.0) / 10.0
    treated = table["bp_tablets"].to_numpy()
    for name, chance in {
        "chol": 1.0 / (1.0 + np.exp(3.0 + 0.3 * a + 0.8 * treated)),
        "egfr": 1.0 / (1.0 + np.exp(3.0 + 0.25 * a + 0.5 * treated)),
    }.items():
        spread = np.sqrt((chance * (1.0 - chance)).sum())
        assert abs(lost[name].sum() - chance.sum()) < 4.0 * spread, name
    assert (lost["hdl"] | ~lost["chol"]).all()
    assert 0.80 < 1.0 - lost.any(axis=1).mean() < 0.92
    assert cohort.complete.sum() == (~lost.any(axis=1)).sum()


def test_the_knots_are_the_default_quantiles_of_complete_people(table: pd.DataFrame) -> None:
    ages = table.dropna()["age"]
    assert tuple(np.quantile(ages, [0.05, 0.35, 0.65, 0.95])) == KNOTS


def test_risks_are_plausible(cohort: Cohort) -> None:
    risk = script.true_risk(cohort.values, 10.0)
    assert 0.06 < risk.mean() < 0.14
    assert np.quantile(risk, 0.05) < 0.02
    assert 0.2 < np.quantile(risk, 0.95) < 0.5
    # older is never safer, at the reference and in whole years over the ages of the cohort
    ages = np.arange(30.0, 80.0)
    others = {name: np.zeros(ages.size) for name in cohort.values} | {"age": ages}
    assert (np.diff(script.linear_predictor(others)) > 0.0).all()


def test_the_true_rule_is_found_again_within_four_standard_errors(table: pd.DataFrame) -> None:
    people = table.dropna()
    terms = pd.DataFrame(script.true_terms(values_of(people)))
    fit = sm.PHReg(days_of(people), terms, status=(people["status"] == 1).to_numpy(), ties="efron").fit()
    away = (fit.params - np.array(list(TRUTH.values()))) / fit.bse
    assert list(terms) == list(TRUTH)
    assert np.abs(away).max() < 4.0
    # and taken together: twelve squares of about unit normals, 99.9 % of which lie below 32.9 (chi-square)
    gap = fit.params - np.array(list(TRUTH.values()))
    assert gap @ np.linalg.solve(fit.cov_params(), gap) < 32.9


def test_the_baseline_is_found_again_where_deaths_are_censored(cohort: Cohort) -> None:
    # Nelson-Aalen with the true risks as weights: sum of 1 / (sum of exp(lp) at risk), against H(10) of the rule;
    # its standard error is the root of the sum of squares. Deaths of anything else only leave the risk set.
    ratio = np.exp(script.linear_predictor(cohort.values))
    events = np.flatnonzero((cohort.status == 1) & (cohort.days <= 10 * script.YEAR))
    steps = np.array([1.0 / ratio[cohort.days >= cohort.days[i]].sum() for i in events])
    assert abs(steps.sum() - script.BASELINE_HAZARD) < 4.0 * np.sqrt((steps**2).sum())
