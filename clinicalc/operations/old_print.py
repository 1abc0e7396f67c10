"""A saved print read back: the record attached to it, the time it was made, the text of its pages."""

import logging
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

import msgspec

from clinicalc.errors import ClinicalcError
from clinicalc.operations.old_record import Record
from clinicalc.report.attachment import read_attached_record

_ANNOTATED = "\n[something was put on this page]"

LARGEST = 32_000_000
"""Bytes. A print of this program has less than a hundredth of that."""


@dataclass(frozen=True, slots=True)
class OldPrint:
    """A print as it was saved. `made` is None where the file does not say when it was made.

    `pages` holds the text of each page, `width` is that of the first in points, `practice` and `letterhead` what the
    file gives as such.
    """

    name: str
    record: Record
    made: datetime | None
    pages: tuple[str, ...]
    width: float
    practice: str
    letterhead: tuple[str, ...] = ()

    @property
    def text(self) -> str:
        """The text of all pages."""
        return "\n".join(self.pages)


def read_old_print(path: Path) -> OldPrint:
    """The print at `path`. Raises ClinicalcError when it cannot be read, is no PDF, or carries no record."""
    content = _read_bytes(path)
    with _quiet():
        try:
            attached = read_attached_record(content)
            made, practice, letterhead, width = _stated(content)
            pages = read_pages(content)
        except ClinicalcError as error:
            raise ClinicalcError(error.what, where=path.name, why=error.why, do=error.do) from error
        except Exception as error:  # a damaged PDF makes its reader raise almost anything
            raise _unreadable(path, f"It is damaged or no PDF ({type(error).__name__}).") from error
    try:
        record = msgspec.json.decode(attached, type=Record)
    except (msgspec.DecodeError, RecursionError) as error:
        raise _unreadable(path, f"What is attached to it is not a record of this program ({error}).") from error
    return OldPrint(path.name, record, made, pages, width, practice, letterhead)


def read_pages(pdf: bytes) -> tuple[str, ...]:
    """The text of each page; a line for every annotation, which a print has none of. Raises what the reader raises."""
    from io import BytesIO

    from pypdf import PdfReader

    pages = PdfReader(BytesIO(pdf)).pages
    return tuple(page.extract_text() + _ANNOTATED * len(page.annotations or ()) for page in pages)


def _read_bytes(path: Path) -> bytes:
    try:
        if not path.is_file():
            raise _unreadable(path, "There is no such file.")
        with path.open("rb") as file:
            content = file.read(LARGEST + 1)
    except (OSError, ValueError) as error:
        raise _unreadable(path, f"The system says: {error}.") from error
    if len(content) > LARGEST:
        raise _unreadable(path, f"It has more than {LARGEST // 1_000_000} MB, and no print is that large.")
    return content


def _stated(content: bytes) -> tuple[datetime | None, str, tuple[str, ...], float]:
    """When the file says it was made, for which practice, under which letterhead, how wide page 1 is in points."""
    from io import BytesIO

    from pypdf import PdfReader

    reader = PdfReader(BytesIO(content))
    about = reader.metadata
    try:
        made = None if about is None else about.creation_date
    except ValueError:  # a date that is none
        made = None
    if made is not None and made.tzinfo is None:
        made = made.astimezone()
    author, program = ("", "") if about is None else (about.author or "", about.creator or "")
    width = float(reader.pages[0].mediabox.width) if len(reader.pages) else 0.0
    letterhead = tuple(((about.keywords or "") if about is not None else "").split("\n"))
    return made, "" if author == program else author, letterhead if any(letterhead) else (), width


@contextmanager
def _quiet() -> Iterator[None]:
    """The PDF reader logs each oddity of a damaged file; the one sentence that is raised says enough."""
    log = logging.getLogger("pypdf")
    before = log.level
    log.setLevel(logging.CRITICAL + 1)
    try:
        yield
    finally:
        log.setLevel(before)


def _unreadable(path: Path, why: str) -> ClinicalcError:
    return ClinicalcError(
        "no record of an assessment can be read from this file.",
        where=path.name,
        why=why,
        do="Give the PDF as this program saved it.",
    )
