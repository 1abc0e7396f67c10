"""What a stopped run leaves beside its part: how far it was, and everything on which its output depends."""

from collections import Counter
from pathlib import Path

import msgspec

from clinicalc.errors import UsageError
from clinicalc.replacement import replace_file
from clinicalc.scoring.row_blocks import Place
from clinicalc.scoring.tally import Tally

_FORMAT = "clinicalc.scoring/1"


class Choices(msgspec.Struct, frozen=True):
    """Everything beside the table on which the output depends, so that a run only goes on as it began."""

    program: str
    model: str
    """The model's fingerprint."""
    horizon: str
    recalibration: str
    level: float
    columns: tuple[tuple[str, str], ...]
    """What is said of each field's column, in words, by field id."""
    keep: tuple[str, ...]
    read: str
    """How the table was understood."""
    form: str
    """The form of the output."""


class RunState(msgspec.Struct, frozen=True):
    """The table read, the rows counted and the bytes written, all up to the end of the same block.

    `at` is the moment as of which rows are scored, in ISO form; `written` bytes of the part have `written_digest`.
    """

    format: str
    choices: Choices
    at: str
    rows: int
    blank: int
    input_at: int
    input_line: int
    input_digest: str
    written: int
    written_digest: str
    with_number: int
    stops: dict[str, int]
    cautions: dict[str, int]

    @property
    def place(self) -> Place:
        """How far the table was read."""
        return Place(self.rows, self.blank, self.input_at, self.input_line, self.input_digest)

    @property
    def tally(self) -> Tally:
        """What was counted."""
        return Tally(self.rows, self.with_number, Counter(self.stops), Counter(self.cautions))


def state_of(choices: Choices, at: str, place: Place, tally: Tally, written: int, digest: str) -> RunState:
    """The state of a run that wrote so many bytes of this digest for the rows up to `place`."""
    return RunState(
        format=_FORMAT,
        choices=choices,
        at=at,
        rows=place.rows,
        blank=place.blank,
        input_at=place.at,
        input_line=place.line,
        input_digest=place.digest,
        written=written,
        written_digest=digest,
        with_number=tally.with_number,
        stops=dict(tally.stops),
        cautions=dict(tally.cautions),
    )


def write_state(path: Path, state: RunState) -> None:
    """Put the state in place. Raises OSError."""
    replace_file(path, msgspec.json.encode(state))


def read_state(path: Path) -> RunState | None:
    """The state that stands there; None where there is none, or none that a run could go on with."""
    try:
        state = msgspec.json.decode(path.read_bytes(), type=RunState)
    except (FileNotFoundError, msgspec.DecodeError):
        return None
    return state if state.format == _FORMAT else None


def require_same_choices(part: Path, before: Choices, now: Choices) -> None:
    """Nothing where a run may go on with what another left in `part`. Raises UsageError with what is other."""
    other = [words for name, words in _CHOICE_WORDS.items() if getattr(before, name) != getattr(now, name)]
    if other:
        are = "is" if len(other) == 1 and not other[0].endswith("kept") else "are"
        raise UsageError(
            f"the run that left {part} cannot go on: {' and '.join(other)} {are} not as it had.",
            do="Give the command as it was, or say --replace without --resume to begin anew.",
        )


_CHOICE_WORDS = {
    "program": "the program’s version",
    "model": "the model",
    "horizon": "the horizon",
    "recalibration": "the recalibration",
    "level": "the level of the band",
    "columns": "how columns are read",
    "keep": "the columns that are kept",
    "read": "how the table is written",
    "form": "the form of the output",
}
