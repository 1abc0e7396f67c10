"""Prints of the library for the practice's folder: an approval, a difference, a history, a day that is past.

Each as pages for a preview (`lay_out_…`) and as a PDF (`write_…_pdf`) of the same pages. A PDF is put in place whole or
not at all, and takes the place of an older one only where that is asked for.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path
from typing import TYPE_CHECKING

from clinicalc.report.paper import Paper as Sheet
from clinicalc.settings import Paper, read_settings

if TYPE_CHECKING:
    from clinicalc.assessment.model import Model
    from clinicalc.library.as_of import AsOf
    from clinicalc.library.difference import Difference
    from clinicalc.library.effect import Effect
    from clinicalc.library.history import History
    from clinicalc.library.installing import Candidate
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.library.standing import ModelState
    from clinicalc.report.document import Document
    from clinicalc.report.vetting_sheet import VettingSheet

# the layout of pages is loaded by the first print, not by every start of the window


@dataclass(frozen=True, slots=True)
class PrintChoices:
    """For which paper, None for that of this machine's settings, which the letterhead comes from, and the time.

    No time is the one in SOURCE_DATE_EPOCH, or else now.
    """

    paper: Paper | None = None
    printed_at: datetime | None = None


USUAL_CHOICES = PrintChoices()


@dataclass(frozen=True, slots=True)
class NamedVersion:
    """One of two versions that are set side by side; `standing` is a sentence, "" for a file outside the library."""

    title: str
    id: str
    version: str
    fingerprint: str
    standing: str = ""


def lay_out_approval(
    opened: OpenedLibrary,
    state: ModelState,
    candidate: Candidate | None,
    file_fault: str = "",
    choices: PrintChoices = USUAL_CHOICES,
) -> Document:
    """The approval record of one model as `opened` has it; `candidate` is its file, or None with the fault why not.

    Raises PrintRefused for a text that could only be printed wrongly.
    """
    from clinicalc.operations.approval_sheet import compose_approval

    return _lay_out(compose_approval(opened, state, candidate, file_fault), choices)


def write_approval_pdf(
    path: Path,
    opened: OpenedLibrary,
    state: ModelState,
    candidate: Candidate | None,
    file_fault: str = "",
    choices: PrintChoices = USUAL_CHOICES,
    *,
    replace: bool = False,
) -> None:
    """The same as a file. Raises PrintRefused, and FileNotWritten where the place cannot be written or is taken."""
    _write(path, lay_out_approval(opened, state, candidate, file_fault, choices), "Approval of one model", replace)


def lay_out_difference(
    old: NamedVersion,
    new: NamedVersion,
    difference: Difference,
    effect: Effect,
    practice: str = "",
    choices: PrintChoices = USUAL_CHOICES,
) -> Document:
    """Every statement in which two versions differ, and what that does to the numbers. Raises PrintRefused."""
    from clinicalc.operations.difference_sheet import compose_difference

    return _lay_out(compose_difference(old, new, difference, effect, practice), choices)


def write_difference_pdf(
    path: Path,
    old: NamedVersion,
    new: NamedVersion,
    difference: Difference,
    effect: Effect,
    practice: str = "",
    choices: PrintChoices = USUAL_CHOICES,
    *,
    replace: bool = False,
) -> None:
    """The same as a file. Raises PrintRefused, and FileNotWritten where the place cannot be written or is taken."""
    document = lay_out_difference(old, new, difference, effect, practice, choices)
    _write(path, document, "Difference of two versions of a model", replace)


def lay_out_history(
    opened: OpenedLibrary, history: History, about: str = "", choices: PrintChoices = USUAL_CHOICES
) -> Document:
    """Every record in chain order; `about` names the model that the history is of, "" for the whole library.

    Raises PrintRefused.
    """
    from clinicalc.operations.history_sheet import compose_history

    return _lay_out(compose_history(opened, history, about), choices)


def write_history_pdf(
    path: Path,
    opened: OpenedLibrary,
    history: History,
    about: str = "",
    choices: PrintChoices = USUAL_CHOICES,
    *,
    replace: bool = False,
) -> None:
    """The same as a file. Raises PrintRefused, and FileNotWritten where the place cannot be written or is taken."""
    _write(path, lay_out_history(opened, history, about, choices), "History of a model library", replace)


def lay_out_as_of(opened: OpenedLibrary, found: AsOf, choices: PrintChoices = USUAL_CHOICES) -> Document:
    """Which models answered at the end of a day that is past. Raises PrintRefused."""
    from clinicalc.operations.as_of_sheet import compose_as_of

    return _lay_out(compose_as_of(opened, found), choices)


def write_as_of_pdf(
    path: Path, opened: OpenedLibrary, found: AsOf, choices: PrintChoices = USUAL_CHOICES, *, replace: bool = False
) -> None:
    """The same as a file. Raises PrintRefused, and FileNotWritten where the place cannot be written or is taken."""
    _write(path, lay_out_as_of(opened, found, choices), "Models in use on a day that is past", replace)


def name_version(model: Model, opened: OpenedLibrary | None) -> NamedVersion:
    """A version for a difference; where it stands is said if it is in the library."""
    from clinicalc.operations.library_words import say_standing

    content = model.content
    state = None if opened is None else opened.state(model.fingerprint)
    standing = "" if state is None else say_standing(state)
    return NamedVersion(content.title, content.id, content.version, model.fingerprint, standing)


def name_models(opened: OpenedLibrary, fingerprints: Collection[str]) -> str:
    """What a history of these models is about: title and version, or of several versions the title and the id."""
    states = [state for state in opened.models if state.fingerprint in fingerprints]
    if len(states) == 1:
        return f"{states[0].title} {states[0].version}".strip() or f"model {states[0].fingerprint[:12]}"
    title, id = (states[-1].title, states[-1].id) if states else ("", "")
    return f"{title}, every version of {id}"


def suggest_vetting_name(kind: str, name: str, day: datetime) -> str:
    """A file name for a print: what it is, of what, and the day: "approval tarnwick-cvd-10y 1.0.0 2026-12-01.pdf"."""
    words = " ".join(part for part in (kind, name, f"{day:%Y-%m-%d}") if part)
    return "".join("-" if letter in '<>:"/\\|?*' or not letter.isprintable() else letter for letter in words) + ".pdf"


def _lay_out(sheet: VettingSheet, choices: PrintChoices) -> Document:
    from clinicalc.report.vetting_document import make_vetting_document

    settings = read_settings().settings
    return make_vetting_document(
        sheet,
        printed_at=choices.printed_at,
        paper=Sheet((choices.paper or settings.paper).value),
        letterhead=settings.letterhead,
    )


def _write(path: Path, document: Document, subject: str, replace: bool) -> None:
    from clinicalc.report.pdf import save_document

    save_document(path, document, subject, replace=replace)
