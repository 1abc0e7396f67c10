"""Coefficient files of one equation, made for a test: a few bare values, their terms, one horizon of 10 years."""

import json
import math

import msgspec

from clinicalc.assessment.case import Case
from clinicalc.assessment.model import prepare_model
from clinicalc.assessment.spread import Spread, spread_of
from clinicalc.coefficients.schema import ModelContent
from tests.assessment.whole_case import case_of
from tests.coefficients.tiny_model import Tree, changed, read_of, tiny_logit_model, tree_of

BASE = tree_of(tiny_logit_model())
SBP: Tree = {"id": "x", "label": "Systolic blood pressure", "quantity": "systolic_bp", "unit": "mm[Hg]"}
HDL: Tree = {"id": "x", "label": "HDL cholesterol", "quantity": "hdl_cholesterol", "unit": "mmol/L"}
BMI: Tree = {"id": "x", "label": "Body mass index", "quantity": "body_mass_index", "unit": "kg/m2"}
SCORE: Tree = {"id": "x", "label": "Score", "quantity": "number", "unit": "1", "possible": [-50, 500]}


def file_with(
    predictors: list[Tree],
    terms: list[tuple[float, list[Tree]]],
    lp0: float,
    *,
    link: str = "logit",
    uncertainty: Tree | None = None,
    derived: tuple[Tree, ...] = (),
    example: tuple[dict[str, str], float] | None = None,
) -> bytes:
    """A coefficient file with one equation; `example` holds values and the probability they must give."""
    horizon: Tree = {"years": 10} | ({"intercept": lp0} if link == "logit" else {"log_cumulative_hazard": lp0})
    values, probability = example or ({}, 0.5)
    worked: Tree = {"values": values, "years": 10, "probability": probability, "tolerance": 1e-9}
    limits = {} if uncertainty is None else {"lower": uncertainty.pop("lower"), "upper": uncertainty.pop("upper")}
    tree = changed(
        BASE,
        ("/model/predictors", [{"kind": "number", "group": "Measured"} | p for p in predictors]),
        ("/model/derived", list(derived)),
        ("/model/exclusions", []),
        ("/model/equations/0/link", link),
        (
            "/model/equations/0/terms",
            [{"id": f"t{n}", "coefficient": c, "product": p} for n, (c, p) in enumerate(terms)],
        ),
        ("/model/equations/0/horizons", [horizon]),
        ("/model/equations/0/reference_person", {p["id"]: "1" for p in predictors}),
        ("/model/equations/0/uncertainty", uncertainty or {"basis": "none", "because": "It is invented."}),
        ("/model/worked_examples", [worked | limits | {"computed": True, "source": "quadrature, see the test"}]),
    )
    del tree["model"]["equations"][0]["reference_person"]
    if link == "cloglog":
        tree["model"]["equations"][0]["competing_events"] = {"handled": "censored", "which": "death"}
    return json.dumps(tree).encode()


def plain_case(predictors: list[Tree], terms: list[tuple[float, list[Tree]]], lp0: float = 0.0, **typed: str) -> Case:
    """The case of a model whose worked example nobody asks for."""
    content = msgspec.convert(json.loads(file_with(predictors, terms, lp0))["model"], ModelContent)
    return case_of(prepare_model(read_of(content)), typed)


def spread(case: Case) -> Spread:
    """The spread of a case that must have one."""
    found = spread_of(case)
    assert found is not None
    return found


def g(link: str, eta: float) -> float:
    """The probability, written out anew."""
    return 1 / (1 + math.exp(-eta)) if link == "logit" else 1 - math.exp(-math.exp(eta))


def x(*steps: Tree) -> Tree:
    """The value with its steps."""
    return {"of": "x", "steps": list(steps)} if steps else {"of": "x"}
