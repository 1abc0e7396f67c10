"""A table of 1,000,000 people and 12 columns read, checked and fitted in one process of at most 1.5 GB.

Run with `--benchmark-only`. Memory is asserted, since it does not hang on what else the machine does; time is written
down.
"""

import subprocess
import sys
from pathlib import Path

import numpy as np
import pytest
from pytest_benchmark.fixture import BenchmarkFixture

from tests.packaging.checkout import ROOT

MILLION = 1_000_000
MOST_MEGABYTES = 1536.0

WORK = """
import resource, sys, time
from pathlib import Path
import numpy as np
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.cohort.table import read_table
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.people_at_risk import Cohort
from tests.cohort.invented import AGE, CHOLESTEROL, COMPETING, DIABETES, HDL, SEX, SMOKING, SYSTOLIC, checked

start = time.perf_counter()
table = read_table(Path(sys.argv[1]))
read = time.perf_counter()
entries = (
    ColumnEntry("chol", predictor="total_cholesterol", unit="mmol/L"),
    ColumnEntry("hdl", predictor="hdl", unit="mmol/L"),
    ColumnEntry("sex", predictor="sex", levels=(("female", "F"), ("male", "M"))),
)
predictors = (AGE, CHOLESTEROL, HDL, SYSTOLIC, SEX, SMOKING, DIABETES)
cohort = checked(table, predictors, *entries, outcome=COMPETING, person="person")
assert cohort.stops == (), cohort.stops
check = time.perf_counter()
whole = np.isfinite(cohort.columns["total_cholesterol"])
x = np.column_stack([column[whole] for column in cohort.columns.values()])
events = np.where(cohort.outcome.status[whole] == 1.0, 1.0, 0.0)
fit = fit_cox(Cohort(cohort.outcome.times[whole], events, x))
assert fit.people == whole.sum() and np.isfinite(fit.coefficients).all()
end = time.perf_counter()
print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024, read - start, check - read, end - check)
"""


def write_people(path: Path) -> None:
    """A million invented people, one in seventeen of them without cholesterol."""
    draw = np.random.default_rng(20261201)
    columns = [
        np.char.add("P", np.arange(MILLION).astype(str)),
        draw.integers(30, 80, MILLION),
        draw.choice(["F", "M"], MILLION),
        np.where(np.arange(MILLION) % 17 == 0, "NA", draw.normal(5.5, 1, MILLION).clip(2.6, 10).round(2).astype(str)),
        draw.normal(1.3, 0.3, MILLION).clip(0.6, 2).round(2),
        draw.normal(135, 18, MILLION).clip(80, 220).round(1),
        draw.choice(["never", "former", "current"], MILLION),
        draw.integers(0, 2, MILLION),
        draw.normal(27, 4, MILLION).clip(15, 60).round(3),
        draw.normal(85, 15, MILLION).clip(15, 150).round(4),
        draw.exponential(4000, MILLION).clip(1, 3650).round(3),
        draw.integers(0, 3, MILLION),
    ]
    names = "person,age,sex,chol,hdl,systolic_bp,smoking,diabetes,bmi,egfr,days,status"
    with path.open("w", encoding="utf-8") as file:
        file.write(f"{names}\n")
        file.writelines(",".join(row) + "\n" for row in zip(*(map(str, column) for column in columns), strict=True))


def test_a_million_people_in_one_and_a_half_gigabytes(
    benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str], tmp_path: Path
) -> None:
    path = tmp_path / "people.csv"
    write_people(path)

    def work() -> list[float]:
        call = [sys.executable, "-c", WORK, str(path)]
        done = subprocess.run(call, cwd=ROOT, capture_output=True, text=True, check=False)
        assert done.returncode == 0, done.stderr
        return [float(figure) for figure in done.stdout.split()]

    megabytes, read, check, fit = benchmark.pedantic(work, rounds=1)  # type: ignore[no-untyped-call]
    benchmark.extra_info |= {"megabytes": megabytes, "read": read, "check": check, "fit": fit}
    with capsys.disabled():
        sys.stdout.write(f"\n{megabytes:.0f} MB; read {read:.1f} s, checked {check:.1f} s, fitted {fit:.1f} s\n")
    assert megabytes <= MOST_MEGABYTES
