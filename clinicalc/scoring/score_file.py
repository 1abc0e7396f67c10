"""A table of any length scored into another: in blocks, in bounded memory, and resumed where it was killed."""

import os
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from datetime import datetime
from pathlib import Path

import numpy as np

from clinicalc import __version__
from clinicalc.assessment.choices import DEFAULT_LEVEL
from clinicalc.assessment.model import Model
from clinicalc.coefficients.spans import Span
from clinicalc.cohort.course import UNWATCHED, Course
from clinicalc.errors import ClinicalcError, Problem, Stopped, TableRefused
from clinicalc.scoring.column_choice import ChosenColumns, ColumnWishes, choose_columns
from clinicalc.scoring.output_forms import OutputForm
from clinicalc.scoring.output_place import cannot_write, require_free_place
from clinicalc.scoring.part_file import PartFile
from clinicalc.scoring.row_blocks import RowBlock, RowSource
from clinicalc.scoring.run_state import Choices
from clinicalc.scoring.score_rows import Scorer
from clinicalc.scoring.scored import Cells, CodedTexts, SaidOnce
from clinicalc.scoring.table_forms import open_form, open_source
from clinicalc.scoring.table_refusals import input_changed
from clinicalc.scoring.tally import Tally


@dataclass(frozen=True, slots=True)
class ScoringPlan:
    """What is asked of a scoring: the columns, and horizon, recalibration and level as for `assess`."""

    columns: ColumnWishes = field(default_factory=ColumnWishes)
    span: Span | None = None
    recalibration: str | None = None
    level: float = DEFAULT_LEVEL


@dataclass(frozen=True, slots=True)
class FileScore:
    """What became of a table: rows in all and with a number, how often each stop and each caution (codes with fields).

    `blank` empty lines were left out; `went_on_after` rows had been scored by an earlier run, None where this one began
    anew. `without` are the fields that no column held; `once` is what the file says with every number.
    """

    out: Path
    told: str
    tally: Tally
    blank: int
    went_on_after: int | None
    without: tuple[str, ...]
    once: SaidOnce


def score_file(
    model: Model,
    table: Path,
    out: Path,
    plan: ScoringPlan,
    course: Course = UNWATCHED,
    *,
    resume: bool = False,
    replace: bool = False,
    at: datetime | None = None,
) -> FileScore:
    """Score every row of `table` into `out`, which is put in place whole at the end.

    Until then the rows stand in OUT.part; a run that was stopped or killed goes on from there with `resume` and gives
    the same bytes. Raises UsageError, TableRefused, FileNotWritten and, where `course` asks for it, Stopped.
    """
    require_free_place(out, (table,), replace=replace, resume=resume)
    before = _look(table)
    source = _open(table)
    chosen = choose_columns(model, table.name, source.names, source.decimal, plan.columns)
    form = open_form(out, source, chosen.wanted)
    moment = at or datetime.now().astimezone()
    part = PartFile(out, _choices(model, out, plan, source, chosen), moment.isoformat())
    went_on = part.go_on() if resume else False
    if not went_on:
        part.begin(form.head)
    run = _Run(model, table, plan, source, chosen, form, part, went_on)
    try:
        run.score(course)
        if _look(table) != before:
            raise input_changed(table.name)
        part.save()
        course.say("Writing the rows", run.part.tally.rows, run.part.tally.rows)
        part.finish(replace=replace, made=_make(form, part))
    except (KeyboardInterrupt, Stopped) as stopped:
        if part.is_in_place:
            return run.result(out)
        part.keep()
        raise _stop(part) from stopped
    except ClinicalcError:
        part.keep()
        raise
    finally:
        part.close()
    return run.result(out)


@dataclass(slots=True, eq=False)
class _Run:
    """One run over a table."""

    model: Model
    table: Path
    plan: ScoringPlan
    source: RowSource
    chosen: ChosenColumns
    form: OutputForm
    part: PartFile
    went_on: bool
    scorer: Scorer = field(init=False)
    before: int | None = field(init=False)

    def __post_init__(self) -> None:
        self.before = self.part.tally.rows if self.went_on else None
        self.scorer = Scorer(
            self.model,
            span=self.plan.span,
            recalibration=self.plan.recalibration,
            level=self.plan.level,
            units=self.chosen.units,
            at=datetime.fromisoformat(self.part.at),
        )

    def score(self, course: Course) -> None:
        """Every block that is left."""
        for block in self._blocks():
            scored = self.scorer.score(self._read(block))
            data = self.form.write(block, scored)
            tally = self.part.tally.plus(scored)
            self.part.add(data, block.after, tally)
            course.say(f"Scored {tally.rows:,} rows", block.done, block.of)
        if not self.part.tally.rows:
            raise TableRefused(
                self.table.name, (Problem("", "There is nobody in it: no line stands below the names."),)
            )

    def _blocks(self) -> Iterator[RowBlock]:
        try:
            yield from self.source.blocks(self.chosen.wanted, self.part.place)
        except UnicodeDecodeError as error:
            # its encoding was told from all of its bytes
            raise input_changed(self.table.name) from error
        except OSError as error:
            why = f"it could not be read to its end ({error.strerror or type(error).__name__})."
            do = "When it can be, run the same command with --resume."
            raise TableRefused(self.table.name, (Problem("", f"{why} {do}"),)) from error

    def result(self, out: Path) -> FileScore:
        """What became of the table."""
        part, place = self.part, self.part.place
        blank = 0 if place is None else place.blank
        told, once = self.source.told, self.scorer.said_once
        return FileScore(out, told, part.tally, blank, self.before, self.chosen.without, once)

    def _read(self, block: RowBlock) -> Mapping[str, Cells]:
        read: dict[str, Cells] = {}
        for id, cells in block.cells.items():
            reading = self.chosen.readings[id]
            read[id] = reading.read(self.table.name, cells) if isinstance(cells, CodedTexts) else cells
        everywhere = np.zeros(block.rows, dtype=np.intp)
        return read | {id: CodedTexts([text], everywhere) for id, text in self.chosen.same.items()}


def _open(table: Path) -> RowSource:
    try:
        return open_source(table)
    except OSError as error:
        why = f"It cannot be opened ({error.strerror or type(error).__name__}). Check its name and its folder."
        raise TableRefused(table.name, (Problem("", why),)) from error


def _make(form: OutputForm, part: PartFile) -> Path | None:
    try:
        return form.make(part.path)
    except OSError as error:
        raise cannot_write(part.out, error) from error


def _choices(model: Model, out: Path, plan: ScoringPlan, source: RowSource, chosen: ChosenColumns) -> Choices:
    return Choices(
        program=__version__,
        model=model.fingerprint,
        horizon="" if plan.span is None else plan.span.words,
        recalibration=plan.recalibration or "",
        level=plan.level,
        columns=chosen.words,
        keep=chosen.wanted.keep,
        read=source.told,
        form=out.suffix.lower(),
    )


def _stop(part: PartFile) -> Stopped:
    if part.place is None:
        return Stopped("the scoring was stopped before any row was written.", do="Nothing is left of it.")
    rows = part.place.rows
    said = f"the scoring was stopped after {rows:,} rows, which are in {part.path}; {part.out} was not written."
    return Stopped(said, do="The same command with --resume goes on from there.")


def _look(table: Path) -> tuple[int, int] | None:
    """Size and time of the table; None where it cannot be looked at, which its reading will say."""
    try:
        found = os.stat(table)
    except OSError:
        return None
    return found.st_size, found.st_mtime_ns
