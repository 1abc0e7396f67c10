"""A study as one JSON object, for programs that run the command: data problems, fits, the file that was made."""

from pathlib import Path

from clinicalc.cohort.checked import CheckedCohort
from clinicalc.cohort.problems import DataProblem
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit import Fit
from clinicalc.development.package import Package
from clinicalc.development.study_figures import FitFigures
from clinicalc.estimation.screened import Screened
from clinicalc.estimation.screening_words import word_screened
from clinicalc.operations.study_method_record import (
    record_imputation,
    record_incidence,
    record_optimism,
    record_penalty,
)

Tree = dict[str, object]


def record_data(cohort: CheckedCohort) -> Tree:
    """The people and everything found about them."""
    return {"people": cohort.rows, "problems": [_problem(problem) for problem in cohort.problems]}


def record_fits(fitted: FittedStudy) -> list[Tree]:
    """Each fit with its figures, coefficients and findings."""
    return [_fit(figures, fitted.fits[figures.equations[0]]) for figures in fitted.figures]


def record_package(package: Package, out: Path | None) -> Tree:
    """What was made: where it was put (null where nowhere), its fingerprint, its signatures, remarks."""
    return {
        "file": None if out is None else str(out),
        "fingerprint": package.model.fingerprint,
        "signatures": len(package.content.signatures),
        "remarks": list(package.remarks),
    }


def _problem(problem: DataProblem) -> Tree:
    return {
        "gravity": str(problem.gravity),
        "column": problem.column,
        "code": str(problem.code),
        "count": problem.count,
        "lines": list(problem.rows),
        "sentence": problem.sentence,
    }


def _fit(figures: FitFigures, fit: Fit) -> Tree:
    c, follow = figures.concordance, figures.follow_up
    return {
        "id": figures.id,
        "equations": list(figures.equations),
        "kind": figures.kind,
        "people": figures.people,
        "events": figures.events,
        "competing": figures.competing,
        "applicable": figures.left_out.applicable,
        "left_out": figures.left_out.left_out,
        "missing": dict(figures.left_out.missing),
        "log_likelihood": figures.loglik,
        "log_likelihood_null": figures.loglik_null,
        "c": None if c is None else {"value": c.c, "standard_error": c.se},
        "follow_up": None
        if follow is None
        else {"median": follow.median, "longest": follow.longest, "unit": follow.unit},
        "terms": list(fit.names),
        "coefficients": list(fit.coefficients),
        "covariance": None if fit.covariance is None else [list(row) for row in fit.covariance],
        "horizons": [
            {
                "equation": at.equation,
                "time": at.span.time,
                "unit": at.span.unit,
                "events": at.events,
                "still_at_risk": at.still_at_risk,
            }
            for at in figures.horizons
        ],
        "penalty": record_penalty(figures.penalty),
        "imputation": record_imputation(figures.imputed),
        "bootstrap": record_optimism(figures.optimism),
        "incidences": [record_incidence(one) for one in figures.incidences],
        "minimum_people": None if figures.minimum is None else figures.minimum.people,
        "findings": [_finding(one) for one in figures.screened],
    }


def _finding(one: Screened) -> Tree:
    return {
        "gravity": str(one.gravity),
        "columns": list(one.columns),
        "code": str(one.code),
        "sentence": word_screened(one),
    }
