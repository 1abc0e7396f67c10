"""How a command ends: exit status, and one plain sentence instead of a traceback."""

import sys
from collections.abc import Callable
from enum import IntEnum

import click

from clinicalc.errors import ClinicalcError


class ExitStatus(IntEnum):
    """What the exit status of a command says."""

    ASSESSED = 0
    USAGE = 2
    STOPPED = 3
    FILE_REFUSED = 4
    FAILED = 5
    LIBRARY = 6


def run_guarded(command: Callable[[], int]) -> int:
    """The exit status of a command; whatever it raises becomes a sentence on stderr."""
    try:
        return command()
    except ClinicalcError as error:
        _say(str(error))
        return error.exit_status
    except click.ClickException as error:
        _say(error.format_message())
        return ExitStatus.USAGE
    except (click.Abort, KeyboardInterrupt):
        _say("Stopped before the end; nothing was written.")
        return ExitStatus.FAILED
    except BrokenPipeError:
        # whoever read the output stopped reading; say nothing to a closed pipe when Python flushes at exit
        sys.stdout = None
        return ExitStatus.FAILED
    except Exception as error:  # noqa: BLE001  the last edge: a person must never meet a traceback
        _say(f"Something went wrong inside the program ({type(error).__name__}: {error}). No number was given.")
        return ExitStatus.FAILED


def _say(sentence: str) -> None:
    click.echo(f"clinicalc: {sentence}", err=True)
