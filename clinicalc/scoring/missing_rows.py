"""Which equations may still apply to each row, and what is missing in it, asked once for every pattern of cells."""

from collections.abc import Mapping

import numpy as np

from clinicalc.assessment.fields import QuestionField
from clinicalc.assessment.model import Model
from clinicalc.assessment.requirements import find_missing
from clinicalc.scoring.field_texts import FieldColumn, State
from clinicalc.scoring.finding_sets import FindingSets, codes_of
from clinicalc.scoring.row_patterns import find_patterns
from clinicalc.scoring.scored import Places, Rows


def possible_in_rows(model: Model, columns: Mapping[str, FieldColumn], size: int) -> tuple[Rows, ...]:
    """For each equation whether it may still apply, shape (n,) each: `possible_equations` for every row."""
    found = []
    for equation in model.equations:
        possible = np.ones(size, dtype=np.bool_)
        for id, wanted in equation.content.applies_when.items():
            column, field = columns.get(id), model.by_id[id]
            if column is None:
                continue
            assert isinstance(field, QuestionField)
            agrees = ~column.usable
            for code, option in enumerate(field.options):
                if option.id in wanted:
                    agrees |= column.value == code
            possible &= agrees
        found.append(possible)
    return tuple(found)


def say_missing(
    model: Model,
    columns: Mapping[str, FieldColumn],
    possible: tuple[Rows, ...],
    sets: FindingSets,
    said: Places,
) -> None:
    """Adds to what is `said` a stop for each value that is needed and not there.

    What is missing depends on which fields hold a usable value, which hold any text, and which equations may apply.
    """
    size = len(said)
    absent = [field.id for field in model.fields if field.id not in columns and _is_asked(model, field.id)]
    rows = np.arange(size) if absent else np.flatnonzero(_any_not_usable(columns, size))
    if not len(rows):
        return
    parts = [column.state[rows].astype(np.int64) for column in columns.values()]
    parts += [one[rows].astype(np.int64) for one in possible]
    first, at = find_patterns(parts, len(rows))
    places = [_missing_in(model, columns, possible, int(rows[place]), sets) for place in first]
    more = np.array(places, dtype=np.intp)[at]
    touched = np.flatnonzero(more)
    sets.join(said, rows[touched], more[touched])


def _is_asked(model: Model, id: str) -> bool:
    """Whether a field that has no column may be missed at all."""
    return (
        any(id in equation.uses or id in equation.content.applies_when for equation in model.equations)
        or any(id == exclusion.id for exclusion in model.exclusions)
        or any(id in field.sources for field in model.derived)
    )


def _any_not_usable(columns: Mapping[str, FieldColumn], size: int) -> Rows:
    found = np.zeros(size, dtype=np.bool_)
    for column in columns.values():
        if (column.table.state != State.USABLE).any():
            found |= ~column.usable
    return found


def _missing_in(
    model: Model, columns: Mapping[str, FieldColumn], possible: tuple[Rows, ...], row: int, sets: FindingSets
) -> int:
    """The place of what one row misses."""
    states = {id: State(int(column.state[row])) for id, column in columns.items()}
    typed = {id for id, state in states.items() if state is not State.EMPTY}
    available = {id for id, state in states.items() if state is State.USABLE}
    # whether a value could be worked out or not, nothing is missing where all that it is made from is there
    available |= {field.id for field in model.derived if field.id not in typed and available.issuperset(field.sources)}
    equations = tuple(equation for equation, rows in zip(model.equations, possible, strict=True) if rows[row])
    return sets.place_of(codes_of(find_missing(model, equations, available, typed)))
