"""A Parquet file as blocks of rows; its numbers are read as the shortest decimals that they are."""

import hashlib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import numpy as np
import pyarrow as pa
import pyarrow.parquet as pq

from clinicalc.cohort.delimited import settle_names
from clinicalc.errors import Problem, TableRefused
from clinicalc.scoring.cell_texts import text_of
from clinicalc.scoring.row_blocks import KeptColumn, Place, RowBlock, Wanted
from clinicalc.scoring.scored import CodedTexts
from clinicalc.scoring.table_refusals import input_changed

BLOCK = 1 << 16
"""Rows read at a time."""


class ParquetRows:
    """A Parquet table, its names read. Raises TableRefused where it is none, and OSError."""

    def __init__(self, path: Path, block: int = BLOCK) -> None:
        self._path, self._block = path, block
        path.open("rb").close()  # what cannot be opened is no matter of its form
        try:
            with pq.ParquetFile(path) as file:
                schema = file.schema_arrow
        except (pa.ArrowException, OSError) as error:
            raise _unreadable(path, error) from error
        self._types = {name: _plain_type(schema.field(place).type) for place, name in enumerate(schema.names)}
        self._names = tuple(settle_names(path.name, list(schema.names)))

    @property
    def names(self) -> tuple[str, ...]:
        """The names of its columns."""
        return self._names

    @property
    def told(self) -> str:
        """How the file was understood, a sentence."""
        return "Read as Parquet."

    @property
    def decimal(self) -> str:
        """A point: numbers are no texts here."""
        return "."

    def arrow_type(self, name: str) -> Any:
        """The type of a column, of its values where it is a dictionary."""
        return self._types[name]

    def blocks(self, wanted: Wanted, begin: Place | None = None) -> Iterator[RowBlock]:
        """The blocks from `begin` on, or all."""
        digest = self._digest()
        if begin is not None and begin.digest != digest:
            raise input_changed(self._path.name)
        start = 0 if begin is None else begin.rows
        rows, names = 0, list(dict.fromkeys((*wanted.fields.values(), *wanted.keep)))
        try:
            # what is read ahead stays in memory to the end of the file
            with pq.ParquetFile(self._path, pre_buffer=False) as file:
                size = file.metadata.num_rows
                for batch in file.iter_batches(self._block, columns=names, use_threads=False):
                    rows += batch.num_rows
                    if rows <= start:
                        continue
                    place = Place(rows, 0, rows, rows + 1, digest)
                    cells = {id: _code(batch.column(name)) for id, name in wanted.fields.items()}
                    kept = tuple(_keep(batch.column(name)) for name in wanted.keep)
                    yield RowBlock(batch.num_rows, cells, kept, place, rows, size)
        except (pa.ArrowException, OSError) as error:
            raise _unreadable(self._path, error) from error

    def _digest(self) -> str:
        with self._path.open("rb") as file:
            return hashlib.file_digest(file, "sha256").hexdigest()


def _plain_type(kind: pa.DataType) -> pa.DataType:
    return kind.value_type if pa.types.is_dictionary(kind) else kind


def _code(column: pa.Array) -> CodedTexts:
    """The cells as they would be typed: "" for null, numbers by their shortest digits, days as 2021-03-05."""
    coded = column if pa.types.is_dictionary(column.type) else column.dictionary_encode(null_encoding="mask")
    texts = [_text(value) for value in coded.dictionary]
    at = coded.indices.fill_null(len(texts)).to_numpy(zero_copy_only=False).astype(np.intp)
    return CodedTexts([*texts, ""], at)


def _text(value: pa.Scalar) -> str:
    if pa.types.is_float32(value.type) and value.is_valid:
        return text_of(np.float32(value.as_py()))
    found = value.as_py()
    return text_of(found) if found is None or isinstance(found, (bool, int, float, str)) else str(found)


def _keep(column: pa.Array) -> KeptColumn:
    plain = column.dictionary_decode() if pa.types.is_dictionary(column.type) else column
    return KeptColumn(_Texts(column), plain)


class _Texts(list[str]):
    """The texts of a kept column: worked out at once, each distinct value a single time."""

    def __init__(self, column: pa.Array) -> None:
        coded = _code(column)
        super().__init__(np.array(coded.distinct, dtype=object)[coded.at].tolist())


def _unreadable(path: Path, error: Exception) -> TableRefused:
    why = f"It cannot be read as what its name says it is ({type(error).__name__}). Save it again, or as CSV."
    return TableRefused(path.name, (Problem("", why),))
