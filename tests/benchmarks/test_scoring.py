"""A million rows scored by the whole command, from CSV to CSV, against pandas reading and writing the same columns.

Run with `--benchmark-only`. Nothing is asserted about time: the ratio is written down, a slow machine breaks nothing.
Memory is the largest that the process had, with a table and with one of four times as many rows.
"""

import subprocess
import sys
from pathlib import Path
from statistics import median
from time import perf_counter

import pandas as pd
import pytest
from pytest_benchmark.fixture import BenchmarkFixture

from tests.cli.calling import example
from tests.scoring.tables import invent_rows, write_rows

MILLION = 1_000_000
ROUNDS = 3
AIM = 1.3
"""Times what pandas takes to read the table and to write the kept column and the seven new ones."""
MEMORY_AIM = 1.1


_ALONE = """
import resource, subprocess, sys
subprocess.run(sys.argv[1:], stdout=subprocess.DEVNULL, check=True)
print(resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss)
"""
"""A small process between this one and the command: a child counts what its parent held when it was forked."""


def score(table: Path, out: Path) -> tuple[float, float]:
    """Seconds of the whole command, its start included, and its largest memory in megabytes."""
    model = example("tarnwick-cvd-10y-cox")
    command = [sys.executable, "-m", "clinicalc", "score", model, str(table), "-o", str(out), "--replace"]
    began = perf_counter()
    run = subprocess.run([sys.executable, "-c", _ALONE, *command], capture_output=True, text=True, check=True)
    return perf_counter() - began, int(run.stdout) / 1024


def read_and_write(table: Path, scored: pd.DataFrame, out: Path) -> float:
    """Seconds of pandas for reading the table and writing the scored columns."""
    began = perf_counter()
    pd.read_csv(table)
    scored.to_csv(out, index=False)
    return perf_counter() - began


@pytest.mark.skipif(sys.platform != "linux", reason="memory is told in other units, or not at all")
def test_a_million_rows(tmp_path: Path, benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str]) -> None:
    table, long, out = tmp_path / "people.csv", tmp_path / "long.csv", tmp_path / "scored.csv"
    head, rows = write_rows(table, invent_rows(MILLION)).read_bytes().split(b"\n", 1)
    with long.open("wb") as file:
        file.write(head + b"\n")
        for _ in range(4):
            file.write(rows)
    _, large = score(long, out)
    score(table, out)
    scored = pd.read_csv(out, float_precision="round_trip")
    # turn about, so that a busy spell of the machine hits both
    pairs = [(read_and_write(table, scored, tmp_path / "pandas.csv"), score(table, out)) for _ in range(ROUNDS)]
    plain, own = median(pair[0] for pair in pairs), median(pair[1][0] for pair in pairs)
    small = median(pair[1][1] for pair in pairs)
    benchmark.extra_info |= {
        "pandas_seconds": plain,
        "command_seconds": own,
        "ratio": own / plain,
        "aim": AIM,
        "megabytes_one_million": small,
        "megabytes_four_million": large,
        "memory_ratio": large / small,
        "memory_aim": MEMORY_AIM,
    }
    with capsys.disabled():
        sys.stdout.write(
            f"\n{MILLION} rows, CSV to CSV: pandas reads and writes in {plain:.2f} s, the whole command scores in"
            f" {own:.2f} s: {own / plain:.2f} times, aim {AIM:g}; memory {small:.0f} MB, with four million rows"
            f" {large:.0f} MB: {large / small:.2f} times, aim {MEMORY_AIM:g}\n"
        )
    benchmark.pedantic(score, (table, out), rounds=1)  # type: ignore[no-untyped-call]
