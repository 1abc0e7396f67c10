"""A file proves itself: its worked examples are recomputed at every load, through the path a patient takes."""

from collections.abc import Iterator
from datetime import UTC, datetime
from pathlib import Path

from msgspec import UnsetType

from clinicalc.assessment.assess import assess
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.limits import giving_limits
from clinicalc.assessment.model import Model, prepare_model
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.reader import ReadFile, read_bytes, read_file
from clinicalc.coefficients.schema import WorkedExample
from clinicalc.coefficients.spans import span_of
from clinicalc.covariates.finiteness import Interval, find_nonfinite
from clinicalc.errors import CoefficientFileRefused, Problem

# a printed figure may lie exactly half a last digit away; comparing in binary needs this much slack
_SLACK = 1e-12


def load_model(path: Path | str) -> Model:
    """The proved model of the file at `path`. Raises CoefficientFileRefused with every problem found."""
    return prove_model(read_file(Path(path)))


def load_model_bytes(data: bytes, name: str) -> Model:
    """The proved model of a file already in memory."""
    return prove_model(read_bytes(data, name))


def prove_model(read: ReadFile) -> Model:
    """The model of a file whose steps are finite in range and whose worked examples come out as printed."""
    model = prepare_model(read)
    problems = find_nonfinite(model.content, number_ranges(model))
    if not problems:
        problems = tuple(_failed_examples(model))
    if problems:
        raise CoefficientFileRefused(read.name, problems)
    return model


def number_ranges(model: Model) -> dict[str, Interval]:
    """For each number field, the values for which the model gives a number, in the file's unit."""
    ranges = {}
    for field in model.fields:
        if isinstance(field, NumberField):
            low, high = giving_limits(field)
            ranges[field.id] = Interval(float("-inf") if low is None else low, float("inf") if high is None else high)
    return ranges


def recompute(model: Model, example: WorkedExample) -> Assessment:
    """The assessment of a worked example's values, as a patient's would be made."""
    return assess(
        model,
        entry_from_texts(example.values),
        span=span_of(example),
        recalibration=None if isinstance(example.recalibration, UnsetType) else example.recalibration,
        at=datetime(9999, 12, 31, tzinfo=UTC),
        number_only=True,
    )


def _failed_examples(model: Model) -> Iterator[Problem]:
    for place, example in enumerate(model.content.worked_examples):
        path = f"/model/worked_examples/{place}"
        estimate = (result := recompute(model, example)).estimate
        if estimate is None:
            reasons = " ".join(finding.message for finding in (*result.stops, *result.missing))
            yield Problem(path, f"the worked example gives no number. {reasons}")
            continue
        pairs: list[tuple[str, float | UnsetType | None, float | None]] = [
            ("probability", example.probability, estimate.probability),
            ("lower", example.lower, None if estimate.band is None else estimate.band.lower),
            ("upper", example.upper, None if estimate.band is None else estimate.band.upper),
        ]
        for name, stated, computed in pairs:
            if isinstance(stated, UnsetType) or stated is None:
                continue
            if computed is None:
                yield Problem(f"{path}/{name}", "the worked example states a limit and the equation has no band.")
            elif not abs(stated - computed) <= example.tolerance + _SLACK:
                yield Problem(
                    f"{path}/{name}",
                    f"the worked example misses: it states {stated:g}, recomputed it is {computed:.6g}, and the"
                    f" tolerance is {example.tolerance:g}. A coefficient or the example is mistyped.",
                )
