"""Cells that are not texts, as the text that somebody would have typed for them."""

import re

import numpy as np

from clinicalc.scoring.scored import Cells, CodedTexts

_PLAIN_FLOAT = re.compile(r"(-?[0-9]+)(?:\.0|(\.[0-9]+))")


def text_of(cell: object) -> str:
    """The text of one cell: "" for None and NaN, the shortest digits that give a number back, without an exponent.

    55.0 is "55": a column of numbers does not say with how many decimals they were measured.
    """
    if isinstance(cell, str):
        return cell
    if cell is None or type(cell).__name__ in ("NAType", "NaTType"):
        return ""
    if isinstance(cell, (bool, np.bool_)):
        return "yes" if cell else "no"
    if isinstance(cell, (float, np.floating)):
        return _text_of_float(cell)
    return str(cell)


def code_cells(cells: Cells) -> CodedTexts | list[object]:
    """Numbers as their distinct texts; cells that may be texts as a list."""
    if isinstance(cells, CodedTexts):
        return cells
    if isinstance(cells, np.ndarray) and cells.dtype != object and cells.dtype.kind in "fiub":
        distinct, at = np.unique(cells, return_inverse=True)
        return CodedTexts([text_of(cell) for cell in distinct], at)
    return cells.tolist() if isinstance(cells, np.ndarray) else list(cells)


class TextPlaces(dict[object, int]):
    """The place of each cell's text; one that is new gets the next."""

    def __init__(self) -> None:
        super().__init__()
        self.texts: list[str] = []
        """The texts by their places."""

    def __missing__(self, cell: object) -> int:
        if isinstance(cell, str):
            place = self[cell] = len(self.texts)
            self.texts.append(cell)
            return place
        # a number is never a key itself: True, 1 and 1.0 would be one
        return self[text_of(cell)]


def _text_of_float(cell: float | np.floating[np.typing.NBitBase]) -> str:
    if cell != cell:
        return ""
    if isinstance(cell, float):
        digits = _PLAIN_FLOAT.fullmatch(float.__repr__(cell))
        if digits is not None:
            return f"{digits[1]}{digits[2] or ''}"
    return np.format_float_positional(cell, trim="-")
