"""The forms in which scored rows are written: CSV and TSV as lines, Parquet by way of batches."""

from collections.abc import Sequence
from pathlib import Path
from typing import Protocol

import msgspec
import numpy as np

from clinicalc.scoring.row_blocks import RowBlock
from clinicalc.scoring.scored import ScoredBlock

RESULT_NAMES = ("probability", "lower", "upper", "equation", "stops", "cautions", "notes")
"""The columns behind those that are kept."""


class OutputForm(Protocol):
    """How the part of an output is written, and how the output is made of it."""

    @property
    def head(self) -> bytes:
        """What stands before the first row."""

    def write(self, block: RowBlock, scored: ScoredBlock) -> bytes:
        """The rows of a block."""

    def make(self, part: Path) -> Path | None:
        """The output made from the whole part; None where the part is the output."""


class DelimitedForm:
    """Lines in UTF-8 with a point in decimals; texts in quotation marks only where they need them.

    A number is the shortest decimal that reads back as the same float; a field is empty where there is none.
    """

    def __init__(self, keep: Sequence[str], separator: str) -> None:
        self._separator = separator
        self._needing = (separator, '"', "\n", "\r")
        self._keep = tuple(keep)

    @property
    def head(self) -> bytes:
        """The line of names."""
        return f"{self._separator.join([*map(self._quote, self._keep), *RESULT_NAMES])}\n".encode()

    def write(self, block: RowBlock, scored: ScoredBlock) -> bytes:
        """The lines of a block."""
        if not block.rows:
            return b""
        columns = [*(self._quoted(one.texts) for one in block.kept), self._numbers(scored), self._said(scored)]
        lines = map(self._separator.join, zip(*columns, strict=True))
        return ("\n".join(lines) + "\n").encode()

    def make(self, part: Path) -> Path | None:
        """None: the part is the output."""
        return None

    def _numbers(self, scored: ScoredBlock) -> list[str]:
        """Probability and the band's ends of each row, joined."""
        table = np.column_stack([scored.probability, scored.lower, scored.upper])
        # one text for all, whose numbers are the shortest that read back; a row is all that stands between brackets
        text = msgspec.json.encode(table.tolist()).decode()[2:-2].replace("null", "")
        if self._separator != ",":
            return text.replace("],[", "\n").replace(",", self._separator).split("\n")
        return text.split("],[")

    def _said(self, scored: ScoredBlock) -> list[str]:
        """Equation and findings of each row, joined: few distinct ones."""
        equations = [self._quote(id) for id in (*scored.equations, "")]
        width = len(equations)
        # -1, no equation, is the last
        pair = scored.said * width + scored.equation % width
        distinct, at = np.unique(pair, return_inverse=True)
        texts = []
        for code in distinct.tolist():
            said = scored.findings[code // width]
            texts.append(
                self._separator.join(
                    (equations[code % width], *map(self._quote, (said.stops, said.cautions, said.notes)))
                )
            )
        found: list[str] = np.array(texts, dtype=object)[at].tolist()
        return found

    def _quoted(self, texts: Sequence[str]) -> Sequence[str]:
        """The cells of a kept column, in quotation marks where they need them."""
        joined = "\t".join(texts) if self._separator != "\t" else "\a".join(texts)
        if not any(sign in joined for sign in self._needing):
            return texts
        return [self._quote(text) for text in texts]

    def _quote(self, text: str) -> str:
        if any(sign in text for sign in self._needing):
            return f'"{text.replace(chr(34), chr(34) * 2)}"'
        return text
