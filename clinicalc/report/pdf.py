"""The PDF of an assessment, as bytes or as a file."""

import os
import stat
import tempfile
from collections.abc import Iterator
from contextlib import suppress
from dataclasses import fields, is_dataclass
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

from clinicalc.assessment.record import write_record
from clinicalc.assessment.result import Assessment
from clinicalc.errors import FileNotWritten, PrintRefused, UsageError
from clinicalc.report.attachment import attach_record
from clinicalc.report.compose import compose
from clinicalc.report.contents import Sheet
from clinicalc.report.fonts import Lettering, check_text, read_lettering
from clinicalc.report.pages import PAGE_HEIGHT, PAGE_WIDTH, lay_out
from clinicalc.report.painter import paint_pages
from clinicalc.report.typefaces import Weight

LONGEST_NAME = 120
"""Characters of a patient label or a practice name; more would push the result off its page."""

_PDF_BEGINS = b"%PDF-"
_KINDS = {
    stat.S_IFDIR: "a folder",
    stat.S_IFLNK: "a symbolic link",
    stat.S_IFCHR: "a device",
    stat.S_IFBLK: "a device",
    stat.S_IFIFO: "a pipe (FIFO)",
    stat.S_IFSOCK: "a socket",
}


def make_report(assessment: Assessment, *, practice: str = "", printed_at: datetime | None = None) -> bytes:
    """The PDF (1.7, A4) of an assessment, its record attached.

    `printed_at` stands in the foot and in the file's dates; left out, it is the time in SOURCE_DATE_EPOCH (seconds) or
    else now. The same assessment, practice and time give the same bytes. Raises PrintRefused for a text that could
    only be shown wrongly.
    """
    lettering = read_lettering()
    _check_name(lettering, assessment.label.strip(), "The patient label")
    _check_name(lettering, practice.strip(), "The practice name")
    now = time_of_printing()  # asked for in any case: the PDF library reads the same variable
    moment = printed_at or now
    sheet = compose(assessment, practice=practice, printed_at=moment)
    for text in _texts(sheet):
        check_text(lettering, text, f"A text on the print, from {assessment.model.name} or as typed,")
    return _write_pdf(lettering, sheet, moment, write_record(assessment))


def save_report(path: Path, assessment: Assessment, *, practice: str = "", printed_at: datetime | None = None) -> None:
    """Writes the PDF to `path`, whole or not at all; an older file stays untouched until the new one is complete.

    The new file can be read by the person who saved it, and by others only where the folder's own rules say so.

    Raises FileNotWritten when the place cannot be written, when the name does not end in .pdf, and when anything but a
    PDF stands there already (a folder, a device, a link, a file of another kind); PrintRefused as `make_report` does.
    """
    content = make_report(assessment, practice=practice, printed_at=printed_at)
    try:
        fault = _judge_target(path)
        if fault:
            raise FileNotWritten(
                "the print was not saved.", where=str(path), why=fault, do="Choose another name. Nothing was changed."
            )
        _replace_file(path, content)
    except (OSError, ValueError) as error:  # ValueError: a file name with a null character
        said = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise FileNotWritten(
            "the print could not be saved.",
            where=str(path),
            why=f"The system says: {said.rstrip('.')}.",
            do="Choose a folder that exists and that you may write to, and close the file where it is open.",
        ) from error


def _judge_target(path: Path) -> str:
    """Why the print may not take this name ("" where it may): what stands there is only replaced if it is a PDF."""
    try:
        mode = os.lstat(path).st_mode
    except FileNotFoundError:
        mode = 0
    if mode and not stat.S_ISREG(mode):
        return f"This is {_KINDS.get(stat.S_IFMT(mode), 'no regular file')}, not a PDF."
    if path.suffix.casefold() != ".pdf":
        return "The name of a print ends in .pdf, and this one does not."
    if mode:
        with open(path, "rb", opener=_open_waiting_for_nothing) as file:
            if file.read(len(_PDF_BEGINS)) != _PDF_BEGINS:
                return "A file of this name is there already, and it is not a PDF."
    return ""


def _open_waiting_for_nothing(name: str, flags: int) -> int:
    return os.open(name, flags | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_NOFOLLOW", 0))


def _replace_file(path: Path, content: bytes) -> None:
    """A temporary file beside the target, on the disk before it takes the target's name."""
    handle, name = tempfile.mkstemp(prefix=".clinicalc-", suffix=".part", dir=path.parent)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        os.replace(name, path)
    except BaseException:
        with suppress(OSError):
            os.unlink(name)
        raise


def _check_name(lettering: Lettering, text: str, what: str) -> None:
    check_text(lettering, text, what)
    if len(text) > LONGEST_NAME:
        raise PrintRefused(
            f"{what} has {len(text)} characters; a print takes at most {LONGEST_NAME}.", do="Shorten it."
        )


def time_of_printing() -> datetime:
    """Now, or the time in SOURCE_DATE_EPOCH (seconds) for prints that must come out the same again.

    Raises UsageError when that is not a time.
    """
    stated = os.environ.get("SOURCE_DATE_EPOCH", "").strip()
    if not stated:
        return datetime.now().astimezone()
    try:
        return datetime.fromtimestamp(int(stated), UTC)
    except (ValueError, OverflowError, OSError) as error:
        raise UsageError(
            f"the environment variable SOURCE_DATE_EPOCH is {stated!r}, which is not a time in whole seconds.",
            do="Correct it or leave it out.",
        ) from error


def _texts(node: object) -> Iterator[str]:
    """Every text in the contents, however deep."""
    if isinstance(node, str):
        yield node
    elif isinstance(node, tuple):
        for part in node:
            yield from _texts(part)
    elif is_dataclass(node):
        for field in fields(node):
            yield from _texts(getattr(node, field.name))


def _write_pdf(lettering: Lettering, sheet: Sheet, moment: datetime, record: str) -> bytes:
    from io import BytesIO

    from reportlab.pdfgen.canvas import Canvas

    target = BytesIO()
    canvas: Any = Canvas(
        target,
        pagesize=(PAGE_WIDTH, PAGE_HEIGHT),
        invariant=1,
        pageCompression=1,
        pdfVersion=(1, 7),
        initialFontName=Weight.REGULAR.value,  # else a standard font is referenced without being embedded
        lang="en-GB",
    )
    canvas.setTitle(sheet.title)
    canvas.setAuthor(sheet.furniture.practice or sheet.furniture.program)
    canvas.setCreator(sheet.furniture.program)
    canvas.setSubject("Assessment of one patient with a clinical risk model")
    canvas.setViewerPreference("DisplayDocTitle", "true")
    canvas.setDateFormatter(lambda *_: _pdf_date(moment))
    paint_pages(canvas, lettering, lay_out(lettering, sheet))
    attach_record(canvas._doc, record)
    canvas.save()
    return target.getvalue()


def _pdf_date(moment: datetime) -> str:
    """A moment as PDF writes it (ISO 32000-1, 7.9.4): D:20261201142000+01'00'."""
    zone = f"{moment:%z}"[:5]
    return f"D:{moment:%Y%m%d%H%M%S}" + (f"{zone[:3]}'{zone[3:]}'" if zone else "")
