"""Calling the command line in this process, as its entry point does."""

import io
import json
from contextlib import redirect_stderr, redirect_stdout
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from clinicalc.cli.commands import run_command
from clinicalc.operations.demonstration import DemoCase
from clinicalc.resources import find_shipped


@dataclass(frozen=True, slots=True)
class Ended:
    """How a call ended."""

    status: int
    out: str
    err: str

    @property
    def record(self) -> Any:
        """Standard output read as the JSON object it must be."""
        return json.loads(self.out)


def call(*words: str, windows: list[DemoCase] | None = None) -> Ended:
    """Run one command; `windows` collects the cases for which a window was asked."""
    out, err = io.StringIO(), io.StringIO()

    def open_window(case: DemoCase) -> int:
        if windows is not None:
            windows.append(case)
        return 0

    with redirect_stdout(out), redirect_stderr(err):
        status = run_command(words, open_window)
    return Ended(int(status), out.getvalue(), err.getvalue())


def example(id: str) -> str:
    """The path of a shipped coefficient file."""
    return str(Path(str(find_shipped(f"example_models/{id}.json"))))


WOMAN_61 = (
    "sex=female",
    "age=61",
    "total_cholesterol=180 mg/dL",
    "hdl_cholesterol=47 mg/dL",
    "systolic_bp=124",
    "bp_treated=no",
    "smoker=yes",
    "diabetes=no",
    "prior_cvd=no",
)
LIPIDS = example("general-cvd-2008-lipids")
