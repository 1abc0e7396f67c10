"""Where something stands, in the words of a description: its tables and ids instead of pointers with numbers."""

import re
from collections.abc import Mapping, Sequence

from clinicalc.coefficients.pointers import quoted
from clinicalc.errors import Problem

_FROM_FIT = {
    "coefficient": "coefficients",
    "covariance": "covariance",
    "at_centre": "baseline",
    "log_cumulative_hazard": "baseline",
    "intercept": "coefficients",
}


def place_problem(
    problem: Problem, model: Mapping[str, object], fitted: frozenset[str], patients: Sequence[int]
) -> Problem:
    """The problem with its place as the description names it.

    `fitted` are the ids of the equations whose figures come from a fit; `patients[i]` is the number of the patient,
    from 0, from whom the worked example i was made.
    """
    path = re.sub(r"^/model(?=/|$)", "", problem.path)
    example = re.match(r"/worked_examples/([0-9]+)(.*)", path)
    if example:
        place = int(example[1])
        number = patients[place] if place < len(patients) else place
        path = f"/patients/{number}{example[2]}"
    path = re.sub(r"^/worked_examples$", "/patients", path)
    return Problem(_fit_place(path, model, fitted) or spell_place(path, model), problem.message)


def _fit_place(path: str, model: Mapping[str, object], fitted: frozenset[str]) -> str:
    """The place in a [fit] table that a figure came from; "" for what the description says itself."""
    found = re.match(r"/equations/([0-9]+)/(terms|horizons|uncertainty)/(.+)", path)
    equations = model.get("equations")
    if not found or not isinstance(equations, list) or int(found[1]) >= len(equations):
        return ""
    equation = equations[int(found[1])]
    id = equation.get("id") if isinstance(equation, dict) else None
    parts = found[3].split("/")
    field = next((name for part, name in _FROM_FIT.items() if part in parts), "")
    if not isinstance(id, str) or id not in fitted or not field or (found[2] == "terms" and "interval" in parts):
        return ""
    return f"fit.{id}.{field}"


def spell_place(path: str, model: Mapping[str, object]) -> str:
    """A pointer into the model, or into one of the tables beside it, as a place in the description."""
    path = re.sub(r"^/model(?=/|$)", "", path)
    if path.startswith(("/fit/", "/reconstruct/", "/cohort/", "/estimate/")):  # as heads of tables
        return path[1:].replace("/", ".").replace("~1", "/").replace("~0", "~")
    words: list[str] = []
    here: object = model
    for part in path.split("/")[1:]:
        key = part.replace("~1", "/").replace("~0", "~")
        if isinstance(here, list) and key.isdigit() and int(key) < len(here):
            here = here[int(key)]
            id = here.get("id") if isinstance(here, dict) else None
            words[-1] += f" {quoted(id)}" if isinstance(id, str) else f" {int(key) + 1}"
        elif key.isdigit() and words:
            words[-1] += f" {int(key) + 1}"
            here = None
        else:
            here = here.get(key) if isinstance(here, dict) else None
            words.append(key)
    return ", ".join(words)
