"""An invented Cox and an invented logistic model, and cohorts for which they are right, or wrong in one thing."""

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Literal

import msgspec
import numpy as np
from numpy.typing import NDArray

from clinicalc.assessment.model import Model
from clinicalc.coefficients.schema import ModelContent
from clinicalc.cohort.checked import BinaryOutcome, CheckedCohort, Outcome, SurvivalOutcome
from clinicalc.validation.plan import NamedGroup, ValidationPlan
from tests.assessment.whole_case import model_of

Array = NDArray[np.float64]
Kind = Literal["cox", "logistic"]
Wrong = Literal["", "baseline", "slope", "unit", "group"]

TERMS: Mapping[str, tuple[float, float]] = {
    "age": (0.06, 55.0),
    "weight": (0.02, 80.0),
    "systolic_bp": (0.015, 130.0),
    "urea": (0.12, 5.5),
    "male": (0.4, 0.0),
    "smoker": (0.6, 0.0),
    "diabetes": (0.7, 0.0),
}
"""Coefficient, and what is subtracted before."""
BASE = {"cox": -2.6, "logistic": -2.4}
SLIPS = (("weight", 1.0 / 0.45359237), ("urea", 6.006), ("systolic_bp", 1.3))
"""Weight in pounds taken for kilograms; urea in mg/dL taken for mmol/L; a factor that no unit has."""


def invented_model(kind: Kind, *, stops: bool = False) -> Model:
    """The model; `derivation` is what it says of its own people, outside of which a weight may stop it."""
    tree: dict[str, object] = {
        "id": f"invented-{kind}",
        "version": "1.0.0",
        "title": f"Invented {kind} model",
        "outcome": "An invented event",
        "source": {"kind": "local", "citation": "Invented."},
        "unconfirmed": [],
        "use": {
            "population": "Nobody",
            "setting": "Tests",
            "not_for": [],
            "not_used": [],
            "cautions": [],
            "plain": {"outcome": "an invented event", "cautions": []},
        },
        "predictors": [
            _number("age", "Age", "age", "a", [35, 79]),
            _number("weight", "Weight", "weight", "kg", [45, 130], "stop" if stops else "caution"),
            _number("systolic_bp", "Systolic blood pressure", "systolic_bp", "mm[Hg]", [95, 175]),
            _number("urea", "Urea", "urea", "mmol/L", [2.5, 9.5]),
            {
                "kind": "choice",
                "id": "sex",
                "label": "Sex",
                "group": "Person",
                "choices": [{"id": "female", "label": "Female"}, {"id": "male", "label": "Male"}],
            },
            {"kind": "yes_no", "id": "smoker", "label": "Smokes now", "group": "History"},
            {"kind": "yes_no", "id": "diabetes", "label": "Has diabetes", "group": "History"},
        ],
        "derived": [],
        "exclusions": [{"id": "prior", "ask": "Has it happened before?", "because": "Invented."}],
        "equations": [_equation(kind)],
        "recalibration_required": False,
        "recalibrations": [],
        "decision_points": [{"probability": 0.1, "label": "Invented", "source": "Invented"}],
        "worked_examples": [
            {"values": {"age": "50"}, "probability": 0.1, "tolerance": 1.0, "source": "None.", "years": 10}
        ],
        "population": None,
        "documentation": [],
    }
    msgspec.convert(tree, ModelContent)
    return model_of({"model": tree})


def _number(
    id: str, label: str, quantity: str, unit: str, derivation: list[float], outside: str = "caution"
) -> dict[str, object]:
    return {
        "kind": "number",
        "id": id,
        "label": label,
        "quantity": quantity,
        "unit": unit,
        "group": "Person",
        "derivation": derivation,
        "outside_derivation": outside,
    }


