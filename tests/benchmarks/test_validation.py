"""All measures of a hundred thousand people against the concordance of lifelines alone, on the same data in one run.

Run with `--benchmark-only`. Nothing is asserted about time: the ratios are written down, a slow machine breaks nothing.
"""

import sys
from collections.abc import Callable
from statistics import median
from time import process_time

import numpy as np
import pytest
from lifelines.utils import concordance_index
from pytest_benchmark.fixture import BenchmarkFixture
from threadpoolctl import threadpool_limits  # type: ignore[import-untyped]

from clinicalc.validation.measuring import measure_horizon
from clinicalc.validation.predicted import FlagPoint, Outcome, PredictedPeople, YesNo
from tests.validation.people import YEAR, answered, competed, watched

PEOPLE = 100_000
ROUNDS = 7
AIM = 1.0
"""Times the concordance alone: what all measures with their limits may take."""
POINTS = (FlagPoint(0.1), FlagPoint(0.2))


def _seconds(deed: Callable[[], object]) -> float:
    """Of the processor, so that other work on the machine does not count; one thread is used by either."""
    began = process_time()
    deed()
    return process_time() - began


def make(kind: str) -> tuple[PredictedPeople, Outcome]:
    """Invented people."""
    if kind == "answered":
        return answered(PEOPLE, 5)
    return watched(PEOPLE, 5) if kind == "watched" else competed(PEOPLE, 5)


@pytest.mark.parametrize("kind", ["watched", "competed", "answered"])
def test_all_measures_against_one_concordance(
    kind: str, benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str]
) -> None:
    predicted, outcome = make(kind)
    span = None if isinstance(outcome, YesNo) else YEAR
    times = 1.0 - outcome.y if isinstance(outcome, YesNo) else outcome.times
    events = outcome.y if isinstance(outcome, YesNo) else (outcome.status == 1) * 1.0
    if not isinstance(outcome, YesNo):
        times = np.where(outcome.status == 2, times.max() + 1.0, times)

    def other() -> float:
        return float(concordance_index(times, -predicted.probability, events))

    def own() -> object:
        return measure_horizon(predicted, outcome, span, POINTS)

    with threadpool_limits(limits=1):
        found = measure_horizon(predicted, outcome, span, POINTS)
        assert found.c.value == pytest.approx(other(), abs=1e-12)
        pairs = [(_seconds(own), _seconds(other)) for _ in range(ROUNDS)]
        benchmark.pedantic(own, rounds=1)  # type: ignore[no-untyped-call]
    mine, theirs = (median(each) for each in zip(*pairs, strict=True))
    ratio = median(one / two for one, two in pairs)
    benchmark.extra_info |= {"own_seconds": mine, "concordance_index_seconds": theirs, "ratio": ratio, "aim": AIM}
    with capsys.disabled():
        said = f"all measures {mine:.2f} s, concordance_index alone {theirs:.2f} s: ratio {ratio:.2f}, aim {AIM:g}"
        sys.stdout.write(f"\n{kind}: {said}\n")
