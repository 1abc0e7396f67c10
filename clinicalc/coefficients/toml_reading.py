"""Text files that people write: read whole, as UTF-8, and their TOML as a tree with JSON's types."""

import json
import os
import stat
import tomllib
from dataclasses import dataclass
from datetime import date, datetime, time
from pathlib import Path

from clinicalc.coefficients.pointers import point
from clinicalc.coefficients.strict_json import parse
from clinicalc.errors import Problem

MOST_BYTES = 4_000_000


@dataclass(frozen=True, slots=True)
class Fault:
    """Why a text or a table cannot be taken: a sentence for the person who wrote it."""

    message: str


@dataclass(frozen=True, slots=True, eq=False)
class Parsed:
    """`tree` is None where the text is nothing that could be gone on with; `problems` then say why."""

    tree: dict[str, object] | None
    problems: tuple[Problem, ...]


def read_text(path: Path) -> str | Fault:
    """The text of a regular file of at most 4 MB, a byte order mark left out."""
    try:
        if path.exists() and not stat.S_ISREG(path.stat().st_mode):  # a pipe would be waited for
            return Fault("this is not a file.")
        with path.open("rb") as stream:
            data = stream.read(MOST_BYTES + 1)
    except FileNotFoundError:
        return Fault(f"there is no such file in the folder {os.fspath(path.parent)}.")
    except (OSError, ValueError) as fault:
        return Fault(f"the file could not be read: {getattr(fault, 'strerror', None) or 'no file can have this name'}.")
    if len(data) > MOST_BYTES:
        return Fault("the file is larger than 4 MB; no table of a fit is.")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as fault:
        return Fault(f"byte {fault.start + 1} is not UTF-8 text. Save it as UTF-8.")


def parse_toml(text: str, what: str) -> Parsed:
    """The tree of a text in TOML, with JSON's types, and what in it has no such type; `what` it should be, in words."""
    try:
        table = tomllib.loads(text.replace("\r\n", "\n"))
    except tomllib.TOMLDecodeError as fault:
        message = f"this is not TOML: {fault}. Texts stand between quotation marks, and each [table] once."
        return Parsed(None, (Problem("", message),))
    except (RecursionError, ValueError):
        return Parsed(None, (Problem("", f"this is not {what}: it is nested too deep."),))
    problems: list[Problem] = []
    tree = _with_json_types(table, "", problems)
    parsed = parse(json.dumps(tree, ensure_ascii=False).encode("utf-8", "surrogatepass"))
    problems += parsed.problems
    return Parsed(parsed.value if isinstance(parsed.value, dict) else None, tuple(problems))


def _with_json_types(value: object, path: str, problems: list[Problem]) -> object:
    """The value without TOML's dates, which stand in a coefficient file as texts."""
    if isinstance(value, dict):
        return {key: _with_json_types(item, point(path, key), problems) for key, item in value.items()}
    if isinstance(value, list):
        return [_with_json_types(item, point(path, index), problems) for index, item in enumerate(value)]
    if isinstance(value, date | datetime | time):
        problems.append(Problem(path, f'this is a date of TOML; write it as a text: "{value}".'))
        return str(value)
    return value
