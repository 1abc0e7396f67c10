"""The numbers of a column that should hold numbers, and the texts that stand among them."""

import re
from dataclasses import dataclass

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.cohort.cells import read_number
from clinicalc.cohort.missing_cells import MISSING_WORDS, find_missing
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Lines, Mask, name_column, see

_DATE = re.compile(r"\d{1,4}[-./]\d{1,2}[-./]\d{1,4}")


@dataclass(frozen=True, slots=True, eq=False)
class NumberCells:
    """`numbers` are NaN where `missing` holds, and where `texts` holds: a text that is no number."""

    numbers: Numbers
    missing: Mask
    texts: Mask


def take_numbers(raw: RawColumn, missing: tuple[str, ...] = ()) -> NumberCells:
    """The column as numbers; texts that are numbers all the same ("007") are taken as such."""
    absent = find_missing(raw, missing)
    numbers = np.where(absent, np.nan, raw.numbers)
    texts = np.zeros(len(numbers), dtype=np.bool_)
    if raw.codes is not None:
        read = np.array([_read_anyway(text) for text in raw.levels] + [np.nan])[raw.codes]
        spoken = (raw.codes >= 0) & ~absent
        numbers = np.where(spoken, read, numbers)
        texts = spoken & np.isnan(read)
    return NumberCells(numbers, absent, texts)


def tell_texts(raw: RawColumn, cells: NumberCells, lines: Lines, label: str) -> DataProblem | None:
    """The stop about texts among the numbers, with the likely slip; None where there are none."""
    if not cells.texts.any():
        return None
    seen, named = see(cells.texts, lines), name_column(raw.name, label)
    rows = np.flatnonzero(cells.texts)
    examples = list(dict.fromkeys(raw.text(int(row)) for row in rows[:2000]))
    if np.isnan(cells.numbers).all():
        sentence = (
            f"{named} should hold numbers and holds only texts, such as {listed(map(quoted, examples[:3]))}. "
            "Perhaps another column was meant; name the right one in the dictionary."
        )
    else:
        sentence = (
            f"{named} should hold numbers and holds {listed(map(quoted, examples[:3]))} {seen.words}. "
            f"{_likely_slip(examples[0])}"
        )
    return DataProblem(Grade.STOP, raw.name, ProblemCode.TEXT_IN_NUMBERS, seen.count, seen.lines, sentence)


def _read_anyway(text: str) -> float:
    number = read_number(text, exactly=False)
    return np.nan if number is None else number


def _likely_slip(text: str) -> str:
    if text.casefold() in MISSING_WORDS:
        return f"If it means that nothing was measured, name it: missing = [{quoted(text)}]."
    if read_number(text, ",", exactly=False) is not None or read_number(text.replace(",", "")) is not None:
        return "Points and commas are mixed in it: write every decimal in the way of the rest of the file."
    if text[0] in "<>≤≥":
        return "The limit of an assay is no value: decide what stands for it, write that, and say so with the model."
    if _DATE.fullmatch(text):
        return "It looks like a date: perhaps another column was meant."
    if text[0].isdigit():
        return "The unit belongs into the dictionary, the number alone into the cell. Correct these cells."
    return f"Correct these cells; if the text means that nothing was measured, name it: missing = [{quoted(text)}]."
