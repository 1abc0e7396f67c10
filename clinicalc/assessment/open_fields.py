"""Which values may stand open, and what the number would be where nobody described what to expect of them."""

from collections.abc import Iterator

import numpy as np

from clinicalc.assessment.case import Case
from clinicalc.assessment.fields import Field, NumberField, QuestionField
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.limits import clamp, giving_limits
from clinicalc.assessment.model import Model
from clinicalc.assessment.not_measured import MOST_NOT_MEASURED
from clinicalc.assessment.numerals import join_words
from clinicalc.coefficients.schema import Limits
from clinicalc.covariates.transforms import Column

_STEPS = (401, 61)
"""Values tried of one number, and of each of two."""


def check_open(model: Model, open: tuple[Field, ...]) -> Iterator[Finding]:
    """A stop for each value that may not stand open, and one where too many do."""
    allowed = [field for field in model.fields if field.may_be_missing]
    for field in open:
        if not field.may_be_missing:
            yield _stop(field, _say_needed(field, allowed))
    if len(open) > MOST_NOT_MEASURED:
        labels = join_words([field.label for field in open])
        message = (
            f"{labels} are all not measured: there is no number with more than {MOST_NOT_MEASURED} values open."
            " Measure one of them."
        )
        yield _stop(open[MOST_NOT_MEASURED], message)


def open_in(case: Case, open: tuple[Field, ...]) -> tuple[Field, ...]:
    """Those open values that the number depends on: used by the equation, or by a value worked out for it."""
    behind = case.behind
    return tuple(field for field in open if field.id in behind)


def extremes(case: Case, open: tuple[Field, ...]) -> tuple[tuple[float, float], tuple[float, float]] | None:
    """The smallest and the largest probability, each with its complement, over usual values and all answers.

    None where a number has no usual limits on both sides, or a result is not finite.
    """
    numbers = [field for field in open if isinstance(field, NumberField)]
    axes: list[Column] = []
    for field in open:
        if not isinstance(field, NumberField):
            axes.append(np.arange(float(len(field.options))))
            continue
        low, high = usual_limits(field)
        if low is None or high is None:
            return None
        axes.append(np.linspace(low, high, _STEPS[len(numbers) - 1]))
    grid = [np.ascontiguousarray(axis.ravel()) for axis in np.meshgrid(*axes, indexing="ij")]
    result = case.predict_with({field.id: column for field, column in zip(open, grid, strict=True)})
    if not np.isfinite(result.eta).all():
        return None
    ends = int(result.eta.argmin()), int(result.eta.argmax())
    low_end, high_end = ((float(result.probability[at]), float(result.complement[at])) for at in ends)
    return low_end, high_end


def usual_limits(field: NumberField) -> Limits:
    """The usual values of a number, inside the limits for which the model gives a number."""
    low, high = field.usual
    inside = giving_limits(field)
    return (None if low is None else clamp(low, inside)), (None if high is None else clamp(high, inside))


def _say_needed(field: Field, allowed: list[Field]) -> str:
    if isinstance(field, NumberField) and field.formula is not None:
        return f"{field.label} is worked out from other values and cannot be marked as not measured. Leave it empty."
    if isinstance(field, QuestionField) and field.excludes:
        return (
            f"{field.label} This must be known: it decides whether the model may be used at all. Find out, then answer"
            " no or yes."
        )
    first = "measure it first" if isinstance(field, NumberField) else "find out first"
    only = f" Only {join_words([other.label for other in allowed])} may be left open." if allowed else ""
    return f"{field.label}: not measured. This model gives no number without it: {first}.{only}"


def _stop(field: Field, message: str) -> Finding:
    return Finding(Grade.STOP, FindingCode.NOT_MEASURED, field.id, message)
