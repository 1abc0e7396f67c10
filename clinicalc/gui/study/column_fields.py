"""Which fields the form of a column shows, and how their texts are read."""

from clinicalc.cohort.dictionary import Role
from clinicalc.errors import UsageError
from clinicalc.operations.study_draft_model import make_id
from clinicalc.units.table import quantity_table
from clinicalc.units.unit import unit as unit_of

NUMBER = "number"
ANSWERS = {NUMBER: "a number", "yes_no": "yes or no", "choice": "a choice"}
SPANS = {"d": "days", "wk": "weeks", "mo": "months", "a": "years"}
_OF_ROLE = {
    Role.TIME: ("time_unit",),
    Role.STATUS: ("event", "censored", "competing"),
    Role.OUTCOME: ("event", "no_event"),
}


def fields_of(role: Role, kind: str) -> tuple[str, ...]:
    """The fields that are shown beside the role."""
    if role is Role.VALUE:
        return ("id", "label", "kind", "missing", *(("quantity", "unit") if kind == NUMBER else ("answers",)))
    return _OF_ROLE.get(role, ())


def units_of(quantity: str) -> list[tuple[str, str | None]]:
    """The units of a quantity, as they are written and as the file has them."""
    row = next((row for row in quantity_table().quantities if row.id == quantity), None)
    codes = () if row is None else row.units
    return [(unit_of(code).spelling or "none", code) for code in codes] or [("none", "1")]


def read_cells(text: str) -> tuple[str, ...]:
    """Texts parted by commas."""
    return tuple(part for part in (piece.strip() for piece in text.split(",")) if part)


def spell_answers(levels: tuple[tuple[str, str], ...]) -> str:
    """Pairs of answer and cell as they are typed: "F = female, M = male"."""
    return ", ".join(f"{text} = {id}" for id, text in levels)


def read_answers(text: str) -> tuple[tuple[str, str], ...] | UsageError:
    """Pairs of an answer's id and the text of the cells, or why they cannot be read."""
    pairs = []
    for piece in read_cells(text):
        cell, sign, answer = (part.strip() for part in piece.rpartition("="))
        if not sign or not cell or not answer:
            return UsageError(f"“{piece}” is no cell and answer.", do="Write such as F = female, M = male.")
        pairs.append((make_id(answer), cell))
    if len({answer for answer, _ in pairs}) < 2:
        return UsageError("a question has at least two answers.", do="Write such as F = female, M = male.")
    return tuple(pairs)
