"""The number of one patient with its band: from values all known, or averaged over those that nobody measured."""

import numpy as np

from clinicalc.assessment.case import Case
from clinicalc.assessment.cautions import equation_cautions
from clinicalc.assessment.cut_points import ResultAt, find_near_cuts
from clinicalc.assessment.fields import Field
from clinicalc.assessment.findings import Finding, FindingCode, Grade
from clinicalc.assessment.no_band import say_no_band
from clinicalc.assessment.not_measured import average, cloud_of, integrate, moved_case
from clinicalc.assessment.numerals import percent
from clinicalc.assessment.open_findings import say_averaged, say_undescribed
from clinicalc.assessment.result import Band, Estimate
from clinicalc.assessment.unconfirmed import Basis
from clinicalc.coefficients.schema import Recalibration
from clinicalc.covariates.design import design_columns
from clinicalc.prediction.predict import predict


def estimate_case(
    case: Case, recalibration: Recalibration | None, open: tuple[Field, ...]
) -> tuple[Estimate | None, list[Finding]]:
    """The number without the figures beside it, and the findings that come with it or say why there is none.

    `open` are the values not measured that the number rests on.
    """
    return _average(case, recalibration, open) if open else _predict(case, recalibration)


def _predict(case: Case, recalibration: Recalibration | None) -> tuple[Estimate | None, list[Finding]]:
    """The number with its band, and the findings that come with it."""
    columns = {**case.columns, **{id: np.array([value]) for id, value in case.worked_out.items()}}
    design = design_columns(case.equation.terms, columns)
    result = predict(case.line, design, adjustment=case.adjustment, level=case.level)
    figures = (result.eta, *(end for end in (result.eta_lower, result.eta_upper) if end is not None))
    if not all(np.isfinite(figure[0]) for figure in figures):
        return None, [_not_computable()]
    band = None
    if result.lower is not None and result.upper is not None:
        band = Band(case.level, float(result.lower[0]), float(result.upper[0]), case.line.basis)
    estimate = Estimate(
        eta=float(result.eta[0]),
        probability=float(result.probability[0]),
        complement=float(result.complement[0]),
        band=band,
        band_absent_because="" if band else say_no_band(case.line, case.level, case.adjustment),
    )
    terms = frozenset(place for place, column in enumerate(design) if column[0] != 0)
    return estimate, _said_beside(case, recalibration, terms, band)


def _average(
    case: Case, recalibration: Recalibration | None, open: tuple[Field, ...]
) -> tuple[Estimate | None, list[Finding]]:
    """The number averaged over values that were not measured; none where nobody described what to expect of them."""
    people = case.equation.people
    cloud = None if people is None else cloud_of(case, open, people)
    if people is None or cloud is None:
        return None, [*say_undescribed(case, open)]
    result = average(case, open, cloud, people.source)
    if result is None:
        return None, [_not_computable()]
    band = None
    if result.lower is not None and result.upper is not None:
        band = Band(case.level, result.lower, result.upper, case.line.basis)

    def result_at(id: str, value: float) -> str:
        there = integrate(moved_case(case, {id: value}), open, people)
        return "no number" if there is None else percent(there.probability, there.complement)

    estimate = Estimate(
        eta=result.eta,
        probability=result.probability,
        complement=result.complement,
        band=band,
        band_absent_because="" if band else say_no_band(case.line, case.level, case.adjustment),
        not_measured=result.not_measured,
    )
    beside = _said_beside(case, recalibration, result.terms, band, open, result_at)
    return estimate, [*say_averaged(open, result), *beside]


def _said_beside(
    case: Case,
    recalibration: Recalibration | None,
    terms: frozenset[int],
    band: Band | None,
    open: tuple[Field, ...] = (),
    result_at: ResultAt | None = None,
) -> list[Finding]:
    """The findings that come with a number."""
    basis = Basis(
        equation=case.equation,
        span=case.line.span,
        recalibration=recalibration,
        numbers=case.numbers,
        answers=case.answers,
        terms=terms,
        worked_out=frozenset(case.worked_out) & case.equation.uses,
        open=frozenset(field.id for field in open),
        compared=dict(case.compared),
    )
    imprecise = band and case.adjustment and case.adjustment.covariance is None
    near = find_near_cuts(case.model, case.equation, case.line, case.adjustment, case.columns, case.numbers, result_at)
    return [*near, *equation_cautions(case.model, basis), *([say_imprecise_recalibration()] if imprecise else [])]


def _not_computable() -> Finding:
    message = "The model’s equation has no finite result for these values, so there is no number. Tell its author."
    return Finding(Grade.STOP, FindingCode.NOT_COMPUTABLE, "", message)


def say_imprecise_recalibration() -> Finding:
    """The note that goes with a band in which the recalibration's own imprecision is missing."""
    message = "The imprecision of the recalibration is not in the band: its source prints none."
    return Finding(Grade.NOTE, FindingCode.RECALIBRATION_PRECISION, "recalibration", message)
