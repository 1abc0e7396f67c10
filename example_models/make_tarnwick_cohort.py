"""Makes tarnwick-cohort.csv: invented people of the Tarnwick practices, followed up for heart attack or stroke.

    python example_models/make_tarnwick_cohort.py [FOLDER]

No person in it exists. The rule by which events come about is known and printed, so that a fit can be held against it.
Nothing here passes through the program, so that the one can be checked by the other. Needs numpy alone.
"""

import sys
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date, timedelta
from pathlib import Path
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

FILE_NAME = "tarnwick-cohort.csv"
PEOPLE = 5000
SEED = 20261201
PRACTICES = ("Northgate", "Millrace", "Fenside", "Old Quay", "Castle Row", "Harbour Lane")
"""Where a person is registered; it changes nothing about the hazard."""
FIRST_ENTRY = date(2003, 1, 2)
ENTRY_DAYS = 3650
"""People enter on any of so many days from the first."""
END_OF_STUDY = date(2022, 12, 31)
LEAVING = 0.025
"""Hazard of leaving the practices, a year; the same for everybody."""
YEAR = 365.25

KNOTS = (37.0, 50.0, 60.0, 73.0)
"""Years of age: the 0.05, 0.35, 0.65 and 0.95 quantiles of those without a missing value."""
SHAPE = 1.15
BASELINE_HAZARD = 0.05
"""Cumulative hazard at 10 years of the person at whom every term of TRUTH is zero."""
TRUTH: Mapping[str, float] = {
    "age": 0.1,
    "age_spline_1": -0.06,
    "age_spline_2": 0.14,
    "male": 0.45,
    "systolic_bp": 0.16,
    "bp_treated": 0.30,
    "total_cholesterol": 0.18,
    "hdl_cholesterol": -0.65,
    "smoker": 0.70,
    "diabetes": 0.60,
    "egfr": -0.08,
    "age_smoker": -0.15,
}
"""Log hazard ratios: age in years from 55; its restricted cubic spline on KNOTS, scaled by the square of their span;
pressure in 10 mmHg from 120; cholesterol in mmol/L from 5, HDL from 1.4; eGFR in 10 mL/min/1.73 m2 from 85; the product
with smoking in decades of age from 55."""
HEADER = "person,practice,entry_date,exit_date,status,age,sex,sbp,bp_tablets,chol,hdl,smoker,diabetes,egfr"


@dataclass(frozen=True, slots=True, eq=False)
class Cohort:
    """The people, one array each: values complete, and apart from them which are left out of the file."""

    practice: NDArray[np.int64]
    values: Mapping[str, Array]
    entry: NDArray[np.int64]
    days: NDArray[np.int64]
    status: NDArray[np.int64]
    missing: Mapping[str, NDArray[np.bool_]]

    @property
    def complete(self) -> NDArray[np.bool_]:
        """Who has every value in the file, shape (n,)."""
        lost: NDArray[np.bool_] = np.any(list(self.missing.values()), axis=0)
        return ~lost


def draw_cohort() -> Cohort:
    """The cohort: values rounded as they are measured; status 1 for the event, 2 for death of anything else first.

    Made from the raw output of the bit generator, which numpy promises not to change, unlike its distributions.
    """
    rows = 20
    raw = np.random.PCG64(SEED).random_raw(rows * PEOPLE).astype(np.uint64).reshape(rows, PEOPLE)
    u = ((raw >> np.uint64(11)).astype(np.float64) + 0.5) * 2.0**-53
    normal = NormalDist()
    body, *noise = (np.array([normal.inv_cdf(float(x)) for x in row]) for row in u[:5])
    values = _draw_values(body, noise, u[5:10])
    entry = np.floor(ENTRY_DAYS * u[10]).astype(np.int64)
    days, status = _follow_up(values, entry, u[11:14])
    return Cohort(np.floor(len(PRACTICES) * u[14]).astype(np.int64), values, entry, days, status, _lose(values, u[15:]))


