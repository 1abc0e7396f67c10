"""The options --pdf, --paper and --replace of the library's commands, and what is printed with them."""

from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import click

from clinicalc.settings import Paper

if TYPE_CHECKING:
    from clinicalc.assessment.model import Model
    from clinicalc.library.difference import Difference
    from clinicalc.library.effect import Effect
    from clinicalc.library.opening import OpenedLibrary
    from clinicalc.operations.vetting_prints import PrintChoices

_Command = TypeVar("_Command", bound=Callable[..., Any])


def print_options(command: _Command) -> _Command:
    """Adds --pdf, --paper and --replace, given to the command as `pdf_file`, `paper` and `replace`."""
    for decorate in (
        click.option("--replace", is_flag=True, help="Replace a file that is there already."),
        click.option(
            "--paper",
            type=click.Choice([paper.value.lower() for paper in Paper], case_sensitive=False),
            default=Paper.A4.value.lower(),
            show_default=True,
            help="The sheet to lay it out for.",
        ),
        click.option("--pdf", "pdf_file", metavar="FILE.pdf", help="Write it as a print for the folder as well."),
    ):
        command = decorate(command)
    return command


def choose_print(paper: str) -> "PrintChoices":
    """The paper that is named; the time is the one in SOURCE_DATE_EPOCH, or now."""
    from clinicalc.operations.vetting_prints import PrintChoices

    return PrintChoices(next(sheet for sheet in Paper if sheet.value.lower() == paper.lower()))


def print_difference(
    path: Path,
    versions: "tuple[Model, Model]",
    found: "tuple[Difference, Effect]",
    opened: "OpenedLibrary | None",
    paper: str,
    *,
    replace: bool,
) -> None:
    """Write the difference of two versions; `opened` is the library that one of them is in, None for two files."""
    from clinicalc.operations.vetting_prints import name_version, write_difference_pdf

    old, new = (name_version(model, opened) for model in versions)
    practice = "" if opened is None else opened.authority.practice
    write_difference_pdf(path, old, new, *found, practice, choose_print(paper), replace=replace)
