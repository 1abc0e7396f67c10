"""A million rows of texts scored in blocks: seconds of core work beside what reading the same cells as floats takes.

Run with `--benchmark-only`. Nothing is asserted about time: figures are written down, a slow machine breaks nothing.
"""

import sys
from time import process_time

import numpy as np
import pytest
from pytest_benchmark.fixture import BenchmarkFixture

from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.model import Model
from clinicalc.scoring.score_rows import Scorer
from tests.assessment.cases import NOW, shipped

ROWS, BLOCK = 1_000_000, 65_536
AIM = 1.5

# mean, standard deviation, decimals: invented
_USUAL = {
    "age": (58, 8, 0),
    "total_cholesterol": (5.3, 0.7, 1),
    "hdl_cholesterol": (1.4, 0.22, 2),
    "systolic_bp": (132, 14, 0),
    "egfr": (82, 11, 0),
    "creatinine": (0.95, 0.12, 2),
}


def _cells(model: Model) -> dict[str, list[str]]:
    """Columns of texts; about one row in ten has something to be said."""
    draw = np.random.default_rng(1)
    cells: dict[str, list[str]] = {}
    for field in model.fields:
        if isinstance(field, QuestionField):
            ids = [option.id for option in field.options]
            share = 0.02 if field.excludes else 1 / len(ids)
            cells[field.id] = np.where(draw.random(ROWS) < share, ids[-1], ids[0]).tolist()
        elif field.id in _USUAL and (field.formula is None or "creatinine" not in model.by_id):
            mean, sd, decimals = _USUAL[field.id]
            factor = 38.67 if field.unit == "mg/dL" and "cholesterol" in field.id else 1.0
            values = factor * np.clip(draw.normal(mean, sd, ROWS), mean - 2.5 * sd, mean + 2.5 * sd)
            texts = np.char.mod(f"%.{0 if factor > 1 else decimals}f", values).astype(object)
            texts[draw.random(ROWS) < 0.005] = ""
            cells[field.id] = texts.tolist()
    return cells


@pytest.mark.parametrize("id", ["general-cvd-2008-lipids", "tarnwick-cvd-10y-cox", "total-cvd-2024-base"])
def test_a_million_rows(benchmark: BenchmarkFixture, capsys: pytest.CaptureFixture[str], id: str) -> None:
    model = shipped(id)
    cells = _cells(model)

    def score() -> float:
        scorer = Scorer(model, at=NOW)
        numbers = 0
        for start in range(0, ROWS, BLOCK):
            block = scorer.score({id: column[start : start + BLOCK] for id, column in cells.items()})
            numbers += int(np.isfinite(block.probability).sum())
        return numbers / ROWS

    began = process_time()
    share = benchmark.pedantic(score, rounds=1)  # type: ignore[no-untyped-call]
    took = process_time() - began
    began = process_time()
    for field in ("age", "systolic_bp"):
        np.array([float(text or "nan") for text in cells[field]])
    bare = (process_time() - began) / 2 * len(cells)
    assert share > 0.9
    benchmark.extra_info.update({"seconds": took, "floats": bare})
    with capsys.disabled():
        said = f"{len(cells)} columns in {took:.2f} s (aim {AIM}), {share:.1%} with a number"
        sys.stdout.write(f"\n{id}: {said}; Python's floats alone {bare:.2f} s\n")
