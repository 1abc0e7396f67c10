"""The rougher band without reference people: printed standard errors as if unrelated, around published means.

Only for models whose terms stand for one value each: with products, powers or splines the estimates are so closely
related that leaving their correlations out makes the band several times too wide.
"""

from collections.abc import Iterator

import numpy as np
from msgspec import UnsetType
from numpy.typing import NDArray

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.products import products_of
from clinicalc.coefficients.schema import Step, Term
from clinicalc.development.reconstruction_plan import EquationPlan
from clinicalc.errors import Problem
from clinicalc.prediction.line import Line
from clinicalc.prediction.links import complement, probability


def find_rougher_faults(model: Model, equation: ModelEquation, plan: EquationPlan) -> Iterator[Problem]:
    """Why an equation without reference people gets no band, not even the rougher one."""
    path = f"/model/equations/{equation.place}/terms"
    terms = [term for term in equation.content.terms if term.fixed is not True]
    bent = [term.id for term in terms if is_bent(term)]
    uses: dict[str, list[str]] = {}
    for term in terms:
        for product in products_of(term):
            for factor in product:
                uses.setdefault(factor.of, []).append(term.id)
    for of, names in uses.items():
        if isinstance(model.by_id[of], NumberField) and len(names) > 1:
            bent += [name for name in names if name not in bent]
    if bent:
        yield Problem(
            path,
            f"there are no reference people, and {listed(map(quoted, bent))} are products, powers, splines or several"
            " terms of one value: their estimates are too closely related for a band without. Describe a population.",
        )
    lacking = [term.id for term in equation.content.terms if term.id not in plan.means and not bent]
    if lacking:
        yield Problem(
            path,
            "there are no reference people, and without them the band needs the published mean of every term; there is"
            f" none of {listed(map(quoted, lacking))}.",
        )


def weigh_at_means(
    equation: ModelEquation, line: Line, plan: EquationPlan
) -> tuple[NDArray[np.float64], NDArray[np.float64], float]:
    """The published means as the centre, no correlations, and the weight of a person who has all means."""
    estimated = [term.id for term in equation.terms if not term.fixed]
    eta = np.array([line.lp0])
    for term in equation.terms:
        eta = eta + term.coefficient * plan.means[term.id]
    weight = probability(line.link, eta)
    if line.link == "logit":
        weight = weight * complement(line.link, eta)
    return np.array([plan.means[id] for id in estimated]), np.eye(len(estimated)), float(weight[0])


def is_bent(term: Term) -> bool:
    """Whether a term is more than one value on one scale."""
    products = products_of(term)
    if len(products) != 1 or len(products[0]) != 1:
        return True
    steps = products[0][0].steps
    return not isinstance(steps, UnsetType) and any(_bends(step) for step in steps)


def _bends(step: Step) -> bool:
    given = (step.power, step.spline, step.clip_low, step.clip_high)
    return any(not isinstance(part, UnsetType) for part in given)
