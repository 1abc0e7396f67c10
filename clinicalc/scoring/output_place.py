"""Where a scored table may be put, asked before the first row is scored, and what stands beside it till it is whole."""

import errno
import os
from collections.abc import Iterable
from pathlib import Path

from clinicalc.errors import ClinicalcError, FileNotWritten, UsageError


def part_of(out: Path) -> Path:
    """Where the output is until it is whole."""
    return out.with_name(f"{out.name}.part")


def state_place_of(out: Path) -> Path:
    """Where it is written down how far the run is."""
    return out.with_name(f"{out.name}.part.state")


def require_free_place(out: Path, inputs: Iterable[Path], *, replace: bool, resume: bool) -> None:
    """Nothing where the output may stand at `out`. Raises UsageError with what to do instead."""
    if not out.parent.is_dir():
        raise UsageError(
            f"there is no folder {out.parent}, so nothing can be written there.", do="Make it, or name another."
        )
    part = part_of(out)
    for given in inputs:
        for place in (out, part):
            if os.path.exists(given) and os.path.exists(place) and os.path.samefile(given, place):
                raise UsageError(
                    f"{given} is read, so the scored rows cannot be written to {place}.", do="Name another output."
                )
    if out.is_dir():
        raise UsageError(f"{out} is a folder.", do="Name a file in it.")
    if os.path.lexists(out) and not replace:
        raise UsageError(
            f"{out} is there already and was left as it is.", do="Choose another name, or say --replace to replace it."
        )
    if os.path.lexists(part) and not (replace or resume):
        raise UsageError(
            f"{part} is there from a run that was stopped, or is not at its end.",
            do="Say --resume to go on with it, or --replace to begin anew.",
        )


def cannot_write(path: Path, error: OSError) -> ClinicalcError:
    """The sentence about a file that could not be written."""
    full = error.errno in (errno.ENOSPC, errno.EDQUOT)
    do = (
        "Make room and run the same command with --resume."
        if full
        else "Check that the folder may be written to, or name another."
    )
    return FileNotWritten(f"{path} could not be written ({error.strerror or type(error).__name__}).", do=do)
