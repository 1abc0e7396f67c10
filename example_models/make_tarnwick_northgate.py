"""Makes tarnwick-northgate-cohort.csv: invented people of one Tarnwick practice ten years later, for a validation.

    python example_models/make_tarnwick_northgate.py [FOLDER]

No person in it exists. The event comes about by the rule of make_tarnwick_cohort.py but for one thing, which is known:
the hazard is RATIO times as high. So what a validation finds, and what an update mends, can be held against the truth.
Nothing here passes through the program. Needs the development install, which puts the checkout on Python's path.
"""

import sys
from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date, timedelta
from pathlib import Path
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from example_models.make_tarnwick_cohort import (
    BASELINE_HAZARD,
    LEAVING,
    SHAPE,
    YEAR,
    Array,
    linear_predictor,
)

FILE_NAME = "tarnwick-northgate-cohort.csv"
PEOPLE = 2000
SEED = 20261215
SURGERIES = ("Northgate Street", "Weir Lane")
"""Where in the practice somebody goes; it changes nothing about the hazard."""
REGISTERED = date(2012, 1, 1)
"""Everybody was registered on that day, and is followed from it."""
END_OF_STUDY = date(2022, 12, 31)
RATIO = 0.65
"""The hazard of the event, as a multiple of that in the cohort of ten years before."""
AFTER_EARLIER_EVENT = 2.2
"""The hazard of the event in those who had such an event before, as a multiple of that of others alike."""
HEADER = "person,surgery,registered,last_seen,status,prior_cvd,age,sex,sbp,bp_tablets,chol,hdl,smoker,diabetes,egfr"


@dataclass(frozen=True, slots=True, eq=False)
class Practice:
    """The people, one array each: values complete, and apart from them which are left out of the file."""

    surgery: NDArray[np.int64]
    values: Mapping[str, Array]
    prior: NDArray[np.bool_]
    days: NDArray[np.int64]
    status: NDArray[np.int64]
    missing: Mapping[str, NDArray[np.bool_]]


def draw_practice() -> Practice:
    """The practice: values rounded as they are measured; status 1 for the event, 2 for death of anything else first.

    Made from the raw output of the bit generator, which numpy promises not to change, unlike its distributions.
    """
    rows = 19
    raw = np.random.PCG64(SEED).random_raw(rows * PEOPLE).astype(np.uint64).reshape(rows, PEOPLE)
    u = ((raw >> np.uint64(11)).astype(np.float64) + 0.5) * 2.0**-53
    normal = NormalDist()
    body, *noise = (np.array([normal.inv_cdf(float(x)) for x in row]) for row in u[:5])
    values = _draw_values(body, noise, u[5:10])
    prior = u[10] < _expit(-3.6 + 0.9 * (values["age"] - 55.0) / 10.0 + 0.6 * values["male"])
    days, status = _follow_up(values, prior, u[11:14])
    return Practice((u[14] < 0.3).astype(np.int64), values, prior, days, status, _lose(values, u[15:]))


def _draw_values(body: Array, noise: list[Array], u: Array) -> dict[str, Array]:
    # as in the cohort of ten years before, but for older people, lower cholesterol and fewer who smoke
    age = 28.0 + np.floor(56.0 * (0.5 - np.sin(np.arcsin(1.0 - 2.0 * u[0]) / 3.0)))
    male = (u[1] < 0.49).astype(np.float64)
    a = (age - 55.0) / 10.0
    pressure = np.rint(np.exp(4.84 + 0.04 * a + 0.02 * male + 0.045 * body + 0.10 * noise[0]))
    total = np.round(np.maximum(5.0 + 0.08 * a - 0.15 * male + 0.25 * body + 0.95 * noise[1], 2.6), 1)
    hdl = np.round(np.clip(np.exp(0.40 - 0.20 * male - 0.08 * body + 0.20 * noise[2]), 0.6, 2.5), 1)
    diabetes = u[2] < _expit(-2.7 + 0.45 * a + 0.6 * body)
    treated = u[3] < _expit(-1.8 + 0.8 * a + 0.4 * body + 0.6 * diabetes + 0.02 * (pressure - 130.0))
    smoker = u[4] < _expit(-1.6 - 0.25 * a + 0.2 * male)
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


