"""`report --check`: an old print against a coefficient file."""

from pathlib import Path

import click
from click.core import ParameterSource

from clinicalc.cli.outcome import ExitStatus
from clinicalc.errors import UsageError
from clinicalc.operations.bedside import open_model
from clinicalc.operations.folding import fold
from clinicalc.operations.old_print import read_old_print
from clinicalc.operations.recheck import recheck, report_recheck

_ALONE = frozenset({"check", "model"})


def check_print(check: str | None, model: str | None) -> int:
    """Say whether the print still agrees with the model; the exit status says the same.

    Raises UsageError when one of the two files, or anything else beside them, is (not) given.
    """
    if check is None or model is None:
        absent = "--check FILE.pdf" if check is None else "--model FILE.json"
        raise UsageError(
            f"{absent} is missing.",
            do="A check takes a print and a coefficient file: --check FILE.pdf --model FILE.json.",
        )
    others = _others_given()
    if others:
        raise UsageError(
            f"a check takes its values from the print, so {others} cannot be given with it.",
            do="Leave out everything but --check FILE.pdf and --model FILE.json.",
        )
    found = recheck(read_old_print(Path(check)), open_model(Path(model)))
    for sentence in report_recheck(found):
        click.echo("\n".join(fold(sentence)))
    return ExitStatus.ASSESSED if found.agrees else ExitStatus.STOPPED


def require_print(file: object, out: str | None) -> str:
    """The name of the print to write. Raises UsageError where it or the coefficient file is not given."""
    if file is None:
        raise UsageError(
            "no coefficient file is given.", do="Name it first: clinicalc report FILE age=61 ... --out FILE.pdf."
        )
    if out is None:
        raise UsageError("--out is missing.", do="Say where the print goes: --out FILE.pdf.")
    return out


def _others_given() -> str:
    """The other words of the call, by name, joined; "" for none."""
    context = click.get_current_context()
    given = [
        parameter
        for parameter in context.command.params
        if parameter.name not in _ALONE
        and context.get_parameter_source(parameter.name or "") is not ParameterSource.DEFAULT
    ]
    return ", ".join(p.opts[0] if p.opts[0].startswith("-") else p.make_metavar(context) for p in given)
