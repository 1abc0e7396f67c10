"""Asking for a passphrase: from a file, from the environment, or hidden at the keyboard; never a word of the call."""

import os
from collections.abc import Callable
from pathlib import Path
from typing import Any, TypeVar

import click

from clinicalc.errors import KeyRefused

VARIABLE = "CLINICALC_PASSPHRASE"
NEW_VARIABLE = "CLINICALC_NEW_PASSPHRASE"
_MOST_BYTES = 4096
_Command = TypeVar("_Command", bound=Callable[..., Any])


def passphrase_option(command: _Command) -> _Command:
    """Adds --passphrase-file, given to the command as `passphrase_file`."""
    return click.option(
        "--passphrase-file",
        metavar="FILE",
        help=f"A file that holds the passphrase and nothing else; without it {VARIABLE}, then the keyboard.",
    )(command)


def ask_passphrase(
    file: str | None, prompt: str = "Passphrase", *, confirm: bool = False, variable: str = VARIABLE
) -> str:
    """The passphrase of the file, else of the environment variable, else as it is typed, unseen, at the prompt.

    `confirm` has it typed twice. Raises KeyRefused for a file that cannot be read or holds more than one line.
    """
    if file is not None:
        return _read(Path(file))
    given = os.environ.get(variable)
    if given:
        return given
    typed: str = click.prompt(prompt, hide_input=True, confirmation_prompt=confirm, err=True)
    return typed


def _read(path: Path) -> str:
    from clinicalc.library.small_files import read_small

    data = read_small(path, _MOST_BYTES, "a passphrase's file")
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise KeyRefused(
            "this is not UTF-8 text, so not a passphrase's file.", where=str(path), do="Save it as UTF-8."
        ) from None
    line = text.removesuffix("\n").removesuffix("\r")
    if not line or "\n" in line:
        raise KeyRefused(
            "a passphrase's file holds one line, the passphrase, and nothing else.",
            where=str(path),
            do="Mend the file.",
        )
    return line
