"""Recalibrations cover every equation, at a horizon the model has, with a sound covariance where they bring one."""

from collections.abc import Iterator

from msgspec import UnsetType

from clinicalc.coefficients.pointers import listed, point, quoted, suggest
from clinicalc.coefficients.rules.catalogue import Catalogue, at
from clinicalc.coefficients.rules.horizons import check_span_known
from clinicalc.coefficients.rules.matrices import judge_matrix
from clinicalc.coefficients.schema import ModelContent, Recalibration
from clinicalc.coefficients.spans import span_of
from clinicalc.errors import Problem


def check_recalibrations(model: ModelContent, names: Catalogue) -> Iterator[Problem]:
    """Every recalibration, and that there is one where the file demands one."""
    del names
    if model.recalibration_required and not model.recalibrations:
        yield Problem(
            at("recalibration_required"),
            "a recalibration is required and none stands in the file: nobody could use it.",
        )
    yield from _check_every_horizon(model)
    for index, recalibration in enumerate(model.recalibrations):
        base = at("recalibrations", index)
        yield from check_span_known(recalibration, base, model)
        yield from _check_equations(recalibration, point(base, "equations"), model)


def _check_every_horizon(model: ModelContent) -> Iterator[Problem]:
    """Where a recalibration is required, each horizon has one."""
    if not model.recalibration_required or not model.recalibrations:
        return
    served = {span_of(recalibration) for recalibration in model.recalibrations}
    for place, horizon in enumerate(model.equations[0].horizons):
        span = span_of(horizon)
        if span is not None and span not in served:
            yield Problem(
                at("equations", 0, "horizons", place),
                f"a recalibration is required and none stands in the file for {span.words}: nobody could get a number "
                "there. Add one, or leave the horizon out.",
            )


def _check_equations(recalibration: Recalibration, base: str, model: ModelContent) -> Iterator[Problem]:
    known = [equation.id for equation in model.equations]
    for name, line in recalibration.equations.items():
        if name not in known:
            yield Problem(point(base, name), f"there is no equation {quoted(name)}.{suggest(name, known)}")
        if line.covariance is not None and not isinstance(line.covariance, UnsetType):
            fault = judge_matrix(line.covariance, 2, "numbers (intercept and slope)")
            if fault:
                yield Problem(point(base, name, "covariance"), fault)
    absent = [name for name in known if name not in recalibration.equations]
    if absent:
        yield Problem(
            base,
            f"a recalibration must cover every equation; {listed(map(quoted, absent))} is absent.",
        )