def _draw_values(body: Array, noise: list[Array], u: Array) -> dict[str, Array]:
    # `body` stands for what weight and habits do to all of them at once, and is not recorded
    # most are of middle age: the inverse of 3x^2 - 2x^3, a Beta(2, 2) distribution
    age = 30.0 + np.floor(50.0 * (0.5 - np.sin(np.arcsin(1.0 - 2.0 * u[0]) / 3.0)))
    male = (u[1] < 0.48).astype(np.float64)
    a = (age - 55.0) / 10.0
    pressure = np.rint(np.exp(4.85 + 0.04 * a + 0.02 * male + 0.045 * body + 0.10 * noise[0]))
    total = np.round(np.maximum(5.3 + 0.10 * a - 0.15 * male + 0.25 * body + 0.95 * noise[1], 2.6), 1)
    hdl = np.round(np.clip(np.exp(0.40 - 0.20 * male - 0.08 * body + 0.20 * noise[2]), 0.5, 2.5), 1)
    diabetes = u[2] < _expit(-2.9 + 0.45 * a + 0.6 * body)
    treated = u[3] < _expit(-1.9 + 0.8 * a + 0.4 * body + 0.6 * diabetes + 0.02 * (pressure - 130.0))
    smoker = u[4] < _expit(-1.2 - 0.25 * a + 0.2 * male)
    egfr = np.rint(np.clip(86.0 - 8.5 * a - 2.0 * body - 3.0 * diabetes + 12.0 * noise[3], 15.0, 125.0))
    return {
        "age": age,
        "male": male,
        "systolic_bp": pressure,
        "bp_treated": treated.astype(np.float64),
        "total_cholesterol": total,
        "hdl_cholesterol": hdl,
        "smoker": smoker.astype(np.float64),
        "diabetes": diabetes.astype(np.float64),
        "egfr": egfr,
    }


def _follow_up(values: Mapping[str, Array], entry: NDArray[np.int64], u: Array) -> tuple[NDArray[np.int64], ...]:
    """Whole days from entry to the first of event, other death, leaving and the end of the study, and which it was."""
    ratio = np.exp(linear_predictor(values))
    event = 10.0 * (-np.log(u[0]) / (BASELINE_HAZARD * ratio)) ** (1.0 / SHAPE)
    a = (values["age"] - 55.0) / 10.0
    dying = 0.0016 * np.exp(0.95 * a + 0.3 * values["male"] + 0.7 * values["smoker"] + 0.4 * values["diabetes"])
    other = np.log1p(-0.095 * np.log(u[1]) / dying) / 0.095  # Gompertz: the hazard doubles in 7.3 years
    leaving = -np.log(u[2]) / LEAVING
    last = ((END_OF_STUDY - FIRST_ENTRY).days - entry) / YEAR
    ends = np.stack([event, other, np.minimum(leaving, last)])
    which = np.argmin(ends, axis=0)
    # nobody leaves on the day of entry, nor after the last day
    days = np.minimum(np.maximum(np.ceil(ends.min(axis=0) * YEAR), 1.0), np.rint(last * YEAR))
    return days.astype(np.int64), np.array([1, 2, 0])[which]


def _lose(values: Mapping[str, Array], u: Array) -> dict[str, NDArray[np.bool_]]:
    """What is not in the file, by chances that depend on age and tablets and on nothing that happens later."""
    a = (values["age"] - 55.0) / 10.0
    lipids = u[0] < _expit(-3.0 - 0.3 * a - 0.8 * values["bp_treated"])
    return {
        "systolic_bp": u[1] < 0.015,
        "total_cholesterol": lipids,
        "hdl_cholesterol": lipids | (u[2] < 0.01),
        "smoker": u[3] < 0.02,
        "egfr": u[4] < _expit(-3.0 - 0.25 * a - 0.5 * values["bp_treated"]),
    }


def _expit(eta: Array) -> Array:
    return np.asarray(1.0 / (1.0 + np.exp(-eta)), dtype=np.float64)


def spline(x: Array, j: int) -> Array:
    """Restricted cubic spline function j (from 1) on KNOTS, shape of x.

    Source: Harrell, Regression Modeling Strategies, 2015, eq. 2.25, scaled by the square of the knots' span.
    """
    cubes = [np.clip(x - knot, 0.0, None) ** 3 for knot in KNOTS]
    gap = KNOTS[3] - KNOTS[2]
    lower = cubes[2] * (KNOTS[3] - KNOTS[j - 1]) / gap
    upper = cubes[3] * (KNOTS[2] - KNOTS[j - 1]) / gap
    return np.asarray((cubes[j - 1] - lower + upper) / (KNOTS[3] - KNOTS[0]) ** 2, dtype=np.float64)


