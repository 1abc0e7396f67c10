"""Design terms: what each coefficient of an equation is multiplied with."""

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from msgspec import UnsetType

from clinicalc.coefficients.products import products_of
from clinicalc.coefficients.schema import ChoicePredictor, Equation, ModelContent, Product, YesNoPredictor
from clinicalc.covariates.transforms import CUTS, Column, Transform, apply_transform, compile_step

Columns = Mapping[str, Column]
"""Predictor or derived id -> its column, in the file's unit; yes/no as 1/0, a choice as the place of the answer."""


@dataclass(frozen=True, slots=True)
class DesignFactor:
    """One value and the steps it goes through."""

    of: str
    transforms: tuple[Transform, ...]
    cuts: bool = field(init=False, compare=False)
    """Whether the factor jumps at some value."""

    def __post_init__(self) -> None:
        object.__setattr__(self, "cuts", any(transform.kind in CUTS for transform in self.transforms))

    def values(self, columns: Columns) -> Column:
        """The factor for each patient, shape (n,)."""
        column = columns[self.of]
        for transform in self.transforms:
            column = apply_transform(transform, column)
        return column


@dataclass(frozen=True, slots=True)
class DesignTerm:
    """A sum of products of factors under one coefficient."""

    id: str
    coefficient: float
    fixed: bool
    products: tuple[tuple[DesignFactor, ...], ...]
    factors: tuple[DesignFactor, ...] = field(init=False, compare=False)
    """Every factor of the term, in file order."""

    def __post_init__(self) -> None:
        object.__setattr__(self, "factors", tuple(factor for product in self.products for factor in product))

    def values(self, columns: Columns) -> Column:
        """The term for each patient, shape (n,): products from left to right, added in file order."""
        total: Column | None = None
        for product in self.products:
            value = product[0].values(columns)
            for factor in product[1:]:
                value = value * factor.values(columns)
            total = value if total is None else total + value
        assert total is not None
        return np.ascontiguousarray(total)


def answer_codes(model: ModelContent) -> dict[str, dict[str, float]]:
    """For each question of the model, the number that stands for each answer in a column."""
    codes: dict[str, dict[str, float]] = {}
    for predictor in model.predictors:
        if isinstance(predictor, YesNoPredictor):
            codes[predictor.id] = {"no": 0.0, "yes": 1.0}
        elif isinstance(predictor, ChoicePredictor):
            codes[predictor.id] = {choice.id: float(place) for place, choice in enumerate(predictor.choices)}
    return codes


def compile_terms(model: ModelContent, equation: Equation) -> tuple[DesignTerm, ...]:
    """The terms of one equation, in file order."""
    codes = answer_codes(model)
    return tuple(
        DesignTerm(
            id=term.id,
            coefficient=term.coefficient,
            fixed=term.fixed is True,
            products=tuple(_compile_product(product, codes) for product in products_of(term)),
        )
        for term in equation.terms
    )


def design_columns(terms: tuple[DesignTerm, ...], columns: Columns) -> tuple[Column, ...]:
    """One column a term, each of shape (n,), in term order."""
    with np.errstate(all="ignore"):
        return tuple(term.values(columns) for term in terms)


def _compile_product(product: Product, codes: Mapping[str, Mapping[str, float]]) -> tuple[DesignFactor, ...]:
    return tuple(
        DesignFactor(
            of=factor.of,
            transforms=()
            if isinstance(factor.steps, UnsetType)
            else tuple(compile_step(step, codes.get(factor.of, {})) for step in factor.steps),
        )
        for factor in product
    )
