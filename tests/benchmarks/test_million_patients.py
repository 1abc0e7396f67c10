"""A million patients with band, from prebuilt design columns, against the bare formula without a band.

Run with `--benchmark-only`. Nothing is asserted about time: the ratio is written down, a slow machine breaks nothing.
"""

import sys
from collections.abc import Callable, Iterator
from statistics import median
from time import perf_counter

import numpy as np
import pytest
from pytest_benchmark.fixture import BenchmarkFixture
from threadpoolctl import threadpool_limits  # type: ignore[import-untyped]

from clinicalc.prediction.predict import predict
from tests.prediction.invented import Array, invent_columns, invent_line, invent_precision

MILLION = 1_000_000
TERMS = 12
ROUNDS = 9
AIM = 11.0
"""Times the bare formula: what column-wise sums, the price of the same bits for one and for a million, may cost."""


@pytest.fixture
def one_thread() -> Iterator[None]:
    """The linear algebra library on one thread: a second makes the bare formula erratic."""
    with threadpool_limits(limits=1):
        yield


def seconds(work: Callable[[], object]) -> float:
    """How long one call takes."""
    start = perf_counter()
    work()
    return perf_counter() - start


@pytest.mark.usefixtures("one_thread")
def test_million_patients_with_band(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str]) -> None:
    columns = invent_columns(MILLION, TERMS)
    line = invent_line("logit", TERMS, invent_precision(TERMS))
    x, b, b0 = np.column_stack(columns), np.array(line.coefficients), line.lp0

    def bare() -> Array:
        return np.asarray(1 / (1 + np.exp(-(b0 + x @ b))))

    bare()
    result = predict(line, columns)
    assert np.allclose(result.probability, bare(), rtol=1e-12, atol=0)
    # turn about, so that a busy spell of the machine hits both
    pairs = [(seconds(bare), seconds(lambda: predict(line, columns))) for _ in range(ROUNDS)]
    plain, full = median(pair[0] for pair in pairs), median(pair[1] for pair in pairs)
    benchmark.extra_info |= {
        "bare_seconds": plain,
        "ratio": full / plain,
        "ratio_of_fastest": min(pair[1] for pair in pairs) / min(pair[0] for pair in pairs),
        "aim": AIM,
    }
    with capsys.disabled():
        sys.stdout.write(
            f"\n{MILLION} patients with band: {full:.3f} s, {full / plain:.1f} times the bare formula"
            f" ({plain:.4f} s); the aim is {AIM:g} times or less\n"
        )
    benchmark(predict, line, columns)
