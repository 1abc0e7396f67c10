"""Writing a coefficient file: one layout for every content, so that two versions can be compared line by line."""

import json
import math
from pathlib import Path

import msgspec

from clinicalc.coefficients.schema import CoefficientFile
from clinicalc.errors import FileNotWritten
from clinicalc.replacement import READABLE, replace_file

WIDTH = 120
_INDENT = 2


def write_bytes(content: CoefficientFile) -> bytes:
    """The file as UTF-8 text: indented by 2, fields in the order of `schema`, shortest decimals, a newline at the end.

    Raises FileNotWritten where a number is not finite (such a file could not be read again).
    """
    return (_lay_out(msgspec.to_builtins(content), 0, 0) + "\n").encode("utf-8")


def write_file(path: Path, content: CoefficientFile) -> None:
    """Puts the file at `path` whole or not at all. Raises FileNotWritten; nothing half-written is left."""
    data = write_bytes(content)
    try:
        replace_file(path, data, READABLE)
    except (OSError, ValueError) as fault:
        raise _not_written(path, fault) from None


def _not_written(path: Path, fault: OSError | ValueError) -> FileNotWritten:
    why = fault.strerror if isinstance(fault, OSError) and fault.strerror else "its name cannot be a file name"
    return FileNotWritten(
        "the coefficient file could not be written.",
        where=path.name or str(path),
        why=f"The computer says: {why}.",
        do="Choose another folder, or make room on this one. Nothing was left behind.",
    )


def _lay_out(value: object, column: int, depth: int) -> str:
    """The JSON text of a value that begins at `column`, its inner lines indented for `depth`."""
    if isinstance(value, dict):
        return _lay_out_object(value, depth)
    if isinstance(value, list | tuple):
        return _lay_out_list(value, column, depth)
    return _spell(value)


def _lay_out_object(members: dict[str, object], depth: int) -> str:
    if not members:
        return "{}"
    inner = " " * (_INDENT * (depth + 1))
    lines = []
    for name, value in members.items():
        head = f"{inner}{_spell(name)}: "
        lines.append(head + _lay_out(value, len(head), depth + 1))
    return "{\n" + ",\n".join(lines) + "\n" + " " * (_INDENT * depth) + "}"


def _lay_out_list(items: list[object] | tuple[object, ...], column: int, depth: int) -> str:
    if not items:
        return "[]"
    if all(item is None or (isinstance(item, int | float) and not isinstance(item, bool)) for item in items):
        line = "[" + ", ".join(map(_spell, items)) + "]"
        if column + len(line) + 1 <= WIDTH:  # a comma may follow
            return line
    inner = " " * (_INDENT * (depth + 1))
    lines = [inner + _lay_out(item, len(inner), depth + 1) for item in items]
    return "[\n" + ",\n".join(lines) + "\n" + " " * (_INDENT * depth) + "]"


def _spell(value: object) -> str:
    if isinstance(value, float):
        if not math.isfinite(value):
            raise FileNotWritten(
                f"the number {value} cannot stand in a coefficient file.", do="Look where it came from."
            )
        return str(int(value)) if value.is_integer() and abs(value) < 2**53 else repr(value)
    return json.dumps(value, ensure_ascii=False)
