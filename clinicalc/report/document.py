"""One print, laid out once: the pages that the PDF, the printer and the preview all show."""

import os
from collections.abc import Iterator
from dataclasses import dataclass, fields, is_dataclass
from datetime import UTC, datetime
from functools import cache

from clinicalc.assessment.result import Assessment
from clinicalc.errors import PrintRefused, UsageError
from clinicalc.report.compose import compose
from clinicalc.report.fonts import Lettering, check_text, check_texts, read_lettering
from clinicalc.report.pages import Page, lay_out
from clinicalc.report.paper import Paper
from clinicalc.report.parts import USUAL_PARTS, PrintParts

LONGEST_NAME = 120
"""Characters of a patient label or a practice name; more would push the result off its page."""


@dataclass(frozen=True, slots=True)
class Document:
    """A print ready to be painted, and what a file of it says about itself."""

    pages: tuple[Page, ...]
    lettering: Lettering
    title: str
    author: str
    program: str
    printed_at: datetime
    letterhead: tuple[str, ...] = ()


def make_document(
    assessment: Assessment,
    *,
    practice: str = "",
    printed_at: datetime | None = None,
    parts: PrintParts = USUAL_PARTS,
    paper: Paper = Paper.A4,
    letterhead: tuple[str, ...] = (),
) -> Document:
    """The pages of an assessment; the last one is for the patient, where it is wanted and there is a number.

    `letterhead` stands in place of the practice's bare name, as far as it takes no further page.
    `printed_at` stands in the foot; left out, it is `time_of_printing()`. Raises PrintRefused for a text that could
    only be shown wrongly.
    """
    lettering = read_lettering()
    _check_name(lettering, assessment.label.strip(), "The patient label")
    _check_name(lettering, practice.strip(), "The practice name")
    check_letterhead(lettering, letterhead)
    now = time_of_printing()  # asked for in any case: the PDF library reads the same variable
    moment = printed_at or now
    sheet = compose(assessment, practice=practice, printed_at=moment, parts=parts, letterhead=letterhead)
    check_texts(lettering, tuple(texts_of(sheet)), f"A text on the print, from {assessment.model.name} or as typed,")
    return Document(
        pages=lay_out(lettering, sheet, paper),
        lettering=lettering,
        title=sheet.title,
        author=sheet.furniture.practice or sheet.furniture.program,
        program=sheet.furniture.program,
        printed_at=moment,
        letterhead=sheet.furniture.letterhead,
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


def check_letterhead(lettering: Lettering, lines: tuple[str, ...]) -> None:
    """Nothing where the lines can be printed as they are. Raises PrintRefused, naming the line."""
    for number, line in enumerate(lines, 1):
        _check_name(lettering, line.strip(), f"Line {number} of the letterhead")


def _check_name(lettering: Lettering, text: str, what: str) -> None:
    check_text(lettering, text, what)
    if len(text) > LONGEST_NAME:
        raise PrintRefused(
            f"{what} has {len(text)} characters; a print takes at most {LONGEST_NAME}.", do="Shorten it."
        )


def texts_of(node: object) -> Iterator[str]:
    """Every text in the contents, however deep."""
    if isinstance(node, str):
        yield node
    elif isinstance(node, tuple):
        for part in node:
            yield from texts_of(part)
    else:
        kind: type = type(node)
        for name in _field_names(kind):
            yield from texts_of(getattr(node, name))


@cache
def _field_names(kind: type) -> tuple[str, ...]:
    """The fields of a noun; () for anything else."""
    return tuple(field.name for field in fields(kind)) if is_dataclass(kind) else ()
