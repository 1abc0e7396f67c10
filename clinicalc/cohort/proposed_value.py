"""Whether a column may be the value of a predictor: its unit, its missing codes, its level texts, and why."""

from dataclasses import dataclass, replace

import numpy as np

from clinicalc.assessment.numerals import plain_range
from clinicalc.coefficients.answers import find_answer
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.coefficients.schema import ChoicePredictor, NumberPredictor, Predictor
from clinicalc.cohort.answer_column import Question, answer_values
from clinicalc.cohort.cells import read_number
from clinicalc.cohort.dictionary import ColumnEntry
from clinicalc.cohort.matching import match_cells
from clinicalc.cohort.measure import measure_of
from clinicalc.cohort.missing_cells import MISSING_CODES, MISSING_WORDS, find_missing, stray_codes
from clinicalc.cohort.raw import Numbers, RawColumn
from clinicalc.cohort.sightings import count_words, share_words
from clinicalc.units.fitting import possible_in, usual_in
from clinicalc.units.quantity import quantity
from clinicalc.units.unit import unit

_LOOKED_AT = 50_000
"""Rows that are looked at; a proposal is read by a person before it counts."""

_FALSE_TRUE = (("0", "1"), ("false", "true"), ("n", "y"), ("no", "yes"))


@dataclass(frozen=True, slots=True)
class ValueProposal:
    """An entry with its reason, and how well the cells fit it (0 to 1).

    `speaks` where the texts are words, all of them answers of a choice: they would do without a name that is like it.
    """

    entry: ColumnEntry
    fit: float
    speaks: bool = False


def head_of(raw: RawColumn) -> RawColumn:
    """The first rows of a column, with the texts that stand in them."""
    if raw.codes is None:
        return RawColumn(raw.name, raw.numbers[:_LOOKED_AT])
    used, codes = np.unique(np.append(raw.codes[:_LOOKED_AT], -1), return_inverse=True)
    levels = tuple(raw.levels[int(place)] for place in used[1:])
    return RawColumn(raw.name, raw.numbers[:_LOOKED_AT], (codes[:-1] - 1).astype(np.int32), levels)


def propose_value(raw: RawColumn, predictor: Predictor) -> ValueProposal:
    """How the column would be explained, were it the value of the predictor."""
    raw = head_of(raw)
    if isinstance(predictor, NumberPredictor):
        return _propose_number(raw, predictor)
    return _propose_answers(raw, predictor)


def _propose_number(raw: RawColumn, predictor: NumberPredictor) -> ValueProposal:
    words = tuple(text for text, _ in raw.used_levels if text.casefold() in MISSING_WORDS)
    texts = sum(count for text, count in raw.used_levels if text not in words and read_number(text) is None)
    texts -= sum(count for text, count in raw.used_levels if text.casefold() in ("na", "nan", "."))
    numbers = raw.numbers[np.isfinite(raw.numbers)]
    entry = ColumnEntry(raw.name, predictor=predictor.id, missing=words)
    if not len(numbers):
        return ValueProposal(entry, 0.0)
    code, codes, fit, why = _choose_unit(numbers, predictor)
    entry = replace(entry, unit=code, missing=(*words, *(f"{one:g}" for one in codes)))
    if entry.missing:
        why += f" Taken for not measured, since it can be no value: {listed(map(quoted, entry.missing))}."
    return ValueProposal(replace(entry, reason=why), fit * len(numbers) / (len(numbers) + max(texts, 0)))


def _choose_unit(numbers: Numbers, predictor: NumberPredictor) -> tuple[str, tuple[float, ...], float, str]:
    """The unit in which most values are usual, the missing codes there, that share, and the reason."""
    kind = quantity(predictor.quantity)
    if kind.usual is None:
        codes = stray_codes(numbers)
        return predictor.unit, codes, 0.8, f"It holds numbers from {numbers.min():g} to {numbers.max():g}."
    factor = measure_of(predictor, ColumnEntry("")).field.factor
    best: tuple[float, str, tuple[float, ...]] = (-1.0, predictor.unit, ())
    # the predictor's own unit first: another has to fit better
    for code in (predictor.unit, *(other for other in kind.units if other != predictor.unit)):
        usual, possible = usual_in(kind, code, factor), possible_in(kind, code, factor)
        if usual is None or possible is None:
            continue
        codes = tuple(one for one in MISSING_CODES if not possible.contains(one) and (numbers == one).any())
        kept = numbers[~np.isin(numbers, codes)] if codes else numbers
        share = float(((kept >= usual.low) & (kept <= usual.high)).mean()) if len(kept) else 0.0
        if share > best[0] + 0.02:
            best = (share, code, codes)
    share, code, codes = best
    usual = usual_in(kind, code, factor)
    part = share_words(round(share * len(numbers)), len(numbers))
    where = "" if usual is None else plain_range(usual.low, usual.high, unit(code).spelling)
    return code, codes, share, f"{part} of its values are usual for {kind.label} ({where})."


def _propose_answers(raw: RawColumn, question: Question) -> ValueProposal:
    missing = find_missing(raw)
    found = match_cells(raw, {}, missing).found
    ids = [(id, label) for id, label, _ in answer_values(question)]
    words = tuple(text for text, _ in found if text.casefold() in MISSING_WORDS and find_answer(text, ids) is None)
    texts = [text for text, _ in found if text not in words]
    entry = ColumnEntry(raw.name, predictor=question.id, missing=words)
    if not texts or len(texts) > 4 * len(ids):
        return ValueProposal(entry, 0.0)
    taken = _answer_texts(texts, ids, is_choice=isinstance(question, ChoicePredictor))
    fit = sum(text in taken for text in texts) / len(texts)
    levels = tuple((id, text) for text, id in taken.items() if id != text)
    said = f"Its texts are {count_words(found, 4)}"
    said += f"; {listed(f'{quoted(text)} taken for {id}' for text, id in taken.items())}." if taken else "."
    worded = len(texts) > 1 and all(len(text) > 1 and not text.isdigit() for text in texts)
    speaks = fit == 1.0 and worded and isinstance(question, ChoicePredictor)
    return ValueProposal(replace(entry, levels=levels, reason=said), fit, speaks)


def _answer_texts(texts: list[str], ids: list[tuple[str, str]], *, is_choice: bool) -> dict[str, str]:
    """Which answer each text may stand for: its id or label, else its first letters where only one answer has them."""
    taken: dict[str, str] = {}
    for text in texts:
        place = find_answer(text, ids)
        if place is None and not is_choice:
            place = next((pair.index(text.casefold()) for pair in _FALSE_TRUE if text.casefold() in pair), None)
        if place is None:
            starts = [
                spot
                for spot, pair in enumerate(ids)
                if any(name.casefold().startswith(text.casefold()) for name in pair)
            ]
            place = starts[0] if len(starts) == 1 else None
        if place is not None:
            taken[text] = ids[place][0]
    return taken
