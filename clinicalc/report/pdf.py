"""The PDF of an assessment, as bytes or as a file."""

import errno
import os
import stat
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import datetime
from pathlib import Path
from typing import Any

from clinicalc.assessment.record import write_record
from clinicalc.assessment.result import Assessment
from clinicalc.errors import FileNotWritten
from clinicalc.replacement import create_file, replace_file
from clinicalc.report.attachment import attach_record
from clinicalc.report.document import Document, make_document
from clinicalc.report.painter import paint_pages
from clinicalc.report.paper import Paper
from clinicalc.report.parts import USUAL_PARTS, PrintParts
from clinicalc.report.typefaces import Weight, make_known

_PDF_BEGINS = b"%PDF-"
_FULL = (errno.ENOSPC, getattr(errno, "EDQUOT", errno.ENOSPC))  # not every system has quotas
_ONE_PATIENT = "Assessment of one patient with a clinical risk model"
_KINDS = {
    stat.S_IFDIR: "a folder",
    stat.S_IFLNK: "a symbolic link",
    stat.S_IFCHR: "a device",
    stat.S_IFBLK: "a device",
    stat.S_IFIFO: "a pipe (FIFO)",
    stat.S_IFSOCK: "a socket",
}


def make_report(
    assessment: Assessment,
    *,
    practice: str = "",
    printed_at: datetime | None = None,
    parts: PrintParts = USUAL_PARTS,
    paper: Paper = Paper.A4,
    letterhead: tuple[str, ...] = (),
) -> bytes:
    """The PDF (1.7) of an assessment, its record attached; `parts` says which parts it has.

    `printed_at` stands in the foot and in the file's dates; left out, it is the time in SOURCE_DATE_EPOCH (seconds) or
    else now. The same assessment, practice, time and choices give the same bytes. Raises PrintRefused for a text that
    could only be shown wrongly.
    """
    document = make_document(
        assessment, practice=practice, printed_at=printed_at, parts=parts, paper=paper, letterhead=letterhead
    )
    return write_document(document, _ONE_PATIENT, write_record(assessment))


def save_report(
    path: Path,
    assessment: Assessment,
    *,
    practice: str = "",
    printed_at: datetime | None = None,
    parts: PrintParts = USUAL_PARTS,
    paper: Paper = Paper.A4,
    letterhead: tuple[str, ...] = (),
) -> None:
    """Writes the PDF to `path`, whole or not at all; an older file stays untouched until the new one is complete.

    The new file can be read by the person who saved it, and by others only where the folder's own rules say so.

    Raises FileNotWritten when the place cannot be written, when the name does not end in .pdf, and when anything but a
    PDF stands there already (a folder, a device, a link, a file of another kind); PrintRefused as `make_report` does.
    """
    content = make_report(
        assessment, practice=practice, printed_at=printed_at, parts=parts, paper=paper, letterhead=letterhead
    )
    _put(path, content, may_replace=True)


def save_document(path: Path, document: Document, subject: str, *, replace: bool = False) -> None:
    """Writes the pages to `path` as a PDF that says what it is about, whole or not at all.

    Raises FileNotWritten as `save_report` does, and where a file of this name is there already and `replace` is False.
    """
    _put(path, write_document(document, subject), may_replace=replace)


def check_print_place(path: Path, *, replace: bool = False) -> None:
    """Nothing, where a print may be saved at `path`: asked before long work. Raises FileNotWritten as saving does."""
    with _told(path):
        if not path.parent.is_dir():
            raise FileNotWritten(
                "the print cannot be saved.",
                where=str(path),
                why=f"There is no folder {path.parent}.",
                do="Make it, or choose another.",
            )
        _judge_place(path, may_replace=replace)


def _put(path: Path, content: bytes, *, may_replace: bool) -> None:
    with _told(path):
        _judge_place(path, may_replace=may_replace)
        (replace_file if may_replace else create_file)(path, content)


def _judge_place(path: Path, *, may_replace: bool) -> None:
    fault = _judge_target(path)
    if not fault and not may_replace and os.path.lexists(path):
        raise FileNotWritten(
            "there is a file with this name already; it was left as it is.",
            where=str(path),
            do="Choose another name, or say that it is to be replaced.",
        )
    if fault:
        raise FileNotWritten(
            "the print was not saved.", where=str(path), why=fault, do="Choose another name. Nothing was changed."
        )


@contextmanager
def _told(path: Path) -> Iterator[None]:
    """What the system says against a place, as FileNotWritten."""
    try:
        yield
    except (OSError, ValueError) as error:  # ValueError: a file name with a null character
        said = error.strerror if isinstance(error, OSError) and error.strerror else str(error)
        raise FileNotWritten(
            "the print could not be saved.",
            where=str(path),
            why=f"The system says: {said.rstrip('.')}.",
            do=_say_remedy(error),
        ) from error


def _say_remedy(error: OSError | ValueError) -> str:
    if isinstance(error, OSError) and error.errno in _FULL:
        return "Make room there, or choose a folder on another disk."
    return "Choose a folder that exists and that you may write to, and close the file where it is open."


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


def write_document(document: Document, subject: str, record: str = "") -> bytes:
    """The pages as the bytes of a PDF (1.7) that says what it is about; `record` is attached where there is one.

    The same pages and time give the same bytes.
    """
    from io import BytesIO

    from reportlab.pdfgen.canvas import Canvas

    target = BytesIO()
    make_known(Weight.REGULAR.value)
    canvas: Any = Canvas(
        target,
        invariant=1,
        pageCompression=1,
        pdfVersion=(1, 7),
        initialFontName=Weight.REGULAR.value,  # else a standard font is referenced without being embedded
        lang="en-GB",
    )
    canvas.setTitle(document.title)
    canvas.setAuthor(document.author)
    canvas.setCreator(document.program)
    if document.letterhead:  # an old print is laid out again with it; on the pages its lines may be broken
        canvas.setKeywords("\n".join(document.letterhead))
    canvas.setSubject(subject)
    canvas.setViewerPreference("DisplayDocTitle", "true")
    canvas.setDateFormatter(lambda *_: _pdf_date(document.printed_at))
    paint_pages(canvas, document.lettering, document.pages)
    if record:
        attach_record(canvas._doc, record)
    with _bytes_as_they_are():
        canvas.save()
    return target.getvalue()


@contextmanager
def _bytes_as_they_are() -> Iterator[None]:
    """Compressed streams are written as bytes; the library would turn them into letters, a quarter more of them."""
    from reportlab import rl_config

    before = rl_config.useA85
    rl_config.useA85 = 0
    try:
        yield
    finally:
        rl_config.useA85 = before


def _pdf_date(moment: datetime) -> str:
    """A moment as PDF writes it (ISO 32000-1, 7.9.4): D:20261201142000+01'00'."""
    zone = f"{moment:%z}"[:5]
    return f"D:{moment:%Y%m%d%H%M%S}" + (f"{zone[:3]}'{zone[3:]}'" if zone else "")
