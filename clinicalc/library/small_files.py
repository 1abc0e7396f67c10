"""Reading the small files of keys and trust: a regular file within its limit, or a sentence."""

import os
import stat
from itertools import islice
from pathlib import Path
from typing import TypeVar

import msgspec

from clinicalc.coefficients.file_types import FileStruct
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.strict_json import parse
from clinicalc.errors import KeyRefused

_MOST_PROBLEMS = 5
_Kind = TypeVar("_Kind", bound=FileStruct)


def read_small(path: Path, most: int, what: str) -> bytes:
    """The bytes of a regular file of at most `most` bytes; `what` says what it should be ("a key file").

    Raises KeyRefused for anything else, a missing file included.
    """
    try:
        handle = os.open(path, os.O_RDONLY | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_BINARY", 0))
        with os.fdopen(handle, "rb") as stream:
            if not stat.S_ISREG(os.fstat(handle).st_mode):  # a pipe would be waited for
                raise KeyRefused(f"this is not a file, so not {what}.", where=str(path), do="Name the file itself.")
            data = stream.read(most + 1)
    except FileNotFoundError:
        raise KeyRefused("there is no such file.", where=str(path), do="Check the name and the folder.") from None
    except (OSError, ValueError) as fault:
        said = getattr(fault, "strerror", None) or "its name cannot be a file name"
        raise KeyRefused(f"{what} could not be read ({said}).", where=str(path), do="Name another file.") from None
    if len(data) > most:
        raise KeyRefused(
            f"this is larger than {most} bytes, so not {what}.", where=str(path), do="Did you name another file?"
        )
    return data


def decode_strictly(data: bytes, kind: type[_Kind], where: str, what: str) -> _Kind:
    """What the JSON in `data` states, by the shape of `kind`. Raises KeyRefused with the first problems found."""
    parsed = parse(data)
    problems = [str(problem) for problem in parsed.problems]
    if parsed.readable and not problems:
        problems = [str(problem) for problem in islice(find_shape_problems(parsed.value, kind), _MOST_PROBLEMS)]
    if not problems:
        try:
            return msgspec.convert(parsed.value, kind)
        except msgspec.ValidationError as fault:
            problems = [str(fault)]
    raise KeyRefused(
        f"this is not {what} that can be used:",
        where=where,
        why=" ".join(problems[:_MOST_PROBLEMS]),
        do="Take it from its backup, or ask whoever gave it to you to send it again.",
    )
