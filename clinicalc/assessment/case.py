"""One patient's values as the model uses them: what the number and every figure beside it are worked out from."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.limits import clamp_column, giving_limits
from clinicalc.assessment.model import Model, ModelEquation
from clinicalc.assessment.numbers import TakenNumber
from clinicalc.assessment.questions import TakenAnswer
from clinicalc.assessment.worked_out import work_out
from clinicalc.covariates.design import design_columns
from clinicalc.covariates.transforms import Column
from clinicalc.prediction.line import Adjustment, Line
from clinicalc.prediction.predict import Prediction, predict


@dataclass(frozen=True, slots=True, eq=False)
class Case:
    """Usable values, and the line that answers for them.

    `columns` holds one row, shape (1,), of every typed value in the file's units and codes; `worked_out` the derived
    values that nobody typed. `compared` names, for places of the file that it calls unconfirmed, who compared the
    figures there with their source for the practice.
    """

    model: Model
    equation: ModelEquation
    line: Line
    adjustment: Adjustment | None
    level: float
    numbers: Mapping[str, TakenNumber]
    answers: Mapping[str, TakenAnswer]
    columns: Mapping[str, Column]
    worked_out: Mapping[str, float]
    compared: tuple[tuple[str, str], ...] = ()

    def columns_with(self, moved: Mapping[str, Column]) -> dict[str, Column]:
        """The values with some of them replaced, each of shape (n,) as the replacing columns are.

        Values worked out from a replaced one are worked out anew and kept inside the limits within which the model
        gives a number; a typed one stays as typed. A value that nobody measured has a column only if it is replaced.
        """
        wide = self._widen(moved)
        for field in self.model.derived:
            if field.id in wide:
                continue
            if any(source in moved for source in field.sources):
                if field.id in self.worked_out or field.id in self.equation.uses:
                    column = self.work_out_with(field, moved)
                    if column is not None:
                        wide[field.id] = clamp_column(column, giving_limits(field))
            elif field.id in self.worked_out:
                wide[field.id] = np.full(next(iter(wide.values())).size, self.worked_out[field.id])
        return wide

    @property
    def behind(self) -> frozenset[str]:
        """Ids of all values that the number rests on, known or not.

        Those of the equation, and the sources of the derived ones among them that nobody typed.
        """
        derived = (field for field in self.model.derived if field.id in self.equation.uses)
        sources = (field.sources for field in derived if field.id not in self.columns)
        return self.equation.uses.union(*sources)

    def work_out_with(self, field: NumberField, moved: Mapping[str, Column]) -> Column | None:
        """A derived value, wherever it lies, for the values with some replaced; None while an input is lacking."""
        rows = next(iter(moved.values())).size if moved else 1
        inputs = {id: np.full(rows, self.columns[id][0]) for id in field.sources if id in self.columns}
        with np.errstate(all="ignore"):
            return work_out(self.model, field, inputs | dict(moved))

    def design_with(self, moved: Mapping[str, Column]) -> tuple[Column, ...]:
        """The design columns, one a term in file order, with some values replaced."""
        return design_columns(self.equation.terms, self.columns_with(moved))

    def predict_with(self, moved: Mapping[str, Column], *, band: bool = False) -> Prediction:
        """The prediction, with the recalibration in use, for the values with some of them replaced."""
        design = self.design_with(moved)
        return predict(self.line, design, adjustment=self.adjustment, level=self.level, band=band)

    def _widen(self, moved: Mapping[str, Column]) -> dict[str, Column]:
        rows = next(iter(moved.values())).size if moved else 1
        return {id: np.full(rows, column[0]) for id, column in self.columns.items()} | dict(moved)
