"""Refits on bootstrap samples against statsmodels in the same run, with one process and with two.

Run with `--benchmark-only`. Nothing is asserted about time: the ratios are written down, a slow machine breaks nothing.
Of statsmodels fewer refits are timed and counted up. "Refits" are the coefficients alone; "whole" is the bootstrap with
C, slope, intercept and Brier score among those drawn and among all.
"""

import sys
from collections.abc import Callable
from time import perf_counter

import numpy as np
import pytest
from numpy.typing import NDArray
from pytest_benchmark.fixture import BenchmarkFixture
from statsmodels.discrete.discrete_model import Logit
from statsmodels.duration.hazard_regression import PHReg

from clinicalc.estimation.bootstrap_hazards import ready_hazards
from clinicalc.estimation.bootstrap_risks import RiskPeople, ready_risks
from clinicalc.estimation.cox import fit_cox
from clinicalc.estimation.drawing import draw_counts, repeat_rows
from clinicalc.estimation.hazard_sums import Cohort, Ties
from clinicalc.estimation.logistic import Link, fit_logistic
from clinicalc.estimation.optimism import Bootstrap, Repeated
from clinicalc.estimation.optimism_hazards import RepeatedHazards
from clinicalc.estimation.optimism_risks import RepeatedRisks
from clinicalc.estimation.second_process import one_thread, work_out

Array = NDArray[np.float64]

REPLICATES = 500
COLUMNS = 10
AT_ONCE = 50
LOGIT_AIM, COX_AIM = 10.0, 8.0


def _seconds(deed: Callable[[], object]) -> float:
    began = perf_counter()
    deed()
    return perf_counter() - began


def _best(deed: Callable[[], object], times: int = 3) -> float:
    return min(_seconds(deed) for _ in range(times))


def _time_whole(repeated: Repeated, *, second: bool) -> float:
    bootstrap = Bootstrap((repeated,), REPLICATES, 1)
    return _best(lambda: work_out(bootstrap, lambda done: None, second=second), 2)


def _write(
    benchmark: BenchmarkFixture,
    capsys: pytest.CaptureFixture[str],
    other: float,
    own: float,
    repeated: Repeated,
    aim: float,
) -> None:
    one, two = _time_whole(repeated, second=False), _time_whole(repeated, second=True)
    figures = {"statsmodels": other, "refits": own, "whole_one_process": one, "whole_two_processes": two}
    benchmark.extra_info |= {f"{name}_seconds": value for name, value in figures.items()}
    benchmark.extra_info |= {"times_faster": other / own, "whole_times_faster": other / two, "aim": aim}
    with capsys.disabled():
        sys.stdout.write(
            f"\n{REPLICATES} refits: statsmodels {other:.1f} s, own {own:.2f} s: {other / own:.1f} times faster, aim "
            f"{aim:g}; whole bootstrap {one:.2f} s with one process ({other / one:.1f} times), {two:.2f} s with two "
            f"({other / two:.1f} times)\n"
        )


def test_five_hundred_logistic_refits(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str]) -> None:
    rng = np.random.default_rng(3)
    x = rng.normal(size=(10_000, COLUMNS))
    eta = -1.5 + (x * np.linspace(-0.5, 0.5, COLUMNS)).sum(axis=1)
    y = (rng.random(len(x)) < 1 / (1 + np.exp(-eta))).astype(np.float64)
    people = RiskPeople(y, x, Link.LOGIT)
    fit = fit_logistic(y, x)
    design = np.column_stack([np.ones(len(y)), x])

    def refit_by_statsmodels(number: int) -> Array:
        rows = repeat_rows(draw_counts(len(y), 1, number))
        return np.asarray(Logit(y[rows], design[rows]).fit(disp=0).params)

    def refit_all() -> None:
        ready = ready_risks(people, fit.coefficients)
        for begin in range(0, REPLICATES, AT_ONCE):
            ready.refit(np.array([draw_counts(len(y), 1, number) for number in range(begin, begin + AT_ONCE)]))

    with one_thread():
        other = _seconds(lambda: [refit_by_statsmodels(number) for number in range(100)]) * REPLICATES / 100
        own = _best(refit_all)
        benchmark.pedantic(refit_all, rounds=1)  # type: ignore[no-untyped-call]
        (found,) = ready_risks(people, fit.coefficients).refit(draw_counts(len(y), 1, 7)[None])
    assert found == pytest.approx(refit_by_statsmodels(7), rel=1e-7)
    _write(benchmark, capsys, other, own, RepeatedRisks(people, fit.coefficients), LOGIT_AIM)


def test_five_hundred_cox_refits(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str]) -> None:
    rng = np.random.default_rng(3)
    x = rng.normal(size=(5_000, COLUMNS))
    times = rng.exponential(size=len(x)) * np.exp(-(x * np.linspace(-0.5, 0.5, COLUMNS)).sum(axis=1))
    ends = rng.exponential(size=len(x)) * 0.18
    cohort = Cohort(np.minimum(times, ends), (times <= ends).astype(np.float64), x)
    fit = fit_cox(cohort)

    def refit_by_statsmodels(number: int) -> Array:
        rows = repeat_rows(draw_counts(len(x), 1, number))
        model = PHReg(cohort.times[rows], x[rows], status=cohort.events[rows], ties="efron")
        return np.asarray(model.fit().params)

    def refit_all() -> None:
        ready = ready_hazards(cohort, fit.coefficients, Ties.EFRON, None)
        for number in range(REPLICATES):
            ready.refit(draw_counts(len(x), 1, number))

    with one_thread():
        other = _seconds(lambda: [refit_by_statsmodels(number) for number in range(5)]) * REPLICATES / 5
        own = _best(refit_all)
        benchmark.pedantic(refit_all, rounds=1)  # type: ignore[no-untyped-call]
        found = ready_hazards(cohort, fit.coefficients, Ties.EFRON, None).refit(draw_counts(len(x), 1, 7))
    assert 0.15 < cohort.events.mean() < 0.25
    assert found == pytest.approx(refit_by_statsmodels(7), rel=1e-7)
    _write(benchmark, capsys, other, own, RepeatedHazards(cohort, fit.coefficients, Ties.EFRON, 0.2), COX_AIM)
