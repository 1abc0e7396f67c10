"""Coefficients and covariances, matched by name: the vector and the matrix that software prints about one fit."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.pointers import listed, quoted, suggest
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.development.tables import Fault, NumberTable, count_digits, read_json, read_number_table

Array = NDArray[np.float64]

_ESTIMATES = ("x", "coef", "coefficient", "Estimate", "estimate", "0")
LARGEST_ROUNDING = 0.02
"""How far the rounding of a printed covariance may move a variance, as a share of it."""


@dataclass(frozen=True, slots=True)
class NamedVector:
    """Coefficients by the names that the fit gave them, in file order."""

    figures: dict[str, float]


@dataclass(frozen=True, slots=True, eq=False)
class NamedMatrix:
    """A covariance with its names; rows and columns are in the same order."""

    names: tuple[str, ...]
    values: Array

    def in_order(self, names: Sequence[str]) -> Array:
        """The covariance of these names, in their order."""
        places = [self.names.index(name) for name in names]
        return self.values[np.ix_(places, places)]


def take_vector(text: str, is_json: bool) -> NamedVector | Fault:
    """The coefficients: write.csv(coef(fit)), one row a name; or JSON, {"age": 0.02, ...}."""
    if is_json:
        return _vector_of_json(read_json(text))
    table = read_number_table(text)
    if isinstance(table, Fault):
        return table
    if not table.row_names:
        return Fault("the rows have no names. In R: write.csv(coef(fit), ...) writes them into the first column.")
    column = next((name for name in _ESTIMATES if name in table.columns), None)
    if column is None and len(table.columns) == 1:
        column = table.columns[0]
    if column is None:
        return Fault(
            f"none of its columns {listed(map(quoted, table.columns))} is known to hold the coefficients; "
            f"call it {quoted('coef')}."
        )
    return _vector(table.row_names, table.column(column).tolist())


def take_matrix(text: str, is_json: bool) -> NamedMatrix | Fault:
    """The covariance: write.csv(vcov(fit)), rows and columns named; or JSON, {"names": [...], "matrix": [[...]]}.

    Rows are brought into the order of the columns by name. Symmetric and positive definite, or a fault.
    """
    table = _matrix_of_json(read_json(text)) if is_json else read_number_table(text)
    if isinstance(table, Fault):
        return table
    if not table.row_names:
        return Fault("the rows have no names. In R: write.csv(vcov(fit), ...) writes them into the first column.")
    fault = _judge_names(table)
    if fault:
        return Fault(fault)
    order = [table.row_names.index(name) for name in table.columns]
    values = table.values[order, :]
    rows = tuple(tuple(map(float, row)) for row in values)
    fault = judge_matrix(rows, len(table.columns), "names") or _judge_rounding(values)
    if fault:
        return Fault(f"{fault} Rows in order: {', '.join(table.columns)}.")
    return NamedMatrix(table.columns, (values + values.T) / 2)


def judge_same_names(coefficients: NamedVector, covariance: NamedMatrix) -> str:
    """What is wrong where the two tables are not about the same coefficients; "" where they are."""
    absent = [name for name in coefficients.figures if name not in covariance.names]
    strange = [name for name in covariance.names if name not in coefficients.figures]
    parts = []
    if absent:
        hint = "".join(suggest(name, strange) for name in absent[:1] if strange)
        parts.append(f"{listed(map(quoted, absent))} {_has(absent)} a coefficient and no row in the covariance.{hint}")
    if strange:
        parts.append(f"{listed(map(quoted, strange))} {_has(strange)} a row in the covariance and no coefficient.")
    return " ".join([*parts, "Both tables must come from one fit."]) if parts else ""


def _has(names: Sequence[str]) -> str:
    return "has" if len(names) == 1 else "have"


def _vector(names: Sequence[str], figures: Sequence[float]) -> NamedVector | Fault:
    double = sorted({name for name in names if names.count(name) > 1})
    if double:
        return Fault(f"two rows are called {quoted(double[0])}.")
    return NamedVector(dict(zip(names, figures, strict=True)))


def _vector_of_json(value: object) -> NamedVector | Fault:
    if isinstance(value, Fault):
        return value
    if not isinstance(value, dict) or not value or not all(_is_number(figure) for figure in value.values()):
        return Fault('coefficients in JSON are one object with a number for each name: {"age": 0.02, "female": -0.5}.')
    return NamedVector({name: float(figure) for name, figure in value.items()})


def _matrix_of_json(value: object) -> NumberTable | Fault:
    if isinstance(value, Fault):
        return value
    names = value.get("names") if isinstance(value, dict) else None
    rows = value.get("matrix") if isinstance(value, dict) else None
    if not isinstance(names, list) or not isinstance(rows, list) or not all(isinstance(name, str) for name in names):
        return Fault('a covariance in JSON is {"names": ["age", ...], "matrix": [[...], ...]}.')
    for number, row in enumerate(rows, start=1):
        if not isinstance(row, list) or not all(map(_is_number, row)):
            return Fault(f"row {number} of the matrix is no list of numbers.")
        if len(row) != len(names):
            return Fault(f"row {number} of the matrix has {len(row)} entries, and there are {len(names)} names.")
    if len(rows) != len(names):
        return Fault(f"the matrix has {len(rows)} rows, and there are {len(names)} names.")
    return NumberTable(tuple(names), tuple(names), np.array(rows, dtype=np.float64))


def _is_number(value: object) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _judge_names(table: NumberTable) -> str:
    for names, what in ((table.row_names, "rows"), (table.columns, "columns")):
        double = sorted({name for name in names if names.count(name) > 1})
        if double:
            return f"two {what} are called {quoted(double[0])}."
    no_row = [name for name in table.columns if name not in table.row_names]
    no_column = [name for name in table.row_names if name not in table.columns]
    parts = []
    if no_row:
        parts.append(f"{listed(map(quoted, no_row))} {_has(no_row)} a column and no row.")
    if no_column:
        parts.append(f"{listed(map(quoted, no_column))} {_has(no_column)} a row and no column.")
    return " ".join([*parts, "Was a line lost? Write the whole matrix again."]) if parts else ""


def _judge_rounding(values: Array) -> str:
    """Whether the digits that were printed fix the variances (an uncentred square or product needs many of them)."""
    digits = count_digits(values)
    if len(values) < 2 or digits >= 12:
        return ""
    sd = np.sqrt(np.diag(values))
    scaled = np.abs(values) / sd[:, None] / sd[None, :]
    smallest = float(np.linalg.eigvalsh(values / sd[:, None] / sd[None, :])[0])
    moved = float(np.sqrt((scaled * scaled).sum())) * 5 * 10.0**-digits / smallest
    if moved <= LARGEST_ROUNDING:
        return ""
    return (
        f"the covariance was printed to {digits} significant digits, and that rounding may move a variance by "
        f"{min(moved, 9.99):.0%}. ".replace("%", "\u202f%")
        + "Write it with write.csv, which gives 15."
    )
