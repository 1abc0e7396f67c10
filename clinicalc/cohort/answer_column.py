"""The column of a question: each cell taken for one of its answers, and the texts that are none of them."""

from collections.abc import Iterator, Mapping

import numpy as np

from clinicalc.assessment.findings import Grade
from clinicalc.coefficients.pointers import listed, quoted, suggest
from clinicalc.coefficients.schema import ChoicePredictor, YesNoPredictor
from clinicalc.cohort.cells import read_number
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.cohort.matching import Matched, match_cells
from clinicalc.cohort.missing_cells import MISSING_CODES, MISSING_WORDS, find_missing
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import Lines, Mask, count_words, name_column, see

Question = ChoicePredictor | YesNoPredictor

_YES_NO = (("no", 0.0), ("yes", 1.0))
_YES_NO_WORDS = {"0": 0.0, "1": 1.0, "false": 0.0, "true": 1.0, "n": 0.0, "y": 1.0}


def answer_values(question: Question) -> tuple[tuple[str, str, float], ...]:
    """The answers as (id, label, value in a column): places from 0 for a choice, 1 and 0 for yes and no."""
    if isinstance(question, ChoicePredictor):
        return tuple((choice.id, choice.label, float(place)) for place, choice in enumerate(question.choices))
    return tuple((id, id.capitalize(), value) for id, value in _YES_NO)


def take_answer_column(
    raw: RawColumn, entry: ColumnEntry, question: Question, lines: Lines
) -> tuple[Numbers, Mask, tuple[DataProblem, ...]]:
    """The answers as numbers, NaN where missing or unknown; which cells were missing; and the problems."""
    meanings = _meanings(entry, question)
    missing = find_missing(raw, entry.missing, meanings)
    matched = match_cells(raw, meanings, missing)
    return matched.values, missing, tuple(_find_problems(raw.name, entry, question, meanings, matched, lines))


def _meanings(entry: ColumnEntry, question: Question) -> Mapping[str, float]:
    """What each text means: the dictionary's texts first, then ids, then labels; for yes and no their usual signs."""
    answers = answer_values(question)
    by_id = {id: value for id, _, value in answers}
    meanings = {text.strip(): by_id[id] for id, text in entry.levels if id in by_id}
    for id, label, value in answers:
        meanings.setdefault(id, value)
        meanings.setdefault(label.strip(), value)
    if isinstance(question, YesNoPredictor) and not entry.levels:
        meanings |= _YES_NO_WORDS
    return meanings


def _find_problems(
    column: str,
    entry: ColumnEntry,
    question: Question,
    meanings: Mapping[str, float],
    matched: Matched,
    lines: Lines,
) -> Iterator[DataProblem]:
    named = name_column(column, question.label)
    ids = [id for id, _, _ in answer_values(question)]
    for id, text in entry.levels:
        if id not in ids:
            said = f"{named}: {quoted(id)}, for which {quoted(text)} should stand, is no answer.{suggest(id, ids)}"
            yield DataProblem(Grade.STOP, column, ProblemCode.UNKNOWN_LEVEL, 0, (), said)
    if matched.where.any():
        seen = see(matched.where, lines)
        said = f"{named}: {count_words(matched.strangers)}, first in line {seen.lines[0]}, is none of its answers."
        said += _likely_answer(question, meanings, matched)
        yield DataProblem(Grade.STOP, column, ProblemCode.UNKNOWN_LEVEL, seen.count, seen.lines, said)
    elif len(set(matched.values[np.isfinite(matched.values)])) > 1:
        nobody = [id for id, _, value in answer_values(question) if not (matched.values == value).any()]
        if nobody:
            said = f"{named}: nobody has the answer {listed(map(quoted, nobody), 'or')}. No term can be fitted for it."
            yield DataProblem(Grade.CAUTION, column, ProblemCode.UNUSED_LEVEL, 0, (), said)


def _likely_answer(question: Question, meanings: Mapping[str, float], matched: Matched) -> str:
    texts = {text for text, _ in matched.found}
    if isinstance(question, YesNoPredictor) and texts == {"1", "2"}:
        return ' It is coded 1 and 2: say which is which, levels = {yes = "2", no = "1"} or the other way round.'
    word = matched.strangers[0][0]
    known = listed([quoted(text) for text in list(meanings)[:8]], "or")
    if word.casefold() in MISSING_WORDS or read_number(word) in MISSING_CODES:
        return (
            f" If it means that nothing was measured, name it: missing = [{quoted(word)}]. Else say what it stands for."
        )
    offered = suggest(word, meanings) or f" Taken are {known}."
    return f"{offered} Say what it stands for under levels, or correct the cells."
