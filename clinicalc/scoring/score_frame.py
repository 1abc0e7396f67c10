"""A pandas frame in, a frame of numbers, bands and findings with the same index out."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from datetime import datetime
from typing import TYPE_CHECKING, Any

import numpy as np

from clinicalc.assessment.choices import DEFAULT_LEVEL
from clinicalc.assessment.model import Model
from clinicalc.coefficients.spans import Span
from clinicalc.errors import UsageError
from clinicalc.scoring.cell_texts import text_of
from clinicalc.scoring.score_rows import Scorer
from clinicalc.scoring.scored import Cells, CodedTexts

if TYPE_CHECKING:
    import pandas as pd


def score_frame(
    model: Model,
    frame: pd.DataFrame,
    *,
    columns: Mapping[str, str] | None = None,
    span: Span | None = None,
    recalibration: str | None = None,
    level: float = DEFAULT_LEVEL,
    units: Mapping[str, str] | None = None,
    answers: Mapping[str, Mapping[str, str]] | None = None,
    missing: Collection[str] = (),
    at: datetime | None = None,
) -> pd.DataFrame:
    """For each row of `frame`, under the same index: probability, lower, upper, equation, stops, cautions, notes.

    `columns` says for a field id in which column it stands; without it columns are taken by their names, and others are
    left alone. Cells are texts as somebody would type them, or numbers (55.0 counts as "55"), booleans for yes and no;
    None, NaN and NA are empty. The other choices are those of a `Scorer`; `at`, now if left out, matters for dated
    values only. Nothing is kept between calls: the same frame gives the same bits in any parts, so the function can be
    sent to other processes, with dask's `map_partitions` for one.

    Raises UsageError where a column is not there, appears twice, or no column is a value of the model; and as `Scorer`.
    """
    import pandas as pd

    scorer = Scorer(
        model,
        span=span,
        recalibration=recalibration,
        level=level,
        units=units,
        answers=answers,
        missing=missing,
        at=at,
    )
    block = scorer.score(_cells_of(model, frame, columns))
    return pd.DataFrame(
        {
            "probability": block.probability,
            "lower": block.lower,
            "upper": block.upper,
            "equation": block.equation_ids,
            "stops": block.stops,
            "cautions": block.cautions,
            "notes": block.notes,
        },
        index=frame.index,
    )


def _cells_of(model: Model, frame: pd.DataFrame, columns: Mapping[str, str] | None) -> dict[str, Cells]:
    """The cells of each field, by its id."""
    if columns is None:
        columns = {field.id: field.id for field in model.fields if field.id in frame.columns}
    if not columns:
        ids = ", ".join(field.id for field in model.fields)
        raise UsageError(
            "no column of this table is a value of the model.",
            why=f"It takes {ids}.",
            do="Name the columns so, or say with `columns` which is which.",
        )
    cells = {}
    for id, name in columns.items():
        if name not in frame.columns:
            raise UsageError(f"there is no column {name!r} for {id}.")
        column = frame[name]
        if column.ndim != 1:
            raise UsageError(f"the column {name!r} for {id} stands in the table more than once.")
        cells[id] = _cells_in(column)
    return cells


def _cells_in(column: pd.Series[Any]) -> Cells:
    """A column by its distinct cells; to pandas True, 1 and 1.0 are the same, so mixed columns go cell by cell."""
    import pandas as pd

    if column.dtype == object and pd.api.types.infer_dtype(column, skipna=True) not in ("string", "empty"):
        return [text_of(cell) for cell in column]
    at, distinct = pd.factorize(column)
    return CodedTexts([text_of(cell) for cell in distinct], np.asarray(at, dtype=np.intp))
