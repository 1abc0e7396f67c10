"""A CSV or TSV file as blocks of rows: a fast reader where every line is plain, Python's csv module where one is not.

Fields are counted in every block before the fast reader sees it, which would take a row that is too short for one with
empty cells. A block goes by the csv module if a quoted text in it holds a separator, a quotation mark or a line end, or
if it has an empty line or a row that does not fit.
"""

import csv
import io
import os
from collections import deque
from collections.abc import Iterator, Sequence
from dataclasses import dataclass, replace
from itertools import islice
from pathlib import Path
from typing import Any

import numpy as np

from clinicalc.cohort.delimited import settle_names
from clinicalc.cohort.encodings import tell_encoding
from clinicalc.cohort.separators import TextForm, tell_form
from clinicalc.errors import Problem, TableRefused
from clinicalc.scoring.cell_texts import TextPlaces
from clinicalc.scoring.delimited_bytes import LineBytes
from clinicalc.scoring.plain_lines import PlainLines, plain_lines
from clinicalc.scoring.row_blocks import KeptColumn, Place, RowBlock, Wanted
from clinicalc.scoring.scored import CodedTexts
from clinicalc.scoring.table_refusals import Misfit, input_changed, refuse_misfits

BLOCK = 1 << 22
"""Bytes read at a time: some ten thousand rows, which stay within a few dozen megabytes in every form they take."""
_SAMPLE_LINES = 2000
_ENCODINGS = {"utf-8": "UTF-8", "utf-8-sig": "UTF-8 with a byte order mark", "utf-16": "UTF-16", "latin-1": "latin-1"}


@dataclass(frozen=True, slots=True)
class _Cut:
    """Rows cut into columns: texts of each kept column, texts with their places of each field's column."""

    rows: int
    lines: int
    blank: int
    coded: dict[int, CodedTexts]
    texts: dict[int, Sequence[str]]


