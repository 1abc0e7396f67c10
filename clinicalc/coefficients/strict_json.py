"""JSON read strictly: one value, UTF-8, no duplicate keys, finite numbers, shallow, no character that hides others."""

import json
import math
import re
from dataclasses import dataclass
from enum import Enum
from typing import Any, NoReturn

from clinicalc.coefficients.pointers import REFUSED_CHARACTERS, point, quoted
from clinicalc.errors import Problem

DEEPEST = 64
LARGEST = 2**53 - 1
"""The largest number a file may hold: beyond it neighbouring whole numbers can no longer be told apart (RFC 8785)."""
LONGEST_NUMBER = 400
"""Characters of the longest number: no figure needs as many, and few enough are read in no time."""

_BRACKETS_OR_STRING = re.compile(r'"[^"\\]*+(?:\\.[^"\\]*+)*+(?:"|\\?\Z)|[\[\]{}]', re.DOTALL)
_REMARKS = {
    "Expecting ',' delimiter": "a comma or a closing bracket is missing here.",
    "Expecting ':' delimiter": "a colon is missing after the name.",
    "Expecting property name": "a name in double quotes is missing here (is there a comma too many before it?).",
    "Expecting value": "a value is missing here, or it is not JSON (texts need double quotes).",
    "Illegal trailing comma": "there is a comma too many before the closing bracket.",
    "Extra data": "something stands after the end of the file's one object.",
    "Invalid control character": "a line break or another control character stands inside a text.",
    "Invalid \\": "this backslash does not begin an escape that JSON knows.",
}


class Unusable(Enum):
    """Stands in the parsed value where a number was refused, so that its place is not reported twice."""

    NUMBER = "number"


@dataclass(frozen=True, slots=True)
class Parsed:
    """The value (dict, list, str, int, float, bool or None, nested) and what was wrong with it on the way.

    `readable` is False where the bytes are no JSON at all; the value is None then.
    """

    value: object
    problems: tuple[Problem, ...]
    readable: bool = True


class _Pairs(list[tuple[str, Any]]):
    """The members of an object as they stand in the file, duplicates included."""


class _BadNumber(str):
    """The letters of a number that cannot be used."""

    __slots__ = ()


class _Stop(Exception):
    """The bytes are no JSON: the sentence that says why."""


def parse(data: bytes) -> Parsed:
    """The value that `data` spells, and every problem found; never raises."""
    try:
        text = _decode(data)
        _check_depth(text)
        tree = _read(text)
    except _Stop as stop:
        return Parsed(None, (Problem("", str(stop)),), readable=False)
    problems: list[Problem] = []
    return Parsed(_plain(tree, "", problems), tuple(problems))


def _decode(data: bytes) -> str:
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        raise _Stop("the file is UTF-16 text. Save it as UTF-8 without a byte order mark.")
    if data.startswith(b"\xef\xbb\xbf"):
        raise _Stop("the file begins with a byte order mark (BOM). Save it as UTF-8 without one.")
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError as fault:
        line = data.count(b"\n", 0, fault.start) + 1
        raise _Stop(
            f"the file is not UTF-8 text: byte {fault.start + 1} (line {line}) belongs to no character. "
            "Save it as UTF-8, or fetch it again if it came over a line that damages files."
        ) from None
    if not text.strip():
        raise _Stop("the file is empty. Fetch it again from where it came from.")
    return text


def _check_depth(text: str) -> None:
    depth = 0
    for match in _BRACKETS_OR_STRING.finditer(text):
        sign = match[0]
        if sign in "[{":
            depth += 1
        elif sign in "]}":
            depth -= 1
        if depth > DEEPEST:
            line, column = _place(text, match.start())
            raise _Stop(
                f"brackets are nested more than {DEEPEST} deep at line {line}, column {column}. "
                "No coefficient file needs that; this is not one."
            )


def _read(text: str) -> object:
    try:
        return json.loads(
            text, object_pairs_hook=_Pairs, parse_constant=_BadNumber, parse_float=_to_float, parse_int=_to_int
        )
    except json.JSONDecodeError as fault:
        _explain(text, fault)


def _to_float(letters: str) -> float | _BadNumber:
    if len(letters) > LONGEST_NUMBER:
        return _BadNumber(letters)
    number = float(letters)
    return number if abs(number) <= LARGEST else _BadNumber(letters)


def _to_int(letters: str) -> int | _BadNumber:
    if len(letters) > LONGEST_NUMBER:
        return _BadNumber(letters)
    number = int(letters)
    return number if abs(number) <= LARGEST else _BadNumber(letters)


def _place(text: str, position: int) -> tuple[int, int]:
    return text.count("\n", 0, position) + 1, position - text.rfind("\n", 0, position)


def _explain(text: str, fault: json.JSONDecodeError) -> NoReturn:
    end = len(text.rstrip())
    if fault.msg.startswith("Unterminated string") or fault.pos >= end:
        line, column = _place(text, end - 1)
        raise _Stop(
            f"the file breaks off at line {line}, column {column}: it is cut short, or a closing bracket or quotation "
            "mark is missing. Fetch it again from where it came from."
        ) from None
    line, column = _place(text, fault.pos)
    remark = next((words for start, words in _REMARKS.items() if fault.msg.startswith(start)), "this is not JSON.")
    raise _Stop(f"the file is not JSON at line {line}, column {column}: {remark}") from None


def _plain(tree: object, path: str, problems: list[Problem]) -> object:
    """The tree with plain dicts; says where a name, a number or a text is refused."""
    if isinstance(tree, _Pairs):
        return _plain_object(tree, path, problems)
    if isinstance(tree, list):
        return [
            item if type(item) in (float, int) else _plain(item, point(path, index), problems)
            for index, item in enumerate(tree)
        ]
    if isinstance(tree, _BadNumber):
        problems.append(Problem(path, _refuse_number(tree)))
        return Unusable.NUMBER
    if isinstance(tree, str):
        _check_text(tree, path, "this text", problems)
        if tree.isspace():
            problems.append(Problem(path, "this text is blank: nothing but spaces stands in it. Write the words."))
    return tree


def _plain_object(pairs: _Pairs, path: str, problems: list[Problem]) -> dict[str, object]:
    plain: dict[str, object] = {}
    for name, value in pairs:
        place = point(path, name)
        _check_text(name, place, "this name", problems)
        if name in plain:
            problems.append(Problem(place, f"the name {quoted(name)} stands twice in one object. Keep one of the two."))
        plain[name] = _plain(value, place, problems)
    return plain


def _check_text(text: str, path: str, what: str, problems: list[Problem]) -> None:
    found = sorted(set(REFUSED_CHARACTERS.findall(text)))
    if found:
        codes = ", ".join(f"U+{ord(sign):04X}" for sign in found[:5])
        problems.append(
            Problem(
                path,
                f"{what} ({quoted(text)}) holds {codes}: invisible, control and private characters can make a text "
                "look like another and are refused. Type it again.",
            )
        )


def _refuse_number(letters: str) -> str:
    if letters in ("NaN", "Infinity", "-Infinity"):
        return f"{letters} is not a number JSON knows, and no coefficient can be it. Write the figure the source gives."
    if len(letters) > LONGEST_NUMBER:
        return f"this number has {len(letters)} characters; at most {LONGEST_NUMBER} are read. Write fewer decimals."
    size = "beyond 9007199254740991 (2^53 − 1)" if math.isfinite(float(letters)) else "too large to be a number at all"
    return f"{quoted(letters)[1:-1]} is {size}. Write the figure the source gives."
