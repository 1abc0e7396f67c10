"""Frames scored: the index kept, the same bits as a block whatever the parts and processes, nothing loaded unasked."""

import pickle
import subprocess
import sys
from typing import Any

import numpy as np
import pandas as pd
import pytest

import clinicalc
from clinicalc.errors import UsageError
from clinicalc.scoring.score_frame import score_frame
from clinicalc.scoring.score_rows import Scorer
from clinicalc.units.quantity import quantity
from tests.assessment.cases import DEMO, NOW, shipped

MODEL = shipped("tarnwick-cvd-10y-cox")
COLUMNS = ["probability", "lower", "upper", "equation", "stops", "cautions", "notes"]


def _people(size: int) -> pd.DataFrame:
    """Invented people as texts; some cells are odd."""
    draw = np.random.default_rng(7)
    frame = pd.DataFrame(
        {
            **{id: [text] * size for id, text in DEMO.items()},
            "age": [f"{age}" for age in draw.integers(35, 80, size)],
            "systolic_bp": [f"{value:.0f}" for value in draw.normal(135, 20, size)],
            "egfr": [f"{value:.0f}" for value in draw.normal(80, 15, size)],
            "smoker": draw.choice(["no", "yes"], size),
            "practice": ["Northgate"] * size,
        },
        index=pd.Index(np.arange(size) * 10 + 3, name="person"),
    )
    frame.loc[frame.index[::17], "total_cholesterol"] = None
    frame.loc[frame.index[5::41], "hdl_cholesterol"] = "1,4 mmol/L"
    return frame


def test_a_frame_keeps_its_index_and_says_what_a_block_says() -> None:
    frame = _people(200)
    scored = score_frame(MODEL, frame, at=NOW)
    block = Scorer(MODEL, at=NOW).score({id: frame[id].tolist() for id in frame.columns if id != "practice"})
    assert scored.columns.tolist() == COLUMNS
    assert scored.index.equals(frame.index)
    assert scored.probability.to_numpy().tobytes() == block.probability.tobytes()
    assert scored.upper.to_numpy().tobytes() == block.upper.tobytes()
    assert scored.stops.tolist() == block.stops.tolist()
    assert scored.cautions.tolist() == block.cautions.tolist()
    assert set(scored.equation) == {"all"}
    assert scored.stops.iloc[0] == "missing:total_cholesterol"
    assert frame.equals(_people(200))


@pytest.mark.parametrize("kind", ["int64", "Int64", "float64", "category", "string"])
def test_columns_of_numbers_and_other_kinds_give_the_same_bits(kind: str) -> None:
    frame = _people(200)
    cells: Any = frame["age"] if kind in ("category", "string") else pd.to_numeric(frame["age"])
    other = frame.assign(age=cells.astype(kind))
    pd.testing.assert_frame_equal(
        score_frame(MODEL, other, at=NOW), score_frame(MODEL, frame, at=NOW), check_exact=True
    )


def test_mixed_cells_are_not_taken_for_each_other() -> None:
    frame = _people(4).assign(smoker=pd.Series([True, 1, "yes", pd.NA], index=_people(4).index, dtype=object))
    frame["total_cholesterol"] = "5.2"
    assert score_frame(MODEL, frame, at=NOW).stops.tolist() == ["", "unknown_answer:smoker", "", "missing:smoker"]


def test_a_column_may_have_another_name_and_unit() -> None:
    frame = _people(50)
    renamed = frame.rename(columns={"systolic_bp": "SBP"})
    names = {id: id for id in frame.columns if id != "practice"} | {"systolic_bp": "SBP"}
    pd.testing.assert_frame_equal(
        score_frame(MODEL, renamed, columns=names, units={"systolic_bp": "mm[Hg]"}, at=NOW),
        score_frame(MODEL, frame, at=NOW),
    )


def test_a_frame_that_cannot_be_scored_is_refused_in_a_sentence() -> None:
    frame = _people(3)
    with pytest.raises(UsageError, match="no column of this table"):
        score_frame(MODEL, frame[["practice"]])
    with pytest.raises(UsageError, match="no column 'Age' for age"):
        score_frame(MODEL, frame, columns={"age": "Age"})
    with pytest.raises(UsageError, match="more than once"):
        score_frame(MODEL, pd.concat([frame, frame[["age"]]], axis=1))


def test_a_model_that_was_pickled_scores_the_same() -> None:
    frame = _people(300)
    sent = pickle.loads(pickle.dumps(MODEL))
    pd.testing.assert_frame_equal(sent.score(frame, at=NOW), MODEL.score(frame, at=NOW), check_exact=True)
    assert sent.by_id["age"].quantity is quantity("age")


@pytest.mark.parametrize("scheduler", ["synchronous", "threads", "processes"])
def test_parts_scored_by_dask_have_the_same_bits(scheduler: str) -> None:
    dask_frames = pytest.importorskip("dask.dataframe")
    frame = _people(500)
    whole = MODEL.score(frame, at=NOW)
    parts = dask_frames.from_pandas(frame, npartitions=3).map_partitions(MODEL.score, at=NOW, meta=whole.iloc[:0])
    scored = parts.compute(scheduler=scheduler)
    assert scored.index.equals(whole.index)
    for name in ("probability", "lower", "upper"):
        assert scored[name].to_numpy().tobytes() == whole[name].to_numpy().tobytes()
    for name in ("equation", "stops", "cautions", "notes"):
        assert scored[name].tolist() == whole[name].tolist()


def test_the_package_offers_its_verbs_and_loads_nothing_unasked() -> None:
    assert clinicalc.score_frame is score_frame
    with pytest.raises(AttributeError, match="no attribute 'guess'"):
        _ = clinicalc.guess
    code = (
        "import sys, clinicalc; assert 'numpy' not in sys.modules; clinicalc.load_model; clinicalc.score_frame;"
        "import clinicalc.scoring.score_rows; assert not {'pandas', 'scipy', 'pyarrow'} & sys.modules.keys()"
    )
    subprocess.run([sys.executable, "-c", code], check=True)
