"""`score`: a table of people in, the same rows with number, band and findings out."""

import json
import signal
import sys
import threading
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from types import FrameType

import click

from clinicalc.cli.outcome import ExitStatus
from clinicalc.operations.bedside import choose_recalibration, choose_span, open_model
from clinicalc.operations.course import Course, Progress


@click.command(short_help="Score every row of a table of people.")
@click.argument("file", metavar="FILE")
@click.argument("cohort", metavar="COHORT")
@click.argument("values", nargs=-1, metavar="[FIELD=VALUE]...")
@click.option("-o", "--out", required=True, metavar="OUT", help="The table to write: .csv, .tsv or .parquet.")
@click.option("--column", "columns", multiple=True, metavar="ID=NAME", help="The column that holds a field.")
@click.option("--unit", "units", multiple=True, metavar="ID=UNIT", help="The unit of a field's column, such as mg/dL.")
@click.option("--missing", multiple=True, metavar="TEXT", help="A text that stands for an empty cell.")
@click.option(
    "--columns",
    "study",
    metavar="STUDY.toml",
    help="Take the columns from [cohort.columns] of a study, and the exclusions of a validation plan.",
)
@click.option("--keep", multiple=True, metavar="NAME", help="A column to copy; without it, the table's first.")
@click.option("--years", type=float, metavar="N", help="Horizon in years, where the file has several.")
@click.option("--time", metavar="SPAN", help='Horizon in another unit of time, such as "90 d".')
@click.option("--recalibration", metavar="ID", help="A recalibration that the file offers.")
@click.option("--level", type=float, default=0.95, show_default=True, help="Level of the band, 0.5 to 0.999.")
@click.option("--resume", is_flag=True, help="Go on where a run was stopped or killed.")
@click.option("--replace", is_flag=True, help="Replace a table that is there already.")
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object and nothing else.")
def score(
    file: str,
    cohort: str,
    values: tuple[str, ...],
    out: str,
    columns: tuple[str, ...],
    units: tuple[str, ...],
    missing: tuple[str, ...],
    study: str | None,
    keep: tuple[str, ...],
    years: float | None,
    time: str | None,
    recalibration: str | None,
    level: float,
    resume: bool,
    replace: bool,
    as_json: bool,
) -> int:
    """Score every row of COHORT with a coefficient file: the number and the band that `assess` gives for its values.

    A cell holds what would be typed for its field: "5.2", "5.2 mmol/L", "yes". With --columns cells are read as that
    study reads them, its texts for answers and for what is missing included. A row that is stopped has no number, and
    OUT says by which codes. Rows stay in their order. What holds for everybody is given as FIELD=VALUE, such as
    prior_cvd=no.

    OUT is put in place whole. Until then rows stand in OUT.part; a run that was stopped goes on with --resume. A row
    with too many or too few fields stops the run at its line: correct the table and go on with --resume.
    """
    # here, so that no other command waits for it
    from clinicalc.assessment.choices import check_level
    from clinicalc.operations.scoring import read_columns, take_pairs
    from clinicalc.operations.scoring_words import record_scoring, tell_scoring
    from clinicalc.scoring.column_choice import ColumnWishes
    from clinicalc.scoring.score_file import ScoringPlan, score_file

    check_level(level)
    model = open_model(Path(file))
    span = choose_span(model, years=years, time=time)
    wishes = ColumnWishes(
        columns=take_pairs(columns, "--column", "age=AGE_YEARS"),
        units=take_pairs(units, "--unit", "total_cholesterol=mg/dL"),
        same=take_pairs(values, "score", "prior_cvd=no"),
        entries={} if study is None else read_columns(Path(study), model),
        missing=missing,
        keep=keep or None,
    )
    plan = ScoringPlan(wishes, span, choose_recalibration(model, span, recalibration), level)
    with _watch() as course:
        found = score_file(model, Path(cohort), Path(out), plan, course, resume=resume, replace=replace)
    if as_json:
        click.echo(json.dumps(record_scoring(model, found), ensure_ascii=False, indent=2))
    else:
        for line in tell_scoring(model, found):
            click.echo(line)
    return ExitStatus.ASSESSED


@contextmanager
def _watch() -> Iterator[Course]:
    """A course that shows how far the work is where somebody watches; Ctrl-C stops it where a block of rows ends.

    Pressed again, it stops at once.
    """
    course = Course(_tell) if sys.stderr.isatty() else Course()
    before = signal.getsignal(signal.SIGINT)

    def stop(number: int, frame: FrameType | None) -> None:
        signal.signal(signal.SIGINT, before)
        course.stop()

    if threading.current_thread() is not threading.main_thread():
        yield course
        return
    signal.signal(signal.SIGINT, stop)
    try:
        yield course
    finally:
        signal.signal(signal.SIGINT, before)
        _show("")


def _tell(progress: Progress) -> None:
    share = f" ({100 * progress.done // progress.of} %)" if progress.of else ""
    _show(f"{progress.words}{share}")


def _show(words: str) -> None:
    if sys.stderr.isatty():
        click.echo(f"\r\x1b[K{words}", err=True, nl=False)
