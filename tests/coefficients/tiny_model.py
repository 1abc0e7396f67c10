"""Two small invented models that pass every rule, for the tests of all rooms, and the tools to spoil them."""

import copy
import json
from typing import Any, Final

import msgspec

from clinicalc.coefficients.fingerprint import canonical_bytes, fingerprint_of
from clinicalc.coefficients.reader import ReadFile, read_bytes
from clinicalc.coefficients.schema import CoefficientFile, ModelContent
from clinicalc.errors import CoefficientFileRefused

Tree = dict[str, Any]

DROP: Final = object()
"""Put in the place of a value, it takes the member away."""

_USE: Final[Tree] = {
    "population": "Invented people of Tarnwick",
    "setting": "Primary care",
    "not_for": ["children"],
    "not_used": ["family history"],
    "cautions": [],
    "plain": {"outcome": "an invented illness", "cautions": []},
}

_HEAD: Final[Tree] = {
    "version": "1.0.0",
    "outcome": "An invented event",
    "source": {"kind": "local", "citation": "Tarnwick practice, invented data"},
    "unconfirmed": [],
    "use": _USE,
}


def tiny_logit_model() -> ModelContent:
    """One logistic equation in age and smoking, with a covariance, an exclusion and one horizon of 10 years."""
    return msgspec.convert(_logit_tree(), ModelContent)


def tiny_cloglog_model() -> ModelContent:
    """Two cloglog equations by sex without a band, horizons of 5 and 10 years, one recalibration."""
    return msgspec.convert(_cloglog_tree(), ModelContent)


def file_of(model: ModelContent) -> CoefficientFile:
    """The model as an unsigned coefficient file."""
    return CoefficientFile(format="clinicalc.coefficients/1", model=model, signatures=())


def read_of(model: ModelContent, name: str = "tiny.json") -> ReadFile:
    """The model as if it had been read, without asking the rules."""
    canonical = canonical_bytes(file_of(model))
    return ReadFile(name, file_of(model), canonical, fingerprint_of(canonical))


def tree_of(model: ModelContent) -> Tree:
    """The file as plain dicts and lists, free to be changed."""
    tree: Tree = json.loads(msgspec.json.encode(file_of(model)))
    return tree


def changed(tree: Tree, *changes: tuple[str, Any]) -> Tree:
    """A copy of the tree with the values at these JSON Pointers put in, or taken away where DROP is given.

    A pointer that ends in "/-" appends to a list.
    """
    result = copy.deepcopy(tree)
    for pointer, value in changes:
        *way, last = pointer.split("/")[1:]
        place: Any = result
        for part in way:
            place = place[int(part)] if isinstance(place, list) else place[part]
        if isinstance(place, list) and last == "-":
            place.append(value)
        elif value is DROP:
            del place[int(last) if isinstance(place, list) else last]
        else:
            place[int(last) if isinstance(place, list) else last] = value
    return result


def refusals(tree: object) -> dict[str, str]:
    """What the reader says to a tree, by path; empty when it accepts it."""
    return refusals_of_bytes(json.dumps(tree).encode())


def refusals_of_bytes(data: bytes) -> dict[str, str]:
    """What the reader says to these bytes, by path; several sentences about one place stand in lines."""
    try:
        read_bytes(data, "spoilt.json")
    except CoefficientFileRefused as refused:
        found: dict[str, str] = {}
        for problem in refused.problems:
            found[problem.path] = "\n".join(filter(None, (found.get(problem.path), problem.message)))
        return found
    return {}


def _logit_tree() -> Tree:
    return {
        "id": "tiny-logit",
        "title": "Tiny logistic model",
        **_HEAD,
        "predictors": [
            {
                "id": "age",
                "label": "Age",
                "kind": "number",
                "quantity": "age",
                "unit": "a",
                "group": "Person",
                "derivation": [30, 75],
                "outside_derivation": "stop",
            },
            {"id": "smoker", "label": "Smokes now", "kind": "yes_no", "group": "History", "modifiable": True},
        ],
        "derived": [],
        "exclusions": [{"id": "prior_event", "ask": "Has it happened before?", "because": "It was left out."}],
        "equations": [
            {
                "id": "all",
                "applies_when": {},
                "link": "logit",
                "competing_events": {"handled": "not_applicable"},
                "terms": [
                    {"id": "age", "coefficient": 0.06, "product": [{"of": "age"}]},
                    {"id": "smoker", "coefficient": 0.5, "product": [{"of": "smoker"}]},
                ],
                "horizons": [{"years": 10, "intercept": -5}],
                "uncertainty": {
                    "basis": "covariance",
                    "covariance": [[0.0004, 0.001], [0.001, 0.04]],
                    "at_centre": [{"years": 10, "variance": 0.01, "centre": [55, 0.4]}],
                },
                "reference_person": {"age": 50, "smoker": "no"},
            }
        ],
        "recalibration_required": False,
        "recalibrations": [],
        "decision_points": [{"probability": 0.1, "label": "Talk it over", "source": "invented"}],
        "worked_examples": [
            {
                # expit(-5 + 0.06 * 50 + 0.5) = expit(-1.5); its variance is
                # 0.01 + 25 * 0.0004 - 6 * 0.001 + 0.36 * 0.04 = 0.0284, limits expit(-1.5 -+ 1.959964 * sqrt(0.0284))
                "values": {"age": "50", "smoker": "yes", "prior_event": "no"},
                "years": 10,
                "probability": 0.182425524,
                "lower": 0.138202657,
                "upper": 0.236909034,
                "tolerance": 1e-8,
                "computed": True,
                "source": "worked out by hand",
            }
        ],
        "population": None,
        "documentation": [],
    }


