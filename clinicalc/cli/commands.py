"""The commands: assess, report, inspect, package, fit, score, demo."""

from collections.abc import Callable, Sequence
from pathlib import Path

import click

from clinicalc import __version__
from clinicalc.assessment.record import write_record
from clinicalc.assessment.result import Assessment
from clinicalc.cli.case import CaseWords, assess_case, case_options, tell_not_in_use
from clinicalc.cli.checking import check_print, require_print
from clinicalc.cli.fitting import fit
from clinicalc.cli.library import library
from clinicalc.cli.outcome import ExitStatus, run_guarded
from clinicalc.cli.packaging import package
from clinicalc.cli.scoring import score
from clinicalc.cli.signing import sign, trust
from clinicalc.cli.updating import update
from clinicalc.cli.validating import validate
from clinicalc.errors import NotInUse
from clinicalc.operations.bedside import assess_patient
from clinicalc.operations.demonstration import DemoCase, demo_case
from clinicalc.operations.documents import save_pdf, stated_time
from clinicalc.operations.inspection import inspect_file, write_sections
from clinicalc.operations.summary import summarise
from clinicalc.report.parts import PrintParts
from clinicalc.settings import Paper, read_settings

OpenWindow = Callable[[DemoCase], int]
"""Opens the window on a case and returns when it is closed; does nothing where there is no screen."""


@click.group(
    context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 100},
    epilog="Without a command the window opens. For qualified clinicians: supports judgement, does not replace it.",
)
@click.version_option(__version__, prog_name="clinicalc")
def clinicalc() -> None:
    """One coefficient file, one patient, one probability with its band."""


@clinicalc.command(short_help="Assess one patient with a coefficient file.")
@case_options
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
def assess(as_json: bool, shares: bool, **words: object) -> int:
    """Assess one patient with a coefficient file, or with a model that the practice approved (--approved).

    An approved model is used with the recalibration and the decision points of its approval. One that is not in use
    gives no number: exit status 3.

    Give each value as FIELD=VALUE, with its unit where it is not the file's own and its date where it has one:
    age=61 "total_cholesterol=5.2 mmol/L" "glucose=110 mg/dL on 2026-10-02". `clinicalc inspect FILE` lists the fields.
    """
    try:
        assessment = assess_case(CaseWords(**words))  # type: ignore[arg-type]
    except NotInUse as fault:
        return tell_not_in_use(fault, as_json)
    click.echo(write_record(assessment) if as_json else summarise(assessment, with_shares=shares), nl=False)
    return ExitStatus.STOPPED if assessment.estimate is None else ExitStatus.ASSESSED


@clinicalc.command(short_help="Assess one patient and write the PDF, or check an old one.")
@case_options
@click.option("--out", metavar="FILE.pdf", help="The PDF to write.")
@click.option("--label", default="", help="Name or number of the patient, for the print only.")
@click.option(
    "--paper",
    type=click.Choice([paper.value.lower() for paper in Paper], case_sensitive=False),
    default=Paper.A4.value.lower(),
    show_default=True,
    help="The sheet to lay it out for.",
)
@click.option("--no-patient-page", is_flag=True, help="Leave out the page for the patient.")
@click.option("--check", metavar="FILE.pdf", help="A print to work out again, with nothing else beside it.")
@click.option("--model", metavar="FILE.json", help="The file to check it with, if not that in the library.")
def report(
    out: str | None,
    check: str | None,
    model: str | None,
    paper: str,
    no_patient_page: bool,
    shares: bool,
    **words: object,
) -> int:
    """Assess one patient and write the print as a PDF: pages for the clinician, and a last one for the patient.

    Practice name and letterhead are those of this machine's settings.

    A comparison, shares and the matching age are printed where --change, --shares and --matching-age ask for them.
    No number, no print.

    With --check an old print is worked out again from the record attached to it, by the file of --model, or else by
    the model of that fingerprint in the library: exit status 0 when number, band, values, findings and approval agree,
    3 when they do not.
    """
    if check is not None or model is not None:
        return check_print(check, model, None if words["library"] is None else str(words["library"]))
    out = require_print(words["file"], words["approved"], out)
    try:
        assessment = assess_case(CaseWords(**words), at=stated_time())  # type: ignore[arg-type]
    except NotInUse as fault:
        return tell_not_in_use(fault, False, f"No print was made, and {out} was not written.")
    if assessment.estimate is None:
        click.echo(summarise(assessment), nl=False)
        click.echo(f"\nNo print was made: there is no number to print. {out} was not written.")
        return ExitStatus.STOPPED
    sheet = next(sheet for sheet in Paper if sheet.value.lower() == paper)
    parts = PrintParts(patient_page=not no_patient_page, shares=shares, matching_age=words["matching_age"] is True)
    chosen = read_settings().settings
    save_pdf(Path(out), assessment, practice=chosen.practice, letterhead=chosen.letterhead, paper=sheet, parts=parts)
    _tell_print(out, assessment, with_shares=shares)
    return ExitStatus.ASSESSED


@clinicalc.command(short_help="Print everything a coefficient file says.")
@click.argument("file", metavar="FILE")
def inspect(file: str) -> int:
    """Print everything a coefficient file says, with its worked examples recomputed."""
    click.echo(write_sections(inspect_file(Path(file))), nl=False)
    return ExitStatus.ASSESSED


clinicalc.add_command(package)
clinicalc.add_command(fit)
clinicalc.add_command(validate)
clinicalc.add_command(update)
clinicalc.add_command(library)
clinicalc.add_command(score)
clinicalc.add_command(sign)
clinicalc.add_command(trust)


@clinicalc.command(short_help="Show the whole job on an invented patient.")
@click.option("--out", default="clinicalc-demo.pdf", show_default=True, metavar="FILE.pdf", help="The PDF to write.")
@click.option("--no-window", is_flag=True, help="Do not open the window afterwards.")
@click.pass_obj
def demo(open_window: OpenWindow, out: str, no_window: bool) -> int:
    """Assess an invented patient with a shipped file, print the result, write the PDF, open the window."""
    case = demo_case()
    assessment = assess_patient(case.model, case.entry, at=stated_time())
    save_pdf(Path(out), assessment)
    _tell_print(out, assessment)
    return ExitStatus.ASSESSED if no_window else open_window(case)


def _tell_print(out: str, assessment: Assessment, *, with_shares: bool = False) -> None:
    stated = stated_time()
    dated = "" if stated is None else f", dated {stated:%Y-%m-%d %H:%M} by SOURCE_DATE_EPOCH"
    click.echo(f"{summarise(assessment, with_shares=with_shares)}\nPrint written to {out}{dated}")


def run_command(words: Sequence[str], open_window: OpenWindow) -> int:
    """Run the command that the words name and return its exit status; never raises, never shows a traceback."""

    def command() -> int:
        # not standalone: click returns what the command returned instead of leaving the process
        status = clinicalc.main(list(words), prog_name="clinicalc", standalone_mode=False, obj=open_window)
        return status if isinstance(status, int) else ExitStatus.ASSESSED

    return run_guarded(command)
