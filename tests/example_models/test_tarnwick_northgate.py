"""The invented practice of Northgate: what its script says of it is so, and its known deviation can be found again.

The program takes no part here.
"""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from example_models import make_tarnwick_northgate as script
from example_models.make_tarnwick_cohort import BASELINE_HAZARD, SHAPE, YEAR, Array, linear_predictor
from example_models.make_tarnwick_northgate import AFTER_EARLIER_EVENT, PEOPLE, RATIO, Practice

SHIPPED = Path(__file__).parents[2] / "example_models" / "tarnwick-northgate-cohort.csv"


@pytest.fixture(scope="module")
def practice() -> Practice:
    return script.draw_practice()


@pytest.fixture(scope="module")
def table() -> pd.DataFrame:
    return pd.read_csv(SHIPPED, parse_dates=["registered", "last_seen"], na_values=["unknown"])


def days_of(table: pd.DataFrame) -> Array:
    days: Array = (table["last_seen"] - table["registered"]).dt.days.to_numpy().astype(np.float64)
    return days


def expected(practice: Practice) -> Array:
    """The cumulative hazard of each until his own time by the rule of ten years before, (n,)."""
    years = practice.days / YEAR
    hazard: Array = BASELINE_HAZARD * (years / 10.0) ** SHAPE * np.exp(linear_predictor(practice.values))
    return hazard


def test_the_script_writes_the_shipped_file(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    made = script.main(tmp_path)
    assert made.read_bytes() == SHIPPED.read_bytes()
    assert SHIPPED.stat().st_size <= 200_000
    table = pd.read_csv(made)
    counts = table["status"].value_counts()
    printed = capsys.readouterr().out
    assert f"{counts[1]} events, {counts[2]} other deaths first, {counts[0]} with neither" in printed
    assert f"{(table['prior_cvd'] == 'yes').sum()} had such an event before" in printed


def test_the_file_holds_what_was_drawn(table: pd.DataFrame, practice: Practice) -> None:
    assert len(table) == PEOPLE
    assert table["person"].is_unique
    assert (days_of(table) == practice.days).all()
    assert (table["status"].to_numpy() == practice.status).all()
    assert ((table["prior_cvd"] == "yes").to_numpy() == practice.prior).all()
    assert (table["age"].to_numpy() == practice.values["age"]).all()
    columns = {"sbp": "systolic_bp", "chol": "total_cholesterol", "hdl": "hdl_cholesterol", "egfr": "egfr"}
    for column, name in columns.items():
        lost = practice.missing[name]
        assert (table[column].isna().to_numpy() == lost).all(), name
        assert (table[column].to_numpy()[~lost] == practice.values[name][~lost]).all(), name
    assert (table["smoker"].isna().to_numpy() == practice.missing["smoker"]).all()
    assert set(table["surgery"]) == set(script.SURGERIES)


def test_follow_up_reaches_beyond_ten_years(table: pd.DataFrame) -> None:
    days = days_of(table)
    assert (table["registered"] == pd.Timestamp(script.REGISTERED)).all()
    assert table["last_seen"].max() == pd.Timestamp(script.END_OF_STUDY)
    assert days.min() >= 1
    assert 0.5 < (days > 10 * YEAR).mean() < 0.8
    assert 0.03 < (table["status"] == 2).mean() < 0.1


def test_the_hazard_is_what_the_script_says(practice: Practice) -> None:
    # events over those that the rule expects in the very follow-up: a Poisson count over its mean, within four
    # standard errors of the stated multiple
    events = practice.status == 1
    for group, ratio in ((~practice.prior, RATIO), (practice.prior, RATIO * AFTER_EARLIER_EVENT)):
        count = int((events & group).sum())
        found = count / float(expected(practice)[group].sum())
        assert abs(np.log(found / ratio)) < 4.0 / np.sqrt(count)
    # and they tell it from no deviation at all
    count = int((events & ~practice.prior).sum())
    assert np.log(count / float(expected(practice)[~practice.prior].sum())) < -3.0 / np.sqrt(count)


def test_nothing_else_is_wrong(practice: Practice) -> None:
    # by surgery, sex and diabetes events over those expected agree with one another
    events = (practice.status == 1) & ~practice.prior
    hazard = np.where(practice.prior, 0.0, expected(practice))
    for split in (practice.surgery == 1, practice.values["male"] == 1.0, practice.values["diabetes"] == 1.0):
        counts = [int((events & part).sum()) for part in (split, ~split)]
        ratios = [count / float(hazard[part].sum()) for count, part in zip(counts, (split, ~split), strict=True)]
        assert abs(np.log(ratios[0] / ratios[1])) < 3.5 * np.sqrt(1 / counts[0] + 1 / counts[1])
