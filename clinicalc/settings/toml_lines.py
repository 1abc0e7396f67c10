"""Single lines of a settings file put in place of others: what a person wrote round them stays letter for letter."""

import re
from collections.abc import Iterator
from dataclasses import dataclass, replace
from enum import Enum, auto

from clinicalc.settings.points import PracticePoint
from clinicalc.settings.points_table import spell_points
from clinicalc.settings.settings import Settings
from clinicalc.settings.toml_spelling import spelled_values
from clinicalc.settings.toml_text import quote_toml

_MOST_LINES = 200
"""Lines of one value, as of a list; whatever is longer was not written by this program."""
_HEADER = re.compile(r"\s*\[+\s*[\"']?([A-Za-z0-9_-]+)")


class _Kind(Enum):
    GAP = auto()
    """An empty line or a comment."""
    HEADER = auto()
    VALUE = auto()


@dataclass(frozen=True, slots=True)
class _Piece:
    """One statement with its line ends; `table` is the header it stands under, "" for none."""

    kind: _Kind
    text: str
    key: str = ""
    table: str = ""


class _NotPlain(Exception):
    """The text is written in a way that is not changed line by line."""


def change_lines(text: str, before: Settings, after: Settings) -> str | None:
    """The text, which states `before`, with lines changed so that it states `after`; None where that is not plain.

    Whoever calls reads what comes back, to see that it does state it.
    """
    try:
        pieces = list(_pieces(text if not text or text.endswith("\n") else f"{text}\n"))
    except _NotPlain:
        return None
    old = dict(spelled_values(before))
    for key, value in spelled_values(after):
        if value != old[key]:
            pieces = _with_value(pieces, "", key, value)
    for name in dict.fromkeys(one.quantity for one in (*before.units, *after.units)):
        if before.unit_of(name) != after.unit_of(name):
            unit = after.unit_of(name)
            pieces = _with_value(pieces, "units", name, quote_toml(unit) if unit else "")
    pieces = _without_points(pieces, before.decision_points, after.decision_points)
    came = [point for point in after.decision_points if point not in before.decision_points]
    return "".join(piece.text for piece in pieces) + spell_points(came)


def _pieces(text: str) -> Iterator[_Piece]:
    lines = re.findall(r"[^\n]*\n", text)
    table, place = "", 0
    while place < len(lines):
        bare = lines[place].strip()
        size = 1
        if not bare or bare.startswith("#"):
            yield _Piece(_Kind.GAP, lines[place], table=table)
        elif bare.startswith("["):
            found = _HEADER.match(bare)
            table = found[1] if found else "?"
            yield _Piece(_Kind.HEADER, lines[place], table=table)
        else:
            size, key = _value_at(lines, place)
            yield _Piece(_Kind.VALUE, "".join(lines[place : place + size]), key, table)
        place += size


def _value_at(lines: list[str], place: int) -> tuple[int, str]:
    """How many lines the value has that begins there, and its key."""
    import tomllib

    for size in range(1, min(_MOST_LINES, len(lines) - place) + 1):
        try:
            stated = tomllib.loads("".join(lines[place : place + size]))
        except tomllib.TOMLDecodeError:
            continue
        return size, next(iter(stated))
    raise _NotPlain


def _with_value(pieces: list[_Piece], table: str, key: str, value: str) -> list[_Piece]:
    """With `key = value` in a table, where it stands or else at the table's end; without it for the value ""."""
    for place, piece in enumerate(pieces):
        if (piece.kind, piece.table, piece.key) == (_Kind.VALUE, table, key):
            ending, inside = _comments(piece.text)
            text = f"{inside}{key} = {value}{ending}\n" if value else f"{inside}{ending.strip()}\n".lstrip("\n")
            kept = [replace(piece, text=text)] if text else []
            return [*pieces[:place], *kept, *pieces[place + 1 :]]
    if not value:
        return pieces
    new = _Piece(_Kind.VALUE, f"{key} = {value}\n", key, table)
    places = [i for i, piece in enumerate(pieces) if piece.table == table and piece.kind is not _Kind.GAP]
    if places:
        return [*pieces[: places[-1] + 1], new, *pieces[places[-1] + 1 :]]
    if table:
        return [*pieces, _Piece(_Kind.HEADER, f"\n[{table}]\n", table=table), new]
    before = next((i for i, piece in enumerate(pieces) if piece.kind is _Kind.HEADER), len(pieces))
    return [*pieces[:before], new, *pieces[before:]]


def _comments(text: str) -> tuple[str, str]:
    """The comment at the end of a value with the white space before it, and those inside as lines of their own."""
    import tomllib

    whole = tomllib.loads(text)
    ending = ""
    last = text.rstrip("\n").rfind("\n") + 1
    for sign in re.finditer(r"[ \t]*#", text[last:]):
        try:
            same = tomllib.loads(text[: last + sign.start()]) == whole
        except tomllib.TOMLDecodeError:
            continue
        if same:
            ending = text[last + sign.start() :].rstrip("\n")
            break
    inside = [line.strip() for line in text[:last].split("\n") if line.strip().startswith("#")]
    return ending, "".join(f"{line}\n" for line in inside)


def _without_points(
    pieces: list[_Piece], before: tuple[PracticePoint, ...], after: tuple[PracticePoint, ...]
) -> list[_Piece]:
    """Without the tables of the points that went: their headers and values, and what was written among those."""
    heads = [i for i, p in enumerate(pieces) if p.kind is _Kind.HEADER and p.table == "decision_points"]
    gone = set[int]()
    for head, point in zip(heads, before, strict=False):
        if point in after:
            continue
        end = next((i for i in range(head + 1, len(pieces)) if pieces[i].kind is _Kind.HEADER), len(pieces))
        last = max(i for i in range(head, end) if pieces[i].kind is not _Kind.GAP)
        gone.update(range(head, last + 1))
    return [piece for place, piece in enumerate(pieces) if place not in gone]
