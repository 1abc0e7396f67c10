"""What a file of people may hold: predictors of every known quantity, the commonest questions, and what is left over.

A proposal is read by a person before anything is fitted to it.
"""

from collections.abc import Iterator
from dataclasses import dataclass, replace

import msgspec
import numpy as np

from clinicalc.coefficients.schema import Choice, ChoicePredictor, NumberPredictor, Predictor, YesNoPredictor
from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, Role
from clinicalc.cohort.proposing import propose_dictionary
from clinicalc.cohort.raw import RawColumn, RawTable, number_text
from clinicalc.operations.course import Course
from clinicalc.operations.study_draft_model import Tree, make_id, predictor_of
from clinicalc.units.table import quantity_table

_BARE = ("number", "score", "duration")
"""Quantities that no name and no range tells."""
_MOST_ANSWERS = 12
_SIGNS = {"0": "no", "1": "yes"}
_WORDS = {"no": "no", "yes": "yes", "n": "no", "y": "yes", "false": "no", "true": "yes"}


@dataclass(frozen=True, slots=True, eq=False)
class Proposal:
    """A dictionary of the whole file, and the tables of the predictors in it, by id."""

    dictionary: DataDictionary
    predictors: dict[str, Tree]


def propose_study(table: RawTable, course: Course) -> Proposal:
    """What each column is taken for, with the reason."""
    known = tuple(_candidates())
    dictionary = propose_dictionary(table, known)
    # by way of JSON: lists, as TOML has them
    trees: dict[str, Tree] = {one.id: msgspec.json.decode(msgspec.json.encode(one)) for one in known}
    taken = {entry.predictor for entry in dictionary.columns if entry.predictor}
    predictors = {id: trees[id] for id in taken}
    entries = []
    for entry in dictionary.columns:
        course.go_on()
        raw = table.find(entry.column)
        if entry.role is Role.IGNORED and raw is not None:
            entry = _look_at(raw, taken) or entry
            if entry.role is Role.VALUE:
                taken.add(entry.predictor)
                predictors[entry.predictor] = predictor_of(entry)
        entries.append(entry)
    return Proposal(replace(dictionary, columns=tuple(entries)), predictors)


def _candidates() -> Iterator[Predictor]:
    for row in quantity_table().quantities:
        if row.id not in _BARE:
            yield NumberPredictor(row.id, row.label, row.id, row.unit, "Values", outside_derivation="caution")
    sexes = (Choice("female", "Female"), Choice("male", "Male"))
    yield ChoicePredictor("sex", "Sex", "Person", sexes)
    for id, label in (
        ("smoker", "Smoker"),
        ("diabetes", "Diabetes"),
        ("on_bp_treatment", "Treated for blood pressure"),
    ):
        yield YesNoPredictor(id, label, "Answers")


def _look_at(raw: RawColumn, taken: set[str]) -> ColumnEntry | None:
    """A column that no known name fits: a question with few answers, or a number; None where it is neither."""
    id = make_id(raw.name)
    if id in taken:
        return None
    numbers = raw.numbers[~np.isnan(raw.numbers)]
    texts = [text for text, _ in raw.used_levels]
    distinct = np.unique(numbers[:100_000])
    if not texts and len(distinct) == 2 and set(distinct.tolist()) == {0.0, 1.0}:
        levels = tuple((answer, text) for text, answer in _SIGNS.items())
        return ColumnEntry(
            raw.name, Role.VALUE, id, levels=levels, reason="It holds 0 and 1 only: taken for no and yes."
        )
    if texts and not len(numbers) and 2 <= len(texts) <= _MOST_ANSWERS:
        if {text.casefold() for text in texts} <= set(_WORDS):
            levels = tuple((_WORDS[text.casefold()], text) for text in texts)
            return ColumnEntry(raw.name, Role.VALUE, id, levels=levels, reason="Its texts say yes and no.")
        levels = tuple((make_id(text), text) for text in texts)
        if len({answer for answer, _ in levels}) == len(levels):
            why = f"It holds {len(texts)} different texts: taken for the answers of a choice."
            return ColumnEntry(raw.name, Role.VALUE, id, levels=levels, reason=why)
    if not texts and len(distinct) > 2:
        low, high = number_text(float(numbers.min())), number_text(float(numbers.max()))
        why = f"It holds numbers from {low} to {high}, and its name is like no known quantity: a bare number."
        return ColumnEntry(raw.name, Role.VALUE, id, "1", reason=why)
    return None
