"""Small studies that ask for the methods beside the plain fit, of random people."""

from pathlib import Path
from typing import Any

import numpy as np

from clinicalc.development.estimating import FittedStudy
from clinicalc.operations.course import Course
from clinicalc.operations.study import check_data, fit_study, open_study
from tests.development.describing import Tree
from tests.development.studying import BINARY, plain_study, timed, write_people, write_study

PEOPLE = 400


def random_people() -> dict[str, Any]:
    """Random people (numpy's PCG64, seed 4): x and z tell of times and of the answer y; 40 lack x."""
    draw = np.random.default_rng(4)
    x, z = draw.normal(50, 10, PEOPLE).round(1), draw.integers(0, 2, PEOPLE)
    eta = 0.06 * (x - 50) + 0.7 * z
    time = (draw.exponential(900, PEOPLE) * np.exp(-eta)).round() + 1
    status = draw.choice([0, 1, 2], PEOPLE, p=[0.3, 0.5, 0.2])
    y = (draw.random(PEOPLE) < 1 / (1 + np.exp(-eta))).astype(int)
    return {"x": np.where(np.arange(PEOPLE) < 40, np.nan, x), "z": z, "time": time, "status": status, "y": y}


def timed_study(kind: str, **more: Any) -> Tree:
    """A Cox or Fine–Gray study of the time to the event, other events competing."""
    study = plain_study(["x", "z"], timed(competing="2"), {"kind": kind}, **more)
    handled = "censored" if kind == "cox" else "subdistribution"
    study["equations"][0]["competing_events"] = {"handled": handled, "which": "another death"}
    return study


def binary_study(**estimate: Any) -> Tree:
    """A logistic study of y."""
    return plain_study(["x", "z"], BINARY, {"kind": "logistic"} | estimate)


def fitted_of(folder: Path, study: Tree, columns: dict[str, Any] | None = None) -> FittedStudy:
    """The study fitted by the verbs that window and command use."""
    write_people(folder / "people.csv", random_people() if columns is None else columns)
    read, course = open_study(write_study(folder, study)), Course()
    return fit_study(read, check_data(read, course), course)
