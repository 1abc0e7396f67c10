"""Reading a coefficient file: bytes in, a checked and fingerprinted file out, or every problem at once."""

import errno
import os
import stat
from dataclasses import dataclass
from itertools import islice
from pathlib import Path

import msgspec

from clinicalc.coefficients.fingerprint import canonical_bytes_of, fingerprint_of
from clinicalc.coefficients.rules import check_model
from clinicalc.coefficients.schema import CoefficientFile, ModelContent, Signature
from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.strict_json import parse
from clinicalc.errors import CoefficientFileRefused, Problem

MOST_BYTES = 4_000_000
MOST_PROBLEMS = 500
"""More would not help an author, and each costs a search for the word that was meant."""


@dataclass(frozen=True, slots=True)
class ReadFile:
    """A coefficient file that passed every check of its form.

    `name` is the file's base name, `canonical` the RFC 8785 bytes of {"format", "model"} from which `content.model` was
    built, `fingerprint` their SHA-256 as 64 lower-case hexadecimal digits.
    """

    name: str
    content: CoefficientFile
    canonical: bytes
    fingerprint: str


class _Fingerprinted(msgspec.Struct, frozen=True):
    format: str
    model: ModelContent


def read_bytes(data: bytes, name: str) -> ReadFile:
    """The file that `data` spells. Raises CoefficientFileRefused with all problems found."""
    if len(data) > MOST_BYTES:
        raise _refused(name, "the file is larger than 4 MB (4,000,000 bytes), the limit for a coefficient file.")
    parsed = parse(data)
    problems = list(parsed.problems)
    if parsed.readable:
        problems += islice(find_shape_problems(parsed.value), MOST_PROBLEMS)
    if problems or not isinstance(parsed.value, dict):
        raise CoefficientFileRefused(name, _cut(problems))
    canonical = canonical_bytes_of(parsed.value)
    content = _build(canonical, parsed.value["signatures"])
    problems += islice(check_model(content.model), MOST_PROBLEMS)
    if problems:
        raise CoefficientFileRefused(name, _cut(problems))
    return ReadFile(name, content, canonical, fingerprint_of(canonical))


def read_file(path: Path) -> ReadFile:
    """The coefficient file at `path`, read once. Raises CoefficientFileRefused, also for what is no regular file."""
    return read_bytes(_read_once(path), path.name or str(path))


def _build(canonical: bytes, signatures: object) -> CoefficientFile:
    """The structs, built from the very bytes that are fingerprinted and signed."""
    fingerprinted = msgspec.json.decode(canonical, type=_Fingerprinted)
    return CoefficientFile(
        format="clinicalc.coefficients/1",
        model=fingerprinted.model,
        signatures=msgspec.convert(signatures, tuple[Signature, ...]),
    )


def _read_once(path: Path) -> bytes:
    """At most 4 MB + 1 byte of a regular file; a FIFO or a device is never waited for."""
    name = path.name or str(path)
    try:
        handle = os.open(path, os.O_RDONLY | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_BINARY", 0))
    except (OSError, ValueError) as fault:
        raise _refused(name, _why_unreadable(path, fault)) from None
    try:
        mode = os.fstat(handle).st_mode
        if not stat.S_ISREG(mode):
            raise _refused(name, f"this is {_name_kind(mode)}, not a coefficient file.")
        with os.fdopen(handle, "rb", closefd=False) as stream:
            return stream.read(MOST_BYTES + 1)
    except OSError as fault:
        raise _refused(name, f"the file could not be read: {fault.strerror}.") from None
    finally:
        os.close(handle)


def _why_unreadable(path: Path, fault: OSError | ValueError) -> str:
    if isinstance(fault, FileNotFoundError):
        return "there is no such file. Check the name and the folder."
    if os.path.isdir(path):  # unlike Path.is_dir it has an answer for every name
        return "this is a folder, not a coefficient file."
    if isinstance(fault, PermissionError):
        return "this file may not be read by you. Ask who looks after the computer for permission."
    if getattr(fault, "errno", None) == errno.ENXIO:
        return "this is a socket or a device without a driver, not a coefficient file."
    return f"the file could not be opened: {getattr(fault, 'strerror', None) or 'its name cannot be a file name'}."


def _name_kind(mode: int) -> str:
    kinds = {
        stat.S_IFDIR: "a folder",
        stat.S_IFCHR: "a device",
        stat.S_IFBLK: "a device",
        stat.S_IFIFO: "a pipe (FIFO)",
        stat.S_IFSOCK: "a socket",
    }
    return kinds.get(stat.S_IFMT(mode), "something else than a regular file")


def _cut(problems: list[Problem]) -> tuple[Problem, ...]:
    if len(problems) < MOST_PROBLEMS:
        return tuple(problems)
    more = Problem("", f"there may be more problems; these are the first {MOST_PROBLEMS}.")
    return (*problems[:MOST_PROBLEMS], more)


def _refused(name: str, message: str) -> CoefficientFileRefused:
    return CoefficientFileRefused(name, (Problem("", message),))
