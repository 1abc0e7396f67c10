"""Starts the window when called without words, the command line otherwise."""

from __future__ import annotations

import gc
import os
import sys
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from clinicalc.operations.demonstration import DemoCase

# Tall thin matrices gain nothing from a second BLAS thread, and two made the same fits several times slower;
# must stand before numpy is loaded.
for _name in ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS"):
    os.environ.setdefault(_name, "1")


def main() -> None:
    """Entry point of the command `clinicalc`; leaves the process with the command's exit status."""
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(encoding="utf-8", errors="backslashreplace")
    words = sys.argv[1:]
    try:
        status = _run_command(words) if words else _open_window()
    except ImportError as error:
        # a damaged installation; no room could be loaded that would say so more kindly
        sys.stderr.write(f"clinicalc: a part of the program could not be loaded ({error}). Install it again.\n")
        status = 5
    sys.exit(status)


def _run_command(words: list[str]) -> int:
    from clinicalc.cli.commands import run_command

    def open_window(case: DemoCase) -> int:
        from clinicalc.gui.preflight import has_screen

        return _open_window(case) if has_screen() else 0

    return run_command(words, open_window)


def _open_window(case: DemoCase | None = None) -> int:
    gc.disable()  # until the window is shown, nothing is made that could be garbage
    # before Qt: its import hook makes every module that is loaded after it dearer
    import clinicalc.operations.bedside
    import clinicalc.operations.documents
    import clinicalc.operations.summary
    import clinicalc.report.ruler  # noqa: F401
    from clinicalc.gui.preflight import check_platform

    trouble = check_platform()
    if trouble is not None:
        sys.stderr.write(f"{trouble}\n")
        return 5
    from clinicalc.gui.application import run_window

    return run_window() if case is None else run_window(case.model, case.entry)


if __name__ == "__main__":
    main()
