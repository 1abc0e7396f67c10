"""Tables of invented people for the shipped Cox example, ordinary rows and odd ones."""

import csv
from collections.abc import Mapping, Sequence
from pathlib import Path

import numpy as np

FIELDS = (
    "prior_cvd",
    "age",
    "sex",
    "systolic_bp",
    "bp_treated",
    "total_cholesterol",
    "hdl_cholesterol",
    "egfr",
    "smoker",
    "diabetes",
)
NAMES = ("person", *FIELDS, "practice")

ODD: Sequence[Mapping[str, str]] = (
    {"age": ""},
    {"age": "29"},
    {"age": "61.5"},
    {"age": "sixty"},
    {"prior_cvd": "yes"},
    {"prior_cvd": ""},
    {"sex": "f"},
    {"sex": "Male"},
    {"systolic_bp": "1240"},
    {"systolic_bp": "124 mmHg"},
    {"systolic_bp": "219"},
    {"total_cholesterol": "200 mg/dL"},
    {"total_cholesterol": "200"},
    {"total_cholesterol": "5.2 mmol/L on 2020-01-02"},
    {"total_cholesterol": "1.1", "hdl_cholesterol": "1.4"},
    {"hdl_cholesterol": "<0.5"},
    {"egfr": "not measured"},
    {"egfr": " 75 "},
    {"smoker": "1"},
    {"smoker": "YES"},
    {"diabetes": "unknown"},
    {"practice": 'Hill, "the old one"'},
    {"practice": "two\nlines"},
)
"""What is odd about one row each."""


def invent_rows(count: int, seed: int = 1) -> list[dict[str, str]]:
    """Ordinary rows, each column independent of the others."""
    draw = np.random.default_rng(seed)
    yes_no = np.array(["no", "yes"])
    columns = {
        "person": [f"P{number:07d}" for number in range(count)],
        "prior_cvd": ["no"] * count,
        "age": draw.integers(30, 80, count).astype(str).tolist(),
        "sex": np.array(["female", "male"])[draw.integers(0, 2, count)].tolist(),
        "systolic_bp": draw.integers(95, 190, count).astype(str).tolist(),
        "bp_treated": yes_no[draw.integers(0, 2, count)].tolist(),
        "total_cholesterol": draw.normal(5.5, 1, count).clip(2.8, 9).round(1).astype(str).tolist(),
        "hdl_cholesterol": draw.normal(1.4, 0.3, count).clip(0.7, 2.5).round(2).astype(str).tolist(),
        "egfr": draw.integers(45, 110, count).astype(str).tolist(),
        "smoker": yes_no[draw.integers(0, 2, count)].tolist(),
        "diabetes": yes_no[draw.integers(0, 2, count)].tolist(),
        "practice": np.array(["Northgate", "Old Quay"])[draw.integers(0, 2, count)].tolist(),
    }
    return [dict(zip(columns, row, strict=True)) for row in zip(*columns.values(), strict=True)]


def odd_rows() -> list[dict[str, str]]:
    """A row for each oddity."""
    rows = invent_rows(len(ODD), seed=2)
    return [row | dict(odd) for row, odd in zip(rows, ODD, strict=True)]


def write_rows(path: Path, rows: Sequence[Mapping[str, str]], separator: str = ",", encoding: str = "utf-8") -> Path:
    """The rows as a text table, cells in quotation marks where they need them."""
    lines = [separator.join(NAMES), *(separator.join(_cell(row[name], separator) for name in NAMES) for row in rows)]
    path.write_bytes(("\n".join(lines) + "\n").encode(encoding))
    return path


def rows_of(path: Path) -> list[dict[str, str]]:
    """The rows of a CSV file."""
    with path.open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def left_in(folder: Path) -> set[str]:
    """The names in a folder."""
    return {path.name for path in folder.iterdir()}


def _cell(text: str, separator: str) -> str:
    if any(sign in text for sign in (separator, '"', "\n")):
        return '"' + text.replace('"', '""') + '"'
    return text