def true_terms(values: Mapping[str, Array]) -> dict[str, Array]:
    """The columns that TRUTH's figures belong to, in its order."""
    years = values["age"]
    return {
        "age": years - 55.0,
        "age_spline_1": spline(years, 1),
        "age_spline_2": spline(years, 2),
        "male": values["male"],
        "systolic_bp": (values["systolic_bp"] - 120.0) / 10.0,
        "bp_treated": values["bp_treated"],
        "total_cholesterol": values["total_cholesterol"] - 5.0,
        "hdl_cholesterol": values["hdl_cholesterol"] - 1.4,
        "smoker": values["smoker"],
        "diabetes": values["diabetes"],
        "egfr": (values["egfr"] - 85.0) / 10.0,
        "age_smoker": (years - 55.0) / 10.0 * values["smoker"],
    }


def linear_predictor(values: Mapping[str, Array]) -> Array:
    """The true log hazard ratio of each person against the one with every term at zero, shape (n,)."""
    terms = true_terms(values)
    return np.asarray(sum(figure * terms[name] for name, figure in TRUTH.items()), dtype=np.float64)


def true_risk(values: Mapping[str, Array], years: float) -> Array:
    """The probability of the event within so many years if nobody died of anything else first, shape (n,)."""
    hazard = BASELINE_HAZARD * (years / 10.0) ** SHAPE
    return np.asarray(-np.expm1(-hazard * np.exp(linear_predictor(values))), dtype=np.float64)


def write_rows(cohort: Cohort) -> str:
    """The text of the file: a line of names, a line a person; an empty cell is a value that nobody measured."""
    numbers = {name: [f"{x:.{_places(name)}f}" for x in column.tolist()] for name, column in cohort.values.items()}
    numbers["male"] = ["FM"[int(x)] for x in cohort.values["male"].tolist()]
    numbers["smoker"] = [("no", "yes")[int(x)] for x in cohort.values["smoker"].tolist()]
    for name, lost in cohort.missing.items():
        empty = "unknown" if name == "smoker" else ""
        numbers[name] = [empty if gone else cell for cell, gone in zip(numbers[name], lost.tolist(), strict=True)]
    lines = [HEADER]
    for i in range(PEOPLE):
        begun = FIRST_ENTRY + timedelta(days=int(cohort.entry[i]))
        ended = begun + timedelta(days=int(cohort.days[i]))
        start = f"T{i + 1:04d}", PRACTICES[cohort.practice[i]], begun.isoformat(), ended.isoformat()
        lines.append(",".join([*start, str(cohort.status[i]), *(cells[i] for cells in numbers.values())]))
    return "\n".join(lines) + "\n"


def _places(name: str) -> int:
    return 1 if name in ("total_cholesterol", "hdl_cholesterol") else 0


def describe_truth() -> str:
    """The true rule in one sentence, as the study file documents it."""
    rule = " ".join(f"{'+' if figure > 0 else '-'} {abs(figure):g} {name}" for name, figure in TRUTH.items())
    return (
        f"Cumulative hazard {BASELINE_HAZARD:g} (years/10)^{SHAPE:g} exp({rule.removeprefix('+ ')}); age and the knots"
        f" {', '.join(f'{knot:g}' for knot in KNOTS)} in years, values centred and scaled as in the terms."
    )


def main(folder: Path) -> Path:
    """Draws the cohort, says by which rule and what came of it, and writes the file into `folder`."""
    cohort = draw_cohort()
    path = folder / FILE_NAME
    path.write_text(write_rows(cohort), encoding="utf-8", newline="\n")
    print(describe_truth())
    counts = [int((cohort.status == status).sum()) for status in (0, 1, 2)]
    print(f"{PEOPLE} people: {counts[1]} events, {counts[2]} other deaths first, {counts[0]} with neither.")
    print(f"{int(cohort.complete.sum())} people without a missing value.")
    return path


if __name__ == "__main__":
    print(main(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent))
