"""A comparison with the band of its difference, and the decision points: what they add to a key in a value field.

Run with `--benchmark-only`. Nothing is asserted about time.
"""

from pytest_benchmark.fixture import BenchmarkFixture

from clinicalc.assessment.comparison import compare
from clinicalc.assessment.decision import place_points, points_for
from clinicalc.assessment.entry import Typed
from tests.assessment.cases import DEMO, NOW, shipped
from tests.assessment.whole_case import case_of

TARNWICK = "tarnwick-cvd-10y"
AIM = 0.001
"""Seconds for a comparison."""


def test_a_comparison(benchmark: BenchmarkFixture) -> None:
    case = case_of(shipped(TARNWICK), DEMO)
    changes = {"smoker": Typed("no"), "systolic_bp": Typed("128")}
    found, _ = benchmark(lambda: compare(case, changes, NOW.date()))
    assert found is not None
    assert found.difference_upper is not None
    benchmark.extra_info["aim in seconds"] = AIM


def test_the_decision_points(benchmark: BenchmarkFixture) -> None:
    case = case_of(shipped(TARNWICK), DEMO)
    points = points_for(case.model, case.line.span)
    placed = benchmark(lambda: place_points(case, -2.0, (0.09, 0.16), points))
    assert placed[0].confidence is not None