def _equation(kind: Kind) -> dict[str, object]:
    terms = []
    for id, (coefficient, centre) in TERMS.items():
        factor: dict[str, object] = {"of": "sex", "steps": [{"is": ["male"]}]} if id == "male" else {"of": id}
        if centre:
            factor["steps"] = [{"subtract": centre}]
        terms.append({"id": id, "coefficient": coefficient, "product": [factor]})
    base = {"log_cumulative_hazard": BASE[kind]} if kind == "cox" else {"intercept": BASE[kind]}
    return {
        "id": "all",
        "applies_when": {},
        "link": "cloglog" if kind == "cox" else "logit",
        "competing_events": {"handled": "censored" if kind == "cox" else "not_applicable"},
        "terms": terms,
        "horizons": [{"years": 10, **base}],
        "uncertainty": {"basis": "none", "because": "Invented."},
    }


@dataclass(frozen=True, slots=True, eq=False)
class Invented:
    """People as they stand in a file, the plan of looking at them, and what was done wrong, by name."""

    cohort: CheckedCohort
    plan: ValidationPlan
    at: str = ""
    up: bool = False


def invent(kind: Kind, seed: int, wrong: Wrong = "", people: int = 7000, shift: float = 0.0) -> Invented:
    """A cohort for which the model is right but for one thing; the same seed gives the same people."""
    rng = np.random.default_rng(seed)
    columns = _draw(rng, people)
    practice = rng.integers(0, 6, people)
    eta = _line(kind, columns) + shift
    up, at = seed % 2 == 0, ""
    if wrong == "baseline":
        eta = eta + (0.4 if up else -0.4)
    elif wrong == "slope":
        centre = float(eta.mean())
        eta = centre + (eta - centre) * (0.5 if seed % 4 < 2 else 1.7)
    elif wrong == "group":
        at = ("smoker", "practice", "sex", "diabetes")[seed % 4]
        who = practice == 2 if at == "practice" else columns[at] == 1.0
        eta = eta + np.where(who, 0.7 if up else -0.7, 0.0)
    outcome = _happen(kind, eta, rng)
    if wrong == "unit":
        at, factor = SLIPS[seed % 3]
        columns[at] = columns[at] * factor
    cohort = CheckedCohort(people, columns, outcome, None, np.arange(2, people + 2), ())
    groups = (NamedGroup("practice", "practice", practice.astype(np.int64), tuple("ABCDEF")),)
    return Invented(cohort, ValidationPlan("Invented people", groups=groups), at, up)


def _draw(rng: np.random.Generator, people: int) -> dict[str, Array]:
    male = (rng.random(people) < 0.48).astype(np.float64)
    age = np.clip(rng.normal(57, 11, people), 35, 79)
    weight = 78 + 10 * male + rng.normal(0, 14, people)
    return {
        "age": age,
        "weight": np.clip(weight, 40, 180),
        "systolic_bp": 132 + 0.4 * (age - 57) + rng.normal(0, 15, people),
        "urea": np.clip(np.exp(rng.normal(1.65, 0.25, people)) + 0.02 * (age - 57), 1.5, 20),
        "sex": male,
        "smoker": (rng.random(people) < 0.22).astype(np.float64),
        "diabetes": (rng.random(people) < 0.12).astype(np.float64),
    }


def _line(kind: Kind, columns: Mapping[str, Array]) -> Array:
    eta = np.full(len(columns["age"]), BASE[kind])
    for id, (coefficient, centre) in TERMS.items():
        eta += coefficient * (columns["sex" if id == "male" else id] - centre)
    return eta


def _happen(kind: Kind, eta: Array, rng: np.random.Generator) -> Outcome:
    """A yes or no; or times with cumulative hazard e^eta (t / 10)^1.2, watched for 3 to 14 years, some dying first."""
    if kind == "logistic":
        return BinaryOutcome((rng.random(len(eta)) < 1 / (1 + np.exp(-eta))).astype(np.float64))
    event = 10 * (rng.exponential(size=len(eta)) / np.exp(eta)) ** (1 / 1.2)
    death = rng.exponential(60, len(eta))
    end = rng.uniform(3, 14, len(eta))
    times = np.ceil(365.25 * np.minimum.reduce([event, death, end]))
    status = np.where(event <= np.minimum(death, end), 1.0, np.where(death <= end, 2.0, 0.0))
    return SurvivalOutcome(times, status, None, "d")