def _cloglog_tree() -> Tree:
    return {
        "id": "tiny-cloglog",
        "title": "Tiny hazard model",
        **_HEAD,
        "predictors": [
            {
                "id": "age",
                "label": "Age",
                "kind": "number",
                "quantity": "age",
                "unit": "a",
                "group": "Person",
                "possible": [18, 100],
            },
            {
                "id": "sex",
                "label": "Sex",
                "kind": "choice",
                "group": "Person",
                "choices": [{"id": "female", "label": "Female"}, {"id": "male", "label": "Male"}],
            },
            {"id": "bp_treated", "label": "Takes tablets", "kind": "yes_no", "group": "History", "treatment": True},
            {
                "id": "total_cholesterol",
                "label": "Total cholesterol",
                "kind": "number",
                "quantity": "total_cholesterol",
                "unit": "mmol/L",
                "factor": 0.02586,
                "group": "Blood tests",
                "loinc": ["2093-3"],
                "within_person": {"source": "invented", "cv": 0.06},
            },
        ],
        "derived": [],
        "exclusions": [],
        "equations": [
            _cloglog_equation("women", "female", 0.9, (0.98, 0.95), 3.5),
            _cloglog_equation("men", "male", 1.0, (0.96, 0.9), 3.9),
        ],
        "recalibration_required": False,
        "recalibrations": [
            {
                "id": "north",
                "label": "North of Tarnwick",
                "source": "invented",
                "equations": {
                    "women": {"intercept": 0, "slope": 1, "covariance": None},
                    "men": {"intercept": 0, "slope": 1, "covariance": [[0.01, 0.001], [0.001, 0.02]]},
                },
                "years": 10,
            }
        ],
        "decision_points": [],
        "worked_examples": [
            # 1 - S ** exp(slope * ln(age) + 0.4 * treated - mean), cholesterol of 5 adding nothing
            _cloglog_example("female", "60", "yes", 5, 0.035610883),
            _cloglog_example("female", "60", "yes", 10, 0.087952060, "north"),
            _cloglog_example("male", "55", "no", 10, 0.110680222),
        ],
        "population": None,
        "documentation": [{"item": "sample size", "text": "None: it is invented."}],
    }


def _cloglog_equation(name: str, sex: str, slope: float, survival: tuple[float, float], mean: float) -> Tree:
    return {
        "id": name,
        "applies_when": {"sex": [sex]},
        "link": "cloglog",
        "competing_events": {"handled": "censored", "which": "death"},
        "terms": [
            {"id": "ln_age", "coefficient": slope, "product": [{"of": "age", "steps": [{"log": "natural"}]}]},
            {"id": "treated", "coefficient": 0.4, "sum": [[{"of": "bp_treated", "steps": [{"is": ["yes"]}]}]]},
            {"id": "chol", "coefficient": 0.1, "product": [{"of": "total_cholesterol", "steps": [{"subtract": 5}]}]},
        ],
        "horizons": [
            {"years": years, "baseline_survival": survived, "mean_linear_predictor": mean}
            for years, survived in zip((5, 10), survival, strict=True)
        ],
        "uncertainty": {"basis": "none", "because": "It is invented."},
    }


def _cloglog_example(
    sex: str, age: str, treated: str, years: int, probability: float, recalibration: str | None = None
) -> Tree:
    return {
        "values": {"sex": sex, "age": age, "bp_treated": treated, "total_cholesterol": "5.0 mmol/L"},
        "years": years,
        "probability": probability,
        "tolerance": 1e-8,
        "recalibration": recalibration,
        "computed": True,
        "source": "worked out by hand",
    }
