"""A second, slow and obvious reading of a coefficient file, apart from the program so that the two can disagree.

Takes numbers in the file's own units and the ids of answers; knows nothing of typed text, units, ranges or bands.
"""

import json
import math
from collections.abc import Callable, Mapping, Sequence
from pathlib import Path
from typing import Any

Value = float | str
"""A number in the predictor's unit, or the id of an answer ("yes" and "no" among them)."""

Node = Mapping[str, Any]


def load(path: Path) -> Node:
    """Return the model of the file at `path`."""
    model: Node = json.loads(path.read_text(encoding="utf-8"))["model"]
    return model


def body_mass_index(weight: float, height: float) -> float:
    """Return kg/m2 from kilograms and centimetres."""
    return weight / (height / 100.0) ** 2


def non_hdl_cholesterol(total: float, hdl: float) -> float:
    """Return total less HDL cholesterol, in their unit."""
    return total - hdl


def ckd_epi_2021(creatinine: float, age: float, sex: str) -> float:
    """Return mL/min/1.73 m2 from creatinine in mg/dL: Inker et al., N Engl J Med 2021;385:1737."""
    female = sex == "female"
    ratio = creatinine / (0.7 if female else 0.9)
    alpha = -0.241 if female else -0.302
    egfr: float = 142.0 * min(ratio, 1.0) ** alpha * max(ratio, 1.0) ** -1.200 * 0.9938**age
    return egfr * 1.012 if female else egfr


def with_derived(model: Node, values: Mapping[str, Value]) -> dict[str, Value]:
    """Return the values and, beside them, every derived value that was not given and can be worked out."""
    known = dict(values)
    for derived in model["derived"]:
        role = {name: known[source] for name, source in derived["inputs"].items() if source in known}
        if derived["id"] in known or len(role) < len(derived["inputs"]):
            continue
        match derived["equation"]:
            case "body_mass_index":
                known[derived["id"]] = body_mass_index(float(role["weight"]), float(role["height"]))
            case "non_hdl_cholesterol":
                total, hdl = float(role["total_cholesterol"]), float(role["hdl_cholesterol"])
                known[derived["id"]] = non_hdl_cholesterol(total, hdl)
            case "ckd_epi_2021":
                known[derived["id"]] = ckd_epi_2021(float(role["creatinine"]), float(role["age"]), str(role["sex"]))
            case other:
                raise NotImplementedError(other)
    return known


STEPS: Mapping[str, Callable[[float, float], float]] = {
    "subtract": lambda x, c: x - c,
    "divide": lambda x, c: x / c,
    "multiply": lambda x, c: x * c,
    "power": lambda x, c: x**c,
    "clip_low": lambda x, c: max(x, c),
    "clip_high": lambda x, c: min(x, c),
    "above": lambda x, c: float(x > c),
    "from": lambda x, c: float(x >= c),
    "below": lambda x, c: float(x < c),
    "up_to": lambda x, c: float(x <= c),
}


def factor(node: Node, known: Mapping[str, Value]) -> float:
    """Return one factor of a product: a value put through its steps."""
    value = known[node["of"]]
    steps: Sequence[Node] = node.get("steps", [])
    if isinstance(value, str):
        answers = steps[0]["is"] if steps else ["yes"]
        if len(steps) > 1:
            raise NotImplementedError(steps)
        return float(value in answers)
    x = float(value)
    for step in steps:
        ((name, setting),) = step.items()
        x = math.log(x) if name == "log" else STEPS[name](x, float(setting))
    return x


def design(equation: Node, known: Mapping[str, Value]) -> dict[str, float]:
    """Return each term's value, by the term's id, before its coefficient."""
    row = {}
    for term in equation["terms"]:
        products = term["sum"] if "sum" in term else [term["product"]]
        row[term["id"]] = math.fsum(math.prod(factor(node, known) for node in product) for product in products)
    return row


def equations_for(model: Node, known: Mapping[str, Value]) -> list[Node]:
    """Return every equation whose conditions these values meet; a sound file has exactly one for anybody."""
    return [
        equation
        for equation in model["equations"]
        if all(known[name] in answers for name, answers in equation["applies_when"].items())
    ]


def linear_sum(model: Node, values: Mapping[str, Value]) -> float:
    """Return the sum of coefficient times term, without any baseline."""
    known = with_derived(model, values)
    (equation,) = equations_for(model, known)
    row = design(equation, known)
    return math.fsum(term["coefficient"] * row[term["id"]] for term in equation["terms"])


def probability(model: Node, values: Mapping[str, Value], years: float, recalibration: str | None = None) -> float:
    """Return the probability (0-1) of the outcome within `years`."""
    (equation,) = equations_for(model, values)
    (horizon,) = [one for one in equation["horizons"] if one["years"] == years]
    total = linear_sum(model, values)
    if equation["link"] == "logit":
        eta = horizon["intercept"] + total
    else:
        eta = math.log(-math.log(horizon["baseline_survival"])) + total - horizon["mean_linear_predictor"]
    if recalibration is not None:
        (chosen,) = [one for one in model["recalibrations"] if one["id"] == recalibration]
        line = chosen["equations"][equation["id"]]
        eta = line["intercept"] + line["slope"] * eta
    return 1.0 / (1.0 + math.exp(-eta)) if equation["link"] == "logit" else -math.expm1(-math.exp(eta))
