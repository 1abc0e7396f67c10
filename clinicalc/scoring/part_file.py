"""A long output on its way: OUT.part, and beside it a state file from which a run that was killed goes on.

The state says how far the table was read, how much was written, with digests of both, and what was chosen. What stands
in the part beyond that is cut off before the run goes on, so that the bytes are those of a run that nobody stopped. A
run holds its part alone; that ends with its process, in whatever way.
"""

import hashlib
import os
import sys
from contextlib import suppress
from dataclasses import dataclass
from pathlib import Path
from time import monotonic
from typing import BinaryIO

from clinicalc.errors import UsageError
from clinicalc.replacement import OWNER_ONLY, give_free_name, hold_alone
from clinicalc.scoring.output_place import cannot_write, part_of, state_place_of
from clinicalc.scoring.row_blocks import Place
from clinicalc.scoring.run_state import Choices, RunState, read_state, require_same_choices, state_of, write_state
from clinicalc.scoring.tally import Tally

_EVERY = 0.5
"""Seconds between two states: so much work is lost at most where the run is killed."""
_PIECE = 1 << 20


@dataclass(frozen=True, slots=True)
class _Done:
    """The table read, the rows counted and the bytes written, all up to the end of the same block."""

    place: Place
    tally: Tally
    written: int
    digest: str


class PartFile:
    """The part of one output. Whatever goes wrong, nothing half-written has the output's name."""

    def __init__(self, out: Path, choices: Choices, at: str) -> None:
        self.out, self.path, self.state_path = out, part_of(out), state_place_of(out)
        self.choices, self.at = choices, at
        """`at`: the moment as of which rows are scored, in ISO form; that of the first run where one goes on."""
        self.is_in_place = False
        """Whether the output stands under its name."""
        self._done: _Done | None = None
        self._file: BinaryIO | None = None
        self._digest = hashlib.sha256()
        self._written = 0
        self._saved = monotonic()

    @property
    def place(self) -> Place | None:
        """How far the table was read for what is written; None before the first block."""
        return None if self._done is None else self._done.place

    @property
    def tally(self) -> Tally:
        """What was counted of the rows that are written."""
        return Tally() if self._done is None else self._done.tally

    def begin(self, head: bytes) -> None:
        """Begin anew with these bytes; a part of an earlier run is let go.

        Raises FileNotWritten, and UsageError where another run is writing it.
        """
        try:
            self._hold(os.O_CREAT)
            self._empty()
            with suppress(FileNotFoundError):
                self.state_path.unlink()
            self._write(head)
        except OSError as error:
            raise cannot_write(self.path, error) from error

    def go_on(self) -> bool:
        """Go on where an earlier run stopped; False where it left nothing to go on with.

        Raises UsageError where that run had another model or other choices, its part is not what it wrote, or it is
        still writing.
        """
        if not self.path.is_file():
            return False
        try:
            self._hold(0)
            state = read_state(self.state_path)
            if state is None:
                self.close()
                return False
            require_same_choices(self.path, state.choices, self.choices)
            self._take_up(state)
        except OSError as error:
            raise cannot_write(self.path, error) from error
        except UsageError:
            self.close()
            raise
        self.at, self._written = state.at, state.written
        self._done = _Done(state.place, state.tally, state.written, state.written_digest)
        return True

    def add(self, data: bytes, place: Place, tally: Tally) -> None:
        """Write the bytes of a block; from then on a run may go on behind it. Raises FileNotWritten."""
        try:
            self._write(data)
        except OSError as error:
            raise cannot_write(self.path, error) from error
        # one step: whoever stops the run finds what belongs together
        self._done = _Done(place, tally, self._written, self._digest.hexdigest())
        if monotonic() - self._saved > _EVERY:
            self.save()

    def save(self) -> None:
        """Write down how far the run is."""
        assert self._file is not None
        done = self._done
        if done is None:
            return
        try:
            if not self._file.closed:
                self._file.flush()
            write_state(
                self.state_path, state_of(self.choices, self.at, done.place, done.tally, done.written, done.digest)
            )
        except OSError as error:
            raise cannot_write(self.state_path, error) from error
        self._saved = monotonic()

    def finish(self, *, replace: bool, made: Path | None = None) -> None:
        """Put the output in place: the part itself, or the file `made` from it. Raises FileNotWritten."""
        assert self._file is not None
        source = self.path if made is None else made
        try:
            self._file.flush()
            os.fsync(self._file.fileno())
            if sys.platform == "win32":  # what is open gets no other name there; elsewhere it is held to the end
                self.close()
            (os.replace if replace else give_free_name)(source, self.out)
        except FileExistsError as error:
            raise UsageError(
                f"{self.out} came to be while rows were scored, and was left as it is.",
                do=f"The new rows are in {source}. Say --replace beside --resume to put them in its place.",
            ) from error
        except OSError as error:
            raise cannot_write(self.out, error) from error
        self.is_in_place = True
        for left in (self.state_path,) if made is None else (self.state_path, self.path):
            with suppress(OSError):
                left.unlink(missing_ok=True)

    def keep(self) -> None:
        """Leave what another run can go on with, or nothing where no block was written."""
        if self._done is not None:
            self.save()
            return
        if sys.platform == "win32":
            self.close()
        with suppress(OSError):
            self.path.unlink(missing_ok=True)
        self.close()

    def close(self) -> None:
        """Let the file go, as it is."""
        if self._file is not None:
            with suppress(OSError):  # what could not be written was said when it was to be flushed
                self._file.close()

    def _hold(self, more: int) -> None:
        """Open the part for this run alone. Raises UsageError where another run has it, and OSError."""
        handle = os.open(self.path, os.O_RDWR | getattr(os, "O_BINARY", 0) | more, OWNER_ONLY)
        self._file = os.fdopen(handle, "r+b")
        try:
            alone = hold_alone(handle)
        except OSError:  # a disk without locks: nobody can be told
            return
        # one that has just ended has given the file another name
        if not (alone and os.path.exists(self.path) and os.path.samestat(os.fstat(handle), os.stat(self.path))):
            self.close()
            raise UsageError(
                f"another run is writing {self.out}.",
                do="Let it come to its end, or stop it; or name another output.",
            )

    def _empty(self) -> None:
        assert self._file is not None
        if os.fstat(self._file.fileno()).st_size:
            self._file.truncate(0)

    def _write(self, data: bytes) -> None:
        assert self._file is not None
        self._file.write(data)
        self._digest.update(data)
        self._written += len(data)

    def _take_up(self, state: RunState) -> None:
        """Stand behind what was written, when it is still what it was."""
        assert self._file is not None
        left = state.written
        while left:
            piece = self._file.read(min(left, _PIECE))
            if not piece:
                break
            self._digest.update(piece)
            left -= len(piece)
        if left or self._digest.hexdigest() != state.written_digest:
            raise UsageError(
                f"{self.path} is not what the stopped run wrote.",
                do="Say --replace without --resume to begin anew.",
            )
        self._file.truncate(state.written)
        self._file.seek(state.written)
