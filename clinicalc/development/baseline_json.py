"""The sums of a hazard fit in JSON: [{"time": 365, "H": ..., "A": ..., "q": {"age": ...}}, ...]."""

import numpy as np

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.development.baseline_tables import MOMENT
from clinicalc.development.tables import Fault, NumberTable, read_json

_FORM = 'a list of sums, [{"time": 365, "H": 0.1, "A": 0.0004, "q": {"age": 0.15, ...}}, ...]'


def baseline_of_json(text: str) -> NumberTable | Fault:
    """The sums as a table with the columns time, H, A and "q." before each of the fit's names."""
    value = read_json(text)
    if isinstance(value, Fault):
        return value
    if not isinstance(value, list) or not value:
        return Fault(f"a baseline in JSON is {_FORM}.")
    rows = []
    for number, entry in enumerate(value, start=1):
        row = _flatten(entry)
        if row is None:
            return Fault(f"entry {number} is not of the form {_FORM}.")
        rows.append(row)
    columns = tuple(rows[0])
    for number, row in enumerate(rows, start=1):
        if set(row) != set(columns):
            odd = sorted(set(row) ^ set(columns))
            return Fault(f"entry {number} and the first do not have the same names: {listed(map(quoted, odd))}.")
    return NumberTable(columns, (), np.array([[row[name] for name in columns] for row in rows], dtype=np.float64))


def _flatten(entry: object) -> dict[str, float] | None:
    if not isinstance(entry, dict):
        return None
    moments = entry.get("q", {})
    if not isinstance(moments, dict):
        return None
    flat = {name: value for name, value in entry.items() if name != "q"}
    flat |= {f"{MOMENT}{name}": value for name, value in moments.items()}
    if not all(isinstance(value, int | float) and not isinstance(value, bool) for value in flat.values()):
        return None
    return {name: float(value) for name, value in flat.items()}
