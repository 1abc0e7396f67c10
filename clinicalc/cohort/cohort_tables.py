"""The table [cohort] of a study or a validation file: the file of people, its outcome, what its columns mean."""

from typing import Literal

from msgspec import UNSET, UnsetType, field

from clinicalc.coefficients.file_types import FileStruct, Id, Text

Cells = Text | float | tuple[Text | float, ...]
"""What stands in cells of the file: one text or number, or several that mean the same."""


class TimeToEventTable(FileStruct, frozen=True, tag_field="kind", tag="time_to_event"):
    """How long each person was followed and what ended it: `time` in `unit`, or the dates `start` and `end`."""

    status: Text
    event: Cells
    time: Text | UnsetType = UNSET
    unit: Literal["a", "mo", "wk", "d"] | UnsetType = UNSET
    start: Text | UnsetType = UNSET
    end: Text | UnsetType = UNSET
    born: Text | UnsetType = UNSET
    censored: Cells | UnsetType = UNSET
    competing: Cells | UnsetType = UNSET
    entry: Text | UnsetType = UNSET


class BinaryTable(FileStruct, frozen=True, tag_field="kind", tag="binary"):
    """An outcome that is known of everybody."""

    column: Text
    event: Cells
    no_event: Cells | UnsetType = UNSET


class ColumnTable(FileStruct, frozen=True):
    """Where a predictor stands in the file; what is left out is the predictor's own id, unit and answers."""

    column: Text | UnsetType = UNSET
    unit: Text | UnsetType = UNSET
    missing: Cells | UnsetType = UNSET
    levels: dict[Id, Cells] | UnsetType = UNSET


class CohortTable(FileStruct, frozen=True):
    """The file of people, from the study's folder, and what its columns mean."""

    file: Text
    outcome: TimeToEventTable | BinaryTable
    person: Text | UnsetType = UNSET
    columns: dict[Id, ColumnTable] = field(default_factory=dict)


def spell_cells(cells: Cells | UnsetType) -> tuple[str, ...]:
    """The texts of cells, numbers as they are written: 1 and 1.0 are "1"."""
    if isinstance(cells, UnsetType):
        return ()
    found = cells if isinstance(cells, tuple) else (cells,)
    return tuple(item if isinstance(item, str) else format(item, ".15g") for item in found)
