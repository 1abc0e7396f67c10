"""`report --check`: an old print against a coefficient file, or against the library."""

from datetime import datetime
from pathlib import Path

import click
from click.core import ParameterSource

from clinicalc.cli.outcome import ExitStatus
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.errors import LibraryError, UsageError
from clinicalc.operations.bedside import open_model
from clinicalc.operations.folding import fold
from clinicalc.operations.old_print import OldPrint, read_old_print
from clinicalc.operations.recheck import Recheck, recheck, report_recheck
from clinicalc.units.quoting import visible

_ALONE = frozenset({"check", "model", "library"})


def check_print(check: str | None, model: str | None, place: str | None) -> int:
    """Say whether the print still agrees with the model; the exit status says the same.

    The model is the file that is named, else that of the library with the fingerprint in the print. Raises UsageError
    when anything else is given beside them, LibraryError where the library does not hold the model.
    """
    if check is None:
        raise UsageError(
            "--check FILE.pdf is missing.",
            do="A check takes a print, and a coefficient file unless the library has it: --check FILE.pdf --model"
            " FILE.json.",
        )
    others = _others_given()
    if others:
        raise UsageError(
            f"a check takes its values from the print, so {others} cannot be given with it.",
            do="Leave out everything but --check FILE.pdf and --model FILE.json.",
        )
    if model is None and not _has_library(place):
        raise UsageError(
            "--model FILE.json is missing.", do="Name the coefficient file of the print; this machine has no library."
        )
    old = read_old_print(Path(check))
    found = recheck(old, open_model(Path(model))) if model is not None else _recheck_by_library(old, place)
    for sentence in report_recheck(found):
        click.echo("\n".join(fold(sentence)))
    return ExitStatus.ASSESSED if found.agrees else ExitStatus.STOPPED


def _has_library(place: str | None) -> bool:
    from clinicalc.library.machine import uses_library

    return uses_library(place)


def _recheck_by_library(old: OldPrint, place: str | None) -> Recheck:
    """The print against the model of the library that it names; one that is out of use is found as well."""
    from clinicalc.library.installing import read_installed, weigh
    from clinicalc.library.machine import this_machine
    from clinicalc.library.opening import open_library
    from clinicalc.library.trust_store import TrustStore

    opened = open_library(this_machine(place), datetime.now().astimezone())
    print_of = old.record.model
    state = opened.state(print_of.fingerprint)
    if state is None:
        raise LibraryError(
            f"the library holds no file with the fingerprint {group_fingerprint(visible(print_of.fingerprint), 3)}.",
            where=old.name,
            why=f"The print was made with {visible(print_of.title)} {visible(print_of.version)}.",
            do="Name its coefficient file with --model.",
        )
    return recheck(old, weigh(read_installed(opened.source, state), TrustStore()).model, opened)


def require_print(file: object, approved: object, out: str | None) -> str:
    """The name of the print to write. Raises UsageError where it, or what to assess with, is not given."""
    if file is None and approved is None:
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