def _follow_up(
    values: Mapping[str, Array], prior: NDArray[np.bool_], u: Array
) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """Whole days from registration to the first of event, other death, leaving and the end, and which it was."""
    hazard = BASELINE_HAZARD * RATIO * np.exp(linear_predictor(values)) * np.where(prior, AFTER_EARLIER_EVENT, 1.0)
    event = 10.0 * (-np.log(u[0]) / hazard) ** (1.0 / SHAPE)
    a = (values["age"] - 55.0) / 10.0
    dying = 0.0014 * np.exp(0.95 * a + 0.3 * values["male"] + 0.7 * values["smoker"] + 0.4 * values["diabetes"])
    other = np.log1p(-0.095 * np.log(u[1]) / dying) / 0.095  # Gompertz: the hazard doubles in 7.3 years
    last = (END_OF_STUDY - REGISTERED).days
    ends = np.stack([event, other, np.minimum(-np.log(u[2]) / LEAVING, last / YEAR)])
    # nobody leaves on the day of registration, nor after the last day
    days = np.clip(np.ceil(ends.min(axis=0) * YEAR), 1.0, float(last)).astype(np.int64)
    return days, np.array([1, 2, 0])[np.argmin(ends, axis=0)]


def _lose(values: Mapping[str, Array], u: Array) -> dict[str, NDArray[np.bool_]]:
    """What is not in the file, by chances that depend on age and tablets and on nothing that happens later."""
    a = (values["age"] - 55.0) / 10.0
    lipids = u[0] < _expit(-3.2 - 0.3 * a - 0.8 * values["bp_treated"])
    return {
        "systolic_bp": u[1] < 0.01,
        "total_cholesterol": lipids,
        "hdl_cholesterol": lipids,
        "smoker": u[2] < 0.02,
        "egfr": u[3] < _expit(-3.2 - 0.25 * a - 0.5 * values["bp_treated"]),
    }


def _expit(eta: Array) -> Array:
    return np.asarray(1.0 / (1.0 + np.exp(-eta)), dtype=np.float64)


def write_rows(practice: Practice) -> str:
    """The text of the file: a line of names, a line a person; an empty cell is a value that nobody measured."""
    places = {"total_cholesterol": 1, "hdl_cholesterol": 1}
    cells = {name: [f"{x:.{places.get(name, 0)}f}" for x in column] for name, column in practice.values.items()}
    cells["male"] = ["FM"[int(x)] for x in practice.values["male"]]
    cells["smoker"] = [("no", "yes")[int(x)] for x in practice.values["smoker"]]
    for name, lost in practice.missing.items():
        empty = "unknown" if name == "smoker" else ""
        cells[name] = [empty if gone else cell for cell, gone in zip(cells[name], lost, strict=True)]
    lines = [HEADER]
    for i in range(PEOPLE):
        last = REGISTERED + timedelta(days=int(practice.days[i]))
        start = f"N{i + 1:04d}", SURGERIES[practice.surgery[i]], REGISTERED.isoformat(), last.isoformat()
        rest = str(practice.status[i]), ("no", "yes")[int(practice.prior[i])], *(column[i] for column in cells.values())
        lines.append(",".join((*start, *rest)))
    return "\n".join(lines) + "\n"


def main(folder: Path) -> Path:
    """Draws the practice, says what came of it, and writes the file into `folder`."""
    practice = draw_practice()
    path = folder / FILE_NAME
    path.write_text(write_rows(practice), encoding="utf-8", newline="\n")
    counts = [int((practice.status == status).sum()) for status in (0, 1, 2)]
    print(f"{PEOPLE} people: {counts[1]} events, {counts[2]} other deaths first, {counts[0]} with neither.")
    print(f"{int(practice.prior.sum())} had such an event before.")
    return path


if __name__ == "__main__":
    print(main(Path(sys.argv[1]) if len(sys.argv) > 1 else Path(__file__).parent))
