"""A dictionary proposed from a table's names, values and levels, every proposal with its reason in words."""

from dataclasses import replace

from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.schema import ChoicePredictor, Predictor
from clinicalc.cohort.dictionary import ColumnEntry, DataDictionary, Role
from clinicalc.cohort.name_likeness import LIKE, likeness
from clinicalc.cohort.proposed_outcome import propose_outcome
from clinicalc.cohort.proposed_value import propose_value
from clinicalc.cohort.raw import RawTable

_LEAST_FIT = 0.5
"""A column whose cells fit a predictor worse is not proposed for it, whatever its name."""


def propose_dictionary(table: RawTable, predictors: tuple[Predictor, ...]) -> DataDictionary:
    """An entry for every column of the table, in its order, each with the reason in words; the outcome as it looks.

    A column is proposed for the predictor whose name its own is most like, where its cells fit: numbers that are
    usual in one of the quantity's units, texts that are its answers. An answer column whose texts are exactly the
    answers is proposed without regard to its name. What is proposed is to be read by a person, and not to be trusted.
    """
    chosen = _choose_columns(table, predictors)
    outcome = propose_outcome([raw for raw in table.columns if raw.name not in chosen])
    by_name = {entry.column: entry for entry in outcome.entries} | chosen
    entries = tuple(by_name.get(name, _ignored(name)) for name in table.names)
    return DataDictionary(table.file, outcome.plan, entries, outcome.column(Role.PERSON))


def _choose_columns(table: RawTable, predictors: tuple[Predictor, ...]) -> dict[str, ColumnEntry]:
    """The entries of the columns that are values, by column; each column and each predictor once."""
    named: list[tuple[float, ColumnEntry]] = []
    spoken: dict[str, list[ColumnEntry]] = {}
    for predictor in predictors:
        for raw in table.columns:
            alike = likeness(raw.name, predictor)
            if alike < LIKE and not isinstance(predictor, ChoicePredictor):
                continue
            proposal = propose_value(raw, predictor)
            entry = _with_reason(proposal.entry, alike, predictor)
            if alike >= LIKE and proposal.fit >= _LEAST_FIT:
                named.append((alike + proposal.fit, entry))
            elif alike < LIKE and proposal.speaks:
                spoken.setdefault(raw.name, []).append(entry)
    # texts alone decide only where they are the answers of one question
    alone = [entries[0] for entries in spoken.values() if len(entries) == 1]
    chosen: dict[str, ColumnEntry] = {}
    for entry in (*(entry for _, entry in sorted(named, key=lambda one: -one[0])), *alone):
        if entry.column not in chosen and all(one.predictor != entry.predictor for one in chosen.values()):
            chosen[entry.column] = entry
    return chosen


def _with_reason(entry: ColumnEntry, alike: float, predictor: Predictor) -> ColumnEntry:
    if alike == 1.0:
        why = f"It is named like {quoted(predictor.label)}."
    elif alike >= LIKE:
        why = f"Its name is like {quoted(predictor.label)}."
    else:
        why = f"Its texts are the answers to {quoted(predictor.label)}, though its name is not like it."
    return replace(entry, reason=f"{why} {entry.reason}".strip())


def _ignored(name: str) -> ColumnEntry:
    return ColumnEntry(name, Role.IGNORED, reason="Nothing in its name or its cells says what it is for.")
