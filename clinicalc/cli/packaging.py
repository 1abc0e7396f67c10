"""`package`: a described fit becomes a coefficient file."""

import shlex
from collections.abc import Iterator
from pathlib import Path

import click

from clinicalc.cli.outcome import ExitStatus
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.operations.folding import fold
from clinicalc.operations.inspection import count_examples


@click.command(short_help="Make a coefficient file from a described fit.")
@click.argument("description", metavar="DESCRIPTION.toml")
@click.option("--out", required=True, metavar="FILE.json", help="The coefficient file to write.")
@click.option("--replace", is_flag=True, help="Replace a file that is there already.")
def package(description: str, out: str, replace: bool) -> int:
    """Make a coefficient file from the description of a model and the tables of its fit.

    The file is read back and its worked examples are recomputed before it is put in place. Where anything is wrong
    all of it is said at once, and nothing is written. The guide has a page on packaging, with R's commands.
    """
    # here, so that no other command waits for it
    from clinicalc.development.description import read_description
    from clinicalc.development.package import package_model, write_package

    made = package_model(read_description(Path(description)))
    write_package(made, Path(out), replace=replace)
    for line in _tell(made.model.content.title, made.model.fingerprint, count_examples(made.model), out):
        click.echo(line)
    for remark in made.remarks:
        click.echo("\n".join(fold(remark)))
    click.echo(f"Read it through before anyone uses it: clinicalc inspect {shlex.quote(out)}")
    return ExitStatus.ASSESSED


def _tell(title: str, fingerprint: str, examples: str, out: str) -> Iterator[str]:
    grouped = group_fingerprint(fingerprint)
    yield f"{title}: written to {out}"
    yield f"Fingerprint {grouped[:39]}"
    yield f"            {grouped[40:]}"
    yield f"Worked examples, each recomputed from the file: {examples}."
