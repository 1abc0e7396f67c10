"""Parquet tables as blocks of rows: in memory that does not grow with them, and only from where they stopped."""

import gc
from pathlib import Path

import numpy as np
import pyarrow as pa
import pyarrow.parquet as pq
import pytest

from clinicalc.errors import TableRefused, UsageError
from clinicalc.scoring.parquet_rows import ParquetRows
from clinicalc.scoring.row_blocks import Wanted
from clinicalc.scoring.scored import CodedTexts

WANTED = Wanted({"a": "a"}, ("a",))
ROWS, GROUPS = 50_000, 12


def write(path: Path, seed: int = 1) -> Path:
    """Numbers that no compression makes smaller, in many groups of rows."""
    draw = np.random.default_rng(seed)
    with pq.ParquetWriter(path, pa.schema([("a", pa.float64())])) as writer:
        for _ in range(GROUPS):
            writer.write_table(pa.table({"a": draw.random(ROWS)}))
    return path


def test_what_was_read_of_a_table_does_not_stay_in_memory(tmp_path: Path) -> None:
    path = write(tmp_path / "t.parquet")
    gc.collect()
    before, held = pa.total_allocated_bytes(), []
    for block in ParquetRows(path, 10_000).blocks(WANTED):
        held.append(pa.total_allocated_bytes() - before)
        assert block.rows == 10_000
    assert len(held) == ROWS * GROUPS // 10_000
    # some groups of rows, and never the table
    assert max(held) < path.stat().st_size / 2


def test_a_table_is_read_on_from_a_place_and_not_when_it_is_another(tmp_path: Path) -> None:
    path = write(tmp_path / "t.parquet")
    blocks = list(ParquetRows(path, 60_000).blocks(WANTED))
    rest = list(ParquetRows(path, 60_000).blocks(WANTED, blocks[3].after))
    assert [one.after for one in rest] == [one.after for one in blocks[4:]]
    for one, other in zip(rest, blocks[4:], strict=True):
        assert one.kept[0].arrow == other.kept[0].arrow
    write(path, seed=2)
    with pytest.raises(UsageError, match="is not what it was"):
        next(ParquetRows(path, 60_000).blocks(WANTED, blocks[3].after))


def test_cells_are_the_texts_that_would_be_typed(tmp_path: Path) -> None:
    pq.write_table(pa.table({"a": pa.array([5.2, None, 5.0], pa.float32())}), tmp_path / "t.parquet")
    (block,) = ParquetRows(tmp_path / "t.parquet").blocks(WANTED)
    cells = block.cells["a"]
    assert isinstance(cells, CodedTexts)
    assert [cells.distinct[place] for place in cells.at] == ["5.2", "", "5"]


def test_what_is_no_parquet_file_is_refused(tmp_path: Path) -> None:
    (tmp_path / "t.parquet").write_bytes(b"a,b\n1,2\n")
    with pytest.raises(TableRefused, match="cannot be read as what its name says"):
        ParquetRows(tmp_path / "t.parquet")
