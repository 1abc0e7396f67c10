"""Scored rows as Parquet: batches in the part, which a killed run can go on with, and the file made of them."""

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.parquet as pq

from clinicalc.scoring.output_forms import RESULT_NAMES
from clinicalc.scoring.row_blocks import RowBlock
from clinicalc.scoring.scored import ScoredBlock

_NUMBERS = RESULT_NAMES[:3]


class ParquetForm:
    """Kept columns in their own type, numbers as doubles (null where there is none), the rest as texts.

    A Parquet file cannot be continued; the part is a stream of Arrow batches, one of each block of rows, and each of
    them becomes a row group, so that the bytes do not depend on where a run was stopped.
    """

    def __init__(self, keep: Mapping[str, pa.DataType | None]) -> None:
        kept = [(name, pa.string() if kind is None else kind) for name, kind in keep.items()]
        results = [(name, pa.float64() if name in _NUMBERS else pa.string()) for name in RESULT_NAMES]
        self._schema = pa.schema([*kept, *results])

    @property
    def head(self) -> bytes:
        """The schema of the stream."""
        return bytes(self._schema.serialize())

    def write(self, block: RowBlock, scored: ScoredBlock) -> bytes:
        """The rows of a block as one batch."""
        if not block.rows:
            return b""
        kept: list[Any] = [pa.array(one.texts, pa.string()) if one.arrow is None else one.arrow for one in block.kept]
        numbers = [
            pa.array(column, pa.float64(), mask=np.isnan(column))
            for column in (scored.probability, scored.lower, scored.upper)
        ]
        said = [
            pa.array(texts, pa.string()) for texts in (scored.equation_ids, scored.stops, scored.cautions, scored.notes)
        ]
        batch = pa.RecordBatch.from_arrays([*kept, *numbers, *said], schema=self._schema)
        return bytes(batch.serialize())

    def make(self, part: Path) -> Path:
        """The Parquet file beside the part."""
        made = part.with_name(f"{part.name}.parquet")
        with (
            part.open("rb") as file,
            pa.ipc.open_stream(file) as stream,
            pq.ParquetWriter(made, self._schema, compression="zstd") as writer,
        ):
            for batch in stream:
                writer.write_batch(batch)
        return made
