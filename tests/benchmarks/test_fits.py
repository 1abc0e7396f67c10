"""Own proportional hazards fit against statsmodels' PHReg on 50,000 people in the same run; memory for a million.

Run with `--benchmark-only`. Nothing is asserted about time: the ratio is written down, a slow machine breaks nothing.
"""

import subprocess
import sys
from collections.abc import Callable
from statistics import median
from time import perf_counter

import numpy as np
import pytest
from pytest_benchmark.fixture import BenchmarkFixture
from statsmodels.duration.hazard_regression import PHReg
from threadpoolctl import threadpool_limits  # type: ignore[import-untyped]

from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.hazard_sums import Cohort

PEOPLE = 50_000
COLUMNS = 10
AIM = 5.0
"""Times faster than PHReg."""

MILLION = """
import resource, numpy as np
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.cox_residuals import robust_covariance
from clinicalc.estimation.hazard_sums import Cohort, Ties, sum_hazards
from clinicalc.estimation.logistic import Link, fit_logistic
from tests.benchmarks.test_fits import invent_people
cohort = invent_people(1_000_000)
before = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
fit = fit_cox(cohort)
sum_hazards(cohort, fit.coefficients, [0.2], Ties.EFRON)
robust_covariance(cohort, fit, Ties.EFRON)
for link in Link:
    fit_logistic(cohort.events, cohort.x, link=link)
print(before // 1024, resource.getrusage(resource.RUSAGE_SELF).ru_maxrss // 1024)
"""


def invent_people(people: int) -> Cohort:
    """Continuous times without ties, three in ten with the event."""
    rng = np.random.default_rng(5)
    x = rng.normal(size=(people, COLUMNS))
    times = rng.exponential(size=people) * np.exp(-(x * np.linspace(-0.5, 0.5, COLUMNS)).sum(axis=1))
    ends = rng.exponential(size=people) * 0.35
    return Cohort(np.minimum(times, ends), (times <= ends) * 1.0, x)


def _seconds(deed: Callable[[], object]) -> float:
    began = perf_counter()
    deed()
    return perf_counter() - began


def test_fifty_thousand_people_against_phreg(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str]) -> None:
    cohort = invent_people(PEOPLE)
    with threadpool_limits(limits=1):
        results = PHReg(cohort.times, cohort.x, status=cohort.events, ties="efron").fit()
        other = _seconds(lambda: PHReg(cohort.times, cohort.x, status=cohort.events, ties="efron").fit())
        fit = fit_cox(cohort)
        own = median(_seconds(lambda: fit_cox(cohort)) for _ in range(5))
        benchmark.pedantic(fit_cox, args=(cohort,), rounds=3)  # type: ignore[no-untyped-call]
    assert fit.coefficients == pytest.approx(results.params, rel=1e-8)
    assert np.sqrt(np.diag(fit.covariance)) == pytest.approx(results.bse, rel=1e-8)
    benchmark.extra_info |= {"phreg_seconds": other, "own_seconds": own, "times_faster": other / own, "aim": AIM}
    with capsys.disabled():
        sys.stdout.write(f"\nPHReg {other:.2f} s, own {own:.3f} s: {other / own:.0f} times faster, aim {AIM:g}\n")


def test_a_million_people_stay_within_memory(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str]) -> None:
    """In a process of its own, whose highest use is then that of the fits."""

    def run() -> str:
        return subprocess.run([sys.executable, "-c", MILLION], capture_output=True, text=True, check=True).stdout

    before, after = (int(each) for each in benchmark.pedantic(run, rounds=1).split())  # type: ignore[no-untyped-call]
    benchmark.extra_info |= {"before_megabytes": before, "highest_megabytes": after}
    with capsys.disabled():
        sys.stdout.write(f"\na million people: {before} MB before, {after} MB at the highest\n")
    assert after < 1500