class DelimitedRows:
    """A text table, its names read. Raises TableRefused where these cannot be, and OSError."""

    def __init__(self, path: Path, block: int = BLOCK) -> None:
        self._path, self._block = path, block
        self._encoding = tell_encoding(path)
        with path.open(encoding=self._encoding, newline="") as file:
            self._form: TextForm = tell_form(list(islice(file, _SAMPLE_LINES)))
        stream = self._open()
        try:
            self._names = tuple(settle_names(path.name, self._read_header(stream)))
        finally:
            stream.close()

    @property
    def names(self) -> tuple[str, ...]:
        """The names of its columns."""
        return self._names

    @property
    def told(self) -> str:
        """How the file was understood, a sentence."""
        return f"Read as {_ENCODINGS[self._encoding]}, {self._form.words}."

    @property
    def decimal(self) -> str:
        """The sign before decimals in its texts."""
        return self._form.decimal

    def arrow_type(self, name: str) -> Any:
        """None: every column is one of texts."""
        return None

    def blocks(self, wanted: Wanted, begin: Place | None = None) -> Iterator[RowBlock]:
        """The blocks from `begin` on, or all."""
        stream = self._open()
        size = os.path.getsize(self._path) or 1
        try:
            self._read_header(stream)
            place = Place(line=self._header_lines + 1)
            if begin is not None:
                place = self._go_to(stream, begin)
            columns = {id: self._names.index(name) for id, name in wanted.fields.items()}
            kept = [self._names.index(name) for name in wanted.keep]
            while True:
                cut = self._read_block(stream, frozenset(columns.values()), kept, place.line)
                if cut is None:
                    return
                place = Place(
                    place.rows + cut.rows,
                    place.blank + cut.blank,
                    stream.taken,
                    place.line + cut.lines,
                    stream.digest,
                )
                cells = {id: cut.coded[at] for id, at in columns.items()}
                yield RowBlock(
                    cut.rows, cells, tuple(KeptColumn(cut.texts[at]) for at in kept), place, stream.taken, size
                )
        finally:
            stream.close()

    def _open(self) -> LineBytes:
        return LineBytes(self._path, self._encoding)

    def _go_to(self, stream: LineBytes, begin: Place) -> Place:
        stream.skip(begin.at - stream.taken)
        if stream.taken != begin.at or stream.digest != begin.digest:
            raise input_changed(self._path.name)
        return replace(begin)

    def _read_header(self, stream: LineBytes) -> list[str]:
        stream.skip_mark()
        reader = csv.reader(_decode_lines(stream), delimiter=self._form.separator, strict=True)
        try:
            for _ in range(self._form.lines_before):
                next(reader, None)
            header = next(reader, [])
        except csv.Error as error:
            why = f"it cannot be read ({error}): a quotation mark is left open."
            raise TableRefused(self._path.name, (Problem("line 1", why),)) from error
        self._header_lines = reader.line_num
        return header

    def _read_block(self, stream: LineBytes, fields: frozenset[int], kept: Sequence[int], line: int) -> _Cut | None:
        data = stream.block(self._block)
        if not data:
            return None
        plain = plain_lines(data, self._form.separator.encode(), len(self._names))
        cut = None if plain is None else self._read_fast(plain, fields, kept)
        return self._read_with_care(data, stream, fields, kept, line) if cut is None else cut

    def _read_fast(self, plain: PlainLines, fields: frozenset[int], kept: Sequence[int]) -> _Cut | None:
        """The rows by pandas; None where it should see another number of them than there are."""
        import pandas as pd

        places = sorted({*fields, *kept})
        frame = pd.read_csv(
            io.BytesIO(plain.data),
            header=None,
            names=list(range(len(self._names))),
            usecols=places,
            dtype={place: "category" if place in fields else "str" for place in places},
            sep=self._form.separator,
            keep_default_na=False,
            na_filter=False,
            quoting=csv.QUOTE_NONE,
            skip_blank_lines=False,
            encoding="latin-1" if self._encoding == "latin-1" else "utf-8",
            engine="c",
            low_memory=False,
        )
        if len(frame) != plain.rows:
            return None
        coded: dict[int, CodedTexts] = {}
        texts: dict[int, Sequence[str]] = {}
        for place in places:
            column = frame[place]
            if place in fields:
                levels = column.cat.categories.tolist()
                coded[place] = CodedTexts(levels, column.cat.codes.to_numpy().astype(np.intp))
            if place in kept:
                texts[place] = column.tolist()
        return _Cut(plain.rows, plain.rows, 0, coded, texts)

    def _read_with_care(
        self, data: bytes, stream: LineBytes, fields: frozenset[int], kept: Sequence[int], line: int
    ) -> _Cut:
        pending = deque(io.StringIO(data.decode(stream.encoding), newline=""))
        reader = csv.reader(_lines_of(pending, stream), delimiter=self._form.separator, strict=True)
        width, blank = len(self._names), 0
        rows: list[list[str]] = []
        misfits: list[Misfit] = []
        begins = line
        try:
            while pending:
                begins = line + reader.line_num
                row = next(reader)
                if not row:
                    blank += 1
                elif len(row) != width:
                    misfits.append(Misfit(begins, len(row)))
                else:
                    rows.append(row)
        except (csv.Error, StopIteration) as error:
            said = str(error) or "it ends within a text"
            misfits.append(Misfit(begins, 0, said))
        if misfits:
            refuse_misfits(self._path.name, width, misfits, line)
        columns = list(zip(*rows, strict=True)) if rows else [()] * width
        coded = {place: _code(columns[place]) for place in fields}
        return _Cut(len(rows), reader.line_num, blank, coded, {place: columns[place] for place in kept})


def _lines_of(pending: deque[str], stream: LineBytes) -> Iterator[str]:
    """The lines of a block, and those after it as far as a text in quotation marks runs on."""
    while pending:
        yield pending.popleft()
    yield from _decode_lines(stream)


def _decode_lines(stream: LineBytes) -> Iterator[str]:
    while line := stream.line():
        yield line.decode(stream.encoding)


def _code(texts: Sequence[str]) -> CodedTexts:
    places = TextPlaces()
    at = np.fromiter(map(places.__getitem__, texts), np.intp, len(texts))
    return CodedTexts(places.texts, at)
