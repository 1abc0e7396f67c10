"""A practice asks whether its model holds: file, validation, new version, vetting, approval, and one patient again.

Every figure that matters on the way is worked out here a second time, from the texts of the files, with numpy alone.
"""

import csv
import json
import math
import shutil
from dataclasses import dataclass
from datetime import date
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.typing import NDArray

from tests.cli.calling import call
from tests.cli.northgate import MODEL, PEOPLE, PLAN, lay_out
from tests.cli.practices import Desk, found_practice

Array = NDArray[np.float64]

ID = "tarnwick-cvd-10y-cox"
TEN_YEARS = 3652.5
PATIENT = {
    "prior_cvd": "no",
    "age": "58",
    "sex": "male",
    "systolic_bp": "147",
    "bp_treated": "yes",
    "total_cholesterol": "6.0",
    "hdl_cholesterol": "1.1",
    "egfr": "74",
    "smoker": "yes",
    "diabetes": "no",
}
WORDS = [f"{name}={typed}" for name, typed in PATIENT.items()]
Z = 1.959963984540054


@pytest.fixture
def desk(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Desk:
    """A practice with a library, and the people of ten years in its folder."""
    practice = found_practice(tmp_path, monkeypatch)
    lay_out(tmp_path)
    monkeypatch.chdir(tmp_path)
    return practice


@dataclass(frozen=True, slots=True, eq=False)
class Seen:
    """Those whom the model gives a number, by the texts alone: log hazards, days, and whether it came."""

    eta: Array
    days: Array
    event: NDArray[np.bool_]


def log_hazard(model: dict[str, Any], row: dict[str, float]) -> float:
    """The log cumulative hazard by 10 years of one person, from the figures of a file."""
    (equation,) = model["equations"]
    b = {term["id"]: term["coefficient"] for term in equation["terms"]}
    knots = equation["terms"][1]["product"][0]["steps"][0]["spline"]["knots"]
    age = row["age"]
    line = equation["horizons"][0]["log_cumulative_hazard"] + b["age"] * age
    line += b["age_spline_1"] * spline(age, knots, 0) + b["age_spline_2"] * spline(age, knots, 1)
    line += b["male"] * row["male"] + b["bp_treated"] * row["bp_treated"]
    line += b["smoker"] * row["smoker"] + b["diabetes"] * row["diabetes"]
    line += b["age_smoker"] * (age - 55.0) / 10.0 * row["smoker"]
    line += b["systolic_bp"] * (row["systolic_bp"] - 120.0) / 10.0 + b["egfr"] * (row["egfr"] - 85.0) / 10.0
    line += b["total_cholesterol"] * (row["total_cholesterol"] - 5.0)
    line += b["hdl_cholesterol"] * (row["hdl_cholesterol"] - 1.4)
    return float(line)


def spline(x: float, knots: list[float], j: int) -> float:
    """Basis j (from 0) of a restricted cubic spline: Harrell, Regression Modeling Strategies, 2015, eq. 2.25."""
    cubes = [max(x - knot, 0.0) ** 3 for knot in knots]
    last, before = knots[-1], knots[-2]
    lower = cubes[-2] * (last - knots[j]) / (last - before)
    upper = cubes[-1] * (before - knots[j]) / (last - before)
    return (cubes[j] - lower + upper) / (last - knots[0]) ** 2


def model_of(path: Path) -> dict[str, Any]:
    """The model of a coefficient file as JSON has it."""
    content: dict[str, Any] = json.loads(path.read_text(encoding="utf-8"))["model"]
    return content


def take_people(folder: Path, model: dict[str, Any]) -> Seen:
    """Everybody of 30 to 79 years without an earlier event and with every value."""
    eta, days, event = [], [], []
    with (folder / PEOPLE).open(encoding="utf-8", newline="") as file:
        for row in csv.DictReader(file):
            measured = [row[name] for name in ("sbp", "chol", "hdl", "egfr")]
            if row["prior_cvd"] == "yes" or "" in measured or row["smoker"] == "unknown":
                continue
            if not 30 <= int(row["age"]) <= 79:
                continue
            values = dict(
                zip(("systolic_bp", "total_cholesterol", "hdl_cholesterol", "egfr"), map(float, measured), strict=True)
            )
            values |= {"age": float(row["age"]), "male": float(row["sex"] == "M")}
            values |= {"smoker": float(row["smoker"] == "yes"), "bp_treated": float(row["bp_tablets"])}
            eta.append(log_hazard(model, values | {"diabetes": float(row["diabetes"])}))
            days.append((date.fromisoformat(row["last_seen"]) - date.fromisoformat(row["registered"])).days)
            event.append(row["status"] == "1")
    return Seen(np.array(eta), np.array(days, dtype=np.float64), np.array(event))


def kaplan_meier(seen: Seen) -> float:
    """The share with the event by 10 years."""
    left = 1.0
    for time in np.unique(seen.days[seen.event & (seen.days <= TEN_YEARS)]):
        left *= 1.0 - (seen.event & (seen.days == time)).sum() / (seen.days >= time).sum()
    return 1.0 - left


def baseline(seen: Seen) -> tuple[float, float]:
    """The cumulative hazard of whoever has eta 0 by 10 years, and its variance; ties by Efron's method.

    Sum over events of 1 / (sum of exp(eta) at risk), less k/d of those who have the event then for the k-th of d.
    """
    ratio = np.exp(seen.eta)
    total = variance = 0.0
    for time in np.unique(seen.days[seen.event & (seen.days <= TEN_YEARS)]):
        own = seen.event & (seen.days == time)
        at_risk, tied, count = ratio[seen.days >= time].sum(), ratio[own].sum(), int(own.sum())
        for k in range(count):
            step = 1.0 / (at_risk - k / count * tied)
            total, variance = total + step, variance + step**2
    return float(total), float(variance)


def band_variance(record: dict[str, Any]) -> float:
    """The variance of a log hazard, read off the ends of its 95 % band."""
    ends = [math.log(-math.log1p(-record["band"][end])) for end in ("lower", "upper")]
    return ((ends[1] - ends[0]) / (2.0 * Z)) ** 2


def test_from_the_file_of_people_to_the_bedside_again(desk: Desk) -> None:
    folder = desk.folder
    parent = model_of(folder / MODEL)
    seen = take_people(folder, parent)

    # does it hold? What the program says is what the texts of the files give
    checked = call("validate", PLAN, "--check")
    assert (checked.status, checked.err) == (0, "")
    found = call("validate", PLAN, "--json").record["validation"]
    assert found["people"]["used"] == len(seen.eta)
    (at,) = found["horizons"]
    risk = -np.expm1(-np.exp(seen.eta))
    assert at["expected"] == pytest.approx(risk.mean(), abs=1e-12)
    assert at["observed"]["value"] == pytest.approx(kaplan_meier(seen), abs=1e-12)
    assert at["observed_to_expected"]["value"] == pytest.approx(kaplan_meier(seen) / risk.mean(), abs=1e-12)
    assert [fault["kind"] for fault in found["faults"]] == ["too_high"]
    flagged = int((risk >= 0.2).sum())
    assert [one["flagged"] for one in at["decisions"] if one["point"] == 0.2] == [flagged]
    total, variance = baseline(seen)
    assert at["intercept"]["value"] == pytest.approx(math.log(total), abs=1e-10)

    # no: a version that fits
    made = call("update", PLAN, "-o", "new.json", "--sign-key", desk.key("press"), "--json")
    assert (made.status, made.err) == (0, "")
    fingerprint = made.record["fingerprint"]
    child = model_of(folder / "new.json")
    moved = (
        child["equations"][0]["horizons"][0]["log_cumulative_hazard"]
        - parent["equations"][0]["horizons"][0]["log_cumulative_hazard"]
    )
    assert moved == pytest.approx(math.log(total), abs=1e-10)
    assert [term["coefficient"] for term in child["equations"][0]["terms"]] == [
        term["coefficient"] for term in parent["equations"][0]["terms"]
    ]

    # whoever reads it through finds parent, people and method
    inspected = " ".join(call("inspect", "new.json").out.split())
    assert "version 1.0.0" in inspected
    assert "Tarnwick Northgate, everybody registered on 2012-01-01, invented" in inspected
    assert "has not been validated in others" in inspected

    # both come into the library; each gives its number only when it is approved
    assert desk.install(str(folder / MODEL)).status == 0
    old = found["model"]["fingerprint"]
    assert desk.approve("--fingerprint", old, model=old).status == 0
    before = call("assess", "--approved", ID, *WORDS, "--json").record
    assert desk.install("new.json").status == 0
    still = call("assess", "--approved", ID, *WORDS, "--json").record
    assert still["model"]["fingerprint"] == before["model"]["fingerprint"] == old
    assert desk.library("diff", old, fingerprint).status == 0
    approved = desk.approve("--fingerprint", fingerprint, model=fingerprint)
    assert (approved.status, approved.err) == (0, ""), approved.err
    after = call("assess", "--approved", fingerprint, *WORDS, "--json").record
    assert after["model"]["fingerprint"] == fingerprint

    # the patient's numbers, by hand
    row = {name: float(typed) for name, typed in PATIENT.items() if typed.replace(".", "").isdigit()}
    row |= {"male": 1.0, "bp_treated": 1.0, "smoker": 1.0, "diabetes": 0.0}
    eta = log_hazard(parent, row)
    assert before["probability"] == pytest.approx(-math.expm1(-math.exp(eta)), abs=1e-12)
    assert after["probability"] == pytest.approx(-math.expm1(-math.exp(eta) * total), abs=1e-10)
    # the band has what the shift itself is not known by, beside what the coefficients are
    assert band_variance(after) - band_variance(before) == pytest.approx(variance / total**2, rel=1e-6)


def test_the_approved_model_is_held_against_the_people_as_it_is_used(desk: Desk) -> None:
    assert desk.install(str(desk.folder / MODEL)).status == 0
    by_name = call("validate", PLAN, "--json").record["validation"]
    waiting = call("validate", PLAN, "--approved", ID)
    assert (waiting.status, waiting.out) == (3, "")
    old = by_name["model"]["fingerprint"]
    assert desk.approve("--fingerprint", old, model=old).status == 0
    shutil.move(desk.folder / MODEL, desk.folder / "elsewhere.json")
    approved = call("validate", PLAN, "--approved", ID, "--json")
    assert (approved.status, approved.err) == (0, "")
    assert approved.record["validation"] == by_name
