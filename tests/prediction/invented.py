"""Invented lines and design columns for tests of the arithmetic."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.prediction.line import Draws, Line, Precision
from clinicalc.prediction.links import Link

Array = NDArray[np.float64]
TEN_YEARS = Span(10)


def invent_columns(rows: int, terms: int, seed: int = 1) -> tuple[Array, ...]:
    """Standard normal columns, shape (rows,) each."""
    rng = np.random.default_rng(seed)
    return tuple(rng.normal(size=rows) for _ in range(terms))


def invent_precision(terms: int, seed: int = 2, estimated: tuple[int, ...] | None = None) -> Precision:
    """A covariance of full rank with a centre away from nought."""
    rng = np.random.default_rng(seed)
    over = tuple(range(terms)) if estimated is None else estimated
    a = rng.normal(size=(len(over), len(over) + 3))
    root = np.asarray(np.linalg.cholesky(a @ a.T / 100), dtype=np.float64)
    return Precision(over, root, 0.01, tuple(float(c) for c in rng.normal(size=len(over))))


def invent_line(link: Link, terms: int, band: Precision | Draws | None = None, lp0: float = -2.0) -> Line:
    """A line with coefficients of about 0.2."""
    rng = np.random.default_rng(3)
    coefficients = tuple(float(b) for b in rng.normal(size=terms) * 0.2)
    return Line(TEN_YEARS, link, lp0, coefficients, band, "covariance")


def invent_draws(count: int, terms: int, estimated: tuple[int, ...] | None = None) -> Draws:
    """Draws around the coefficients of `invent_line`."""
    rng = np.random.default_rng(4)
    over = tuple(range(terms)) if estimated is None else estimated
    about = np.array(invent_line("logit", terms).coefficients)[list(over)]
    return Draws(over, about[:, None] + rng.normal(size=(len(over), count)) * 0.1, -2 + rng.normal(size=count) * 0.1)


def rows_of(columns: Sequence[Array], rows: slice) -> tuple[Array, ...]:
    """The same columns for some of the people, as freshly made arrays."""
    return tuple(np.array(column[rows]) for column in columns)
