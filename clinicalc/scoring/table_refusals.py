"""Why a table is refused in the middle: rows that do not fit it, by their lines, and rows that are other now."""

from collections.abc import Sequence
from dataclasses import dataclass

from clinicalc.errors import Problem, TableRefused, UsageError

_NAMED = 5


@dataclass(frozen=True, slots=True)
class Misfit:
    """A row that begins in `line` and has so many fields; `unreadable` says why it has none that could be counted."""

    line: int
    fields: int
    unreadable: str = ""


def refuse_misfits(file: str, width: int, misfits: Sequence[Misfit], first_line: int) -> None:
    """Raise TableRefused with the first of the rows that do not fit a table of `width` columns."""
    problems = [_tell(misfit, width) for misfit in misfits[:_NAMED]]
    if len(misfits) > _NAMED:
        problems.append(Problem("", f"{len(misfits) - _NAMED} further lines nearby have too many or too few fields."))
    problems.append(
        Problem(
            "",
            "Nothing was put in place. Later lines were not looked at. Correct the table and run the same command with"
            " --resume: it goes on where it stopped, as long as the rows before are as they were.",
        )
    )
    raise TableRefused(file, tuple(problems))


def input_changed(file: str) -> UsageError:
    """To be raised where what was read of a table before is other now: rows of two tables would stand in one output."""
    return UsageError(
        f"{file} is not what it was when its first rows were scored.",
        why="Rows of two tables would stand in one output.",
        do="Give the table as it was, or say --replace without --resume to begin anew.",
    )


def _tell(misfit: Misfit, width: int) -> Problem:
    if misfit.unreadable:
        why = f"cannot be read ({misfit.unreadable}): a quotation mark is left open, or stands inside a text."
        return Problem(f"line {misfit.line}", why)
    many = misfit.fields > width
    slip = "a text that holds the separator must stand in quotation marks" if many else "it is cut off"
    fields = "1 field" if misfit.fields == 1 else f"{misfit.fields} fields"
    return Problem(f"line {misfit.line}", f"has {fields}, and the first line has {width} names; perhaps {slip}.")
