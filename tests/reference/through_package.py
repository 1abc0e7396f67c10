"""R's figures written as R's tables with a description beside them, and packaged as a researcher would."""

import math
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

from clinicalc.assessment.model import Model
from clinicalc.development.description import read_description
from clinicalc.development.package import package_model
from tests.development.describing import (
    bare_number,
    linear_terms,
    plain_model,
    write_description,
    write_matrix,
    write_rows,
    write_vector,
)
from tests.reference.figures import BinaryFit, HazardFit, Matrix, Row, SubdistributionFit, SubdistributionLimits
from tests.reference.packaging import STRATUM, texts

INTERCEPT = "(Intercept)"


def package_binary_tables(fit: BinaryFit, folder: Path, robust: Matrix | None = None) -> Model:
    """A binomial fit by way of coef.csv and vcov.csv."""
    names = (INTERCEPT, *fit.predictors)
    _write_fit(folder, names, fit.coefficients, fit.covariance if robust is None else robust)
    equation = {"id": "all", "competing_events": {"handled": "not_applicable"}, "horizons": [{"years": 1}]}
    table = {
        "kind": "logistic" if fit.link == "logit" else "cloglog",
        **_TABLES,
        "covariance_kind": "model" if robust is None else "robust",
    }
    tree = plain_model(
        fit.source, [bare_number(name) for name in fit.predictors], [equation | {"terms": linear_terms(fit.predictors)}]
    )
    first = fit.predictions[0]
    printed = {"probability": first.probability, "tolerance": 1e-9, "source": fit.source}
    person = {"values": texts(fit.predictors, fit.profiles[first.profile]), **printed}
    return _package(folder, tree | {"fit": {"all": table}, "patients": [person]})


def package_sums(fit: HazardFit, folder: Path) -> Model:
    """A proportional hazards fit by way of the sums H, A and q at its reference point, one table a stratum."""
    columns = ["time", "H", "A", *(f"q.{name}" for name in fit.predictors)]
    for stratum in fit.strata:
        sums = [baseline for baseline in fit.baselines if baseline.stratum == stratum]
        write_rows(folder / f"{stratum}.csv", columns, [(each.time, each.H, each.A, *each.q) for each in sums])
    reference = dict(zip(fit.predictors, fit.x_ref, strict=True))
    return _package_hazards(fit, folder, {"reference": reference})


def package_printed_people(fit: HazardFit, folder: Path, people: Sequence[int], form: str) -> Model:
    """The same by way of what survfit printed for some of the profiles, numbered; `form` says which columns."""
    rows = []
    for shown in fit.predictions:
        if shown.profile in people:
            h, s, se = shown.cumulative_hazard, shown.survival, shown.se_cumulative_hazard
            figures = {"cumhaz": (h, se), "surv": (s, s * se), "limits": (s, *shown.loglog)}[form]
            rows.append((shown.time, *figures, *fit.profiles[shown.profile].values))
    names = {"cumhaz": ["cumhaz", "std.chaz"], "surv": ["surv", "std.err"], "limits": ["surv", "lower", "upper"]}[form]
    write_rows(folder / "all.csv", ["time", *names, *fit.predictors], rows)
    more = {"interval": {"scale": "log-log", "level": 0.95}} if form == "limits" else {}
    return _package_hazards(fit, folder, more)


def package_incidences(fit: SubdistributionFit, folder: Path) -> Model:
    """A subdistribution hazards fit without a band, by way of cumulative hazards with every predictor at 0."""
    write_vector(folder / "coef.csv", dict(zip(fit.predictors, fit.coefficients, strict=True)))
    write_rows(folder / "all.csv", ["time", "H"], list(zip(fit.times, fit.cumulative_hazards, strict=True)))
    equation = _fine_gray_equation(fit.predictors, fit.times, fit.unit)
    equation["uncertainty"] = {"basis": "none", "because": "Limits are not part of this comparison."}
    table = {"kind": "fine-gray", "coefficients": "coef.csv", "baseline": "all.csv", "reference": "zero"}
    tree = plain_model(fit.source, [bare_number(name) for name in fit.predictors], [equation])
    person = {"values": texts(fit.predictors, fit.profiles[0])}
    return _package(folder, tree | {"fit": {"all": table}, "patients": [person]})


def package_incidence_limits(fit: SubdistributionLimits, folder: Path) -> Model:
    """A subdistribution hazards fit by way of what survfit printed for its profiles."""
    _write_fit(folder, fit.predictors, fit.coefficients, fit.robust_covariance)
    rows = [
        (shown.time, -math.log1p(-shown.probability), shown.se_cumulative_hazard, *fit.profiles[shown.profile])
        for shown in fit.predictions
    ]
    write_rows(folder / "all.csv", ["time", "cumhaz", "std.chaz", *fit.predictors], rows)
    table = {"kind": "fine-gray", **_TABLES, "covariance_kind": "robust", "baseline": "all.csv"}
    times = tuple(dict.fromkeys(shown.time for shown in fit.predictions))
    equation = _fine_gray_equation(fit.predictors, times, fit.unit)
    tree = plain_model(fit.source, [bare_number(name) for name in fit.predictors], [equation])
    person = {"values": texts(fit.predictors, fit.profiles[0])}
    return _package(folder, tree | {"fit": {"all": table}, "patients": [person]})


_TABLES = {"coefficients": "coef.csv", "covariance": "vcov.csv"}


def _package_hazards(fit: HazardFit, folder: Path, more: Mapping[str, Any]) -> Model:
    _write_fit(folder, fit.predictors, fit.coefficients, fit.covariance)
    times = list(dict.fromkeys(shown.time for shown in fit.predictions))
    predictors = [bare_number(name) for name in fit.predictors]
    if len(fit.strata) > 1:
        choices = [{"id": stratum, "label": stratum} for stratum in fit.strata]
        predictors.append({"id": STRATUM, "label": "Stratum", "kind": "choice", "group": "Values", "choices": choices})
    equations, tables, people = [], {}, []
    for stratum in fit.strata:
        equation = {
            "id": stratum,
            "competing_events": {"handled": "not_applicable"},
            "terms": linear_terms(fit.predictors),
            "horizons": [{"time": time, "unit": fit.unit} for time in times],
        }
        equations.append(equation | ({} if stratum == "all" else {"applies_when": {STRATUM: [stratum]}}))
        kind = "robust" if fit.robust else "model"
        tables[stratum] = {"kind": "cox", **_TABLES, "covariance_kind": kind, "baseline": f"{stratum}.csv", **more}
        people.append(_printed_person(fit, stratum))
    return _package(folder, plain_model(fit.source, predictors, equations) | {"fit": tables, "patients": people})


def _printed_person(fit: HazardFit, stratum: str) -> dict[str, Any]:
    shown = next(each for each in fit.predictions if fit.profiles[each.profile].stratum == stratum)
    low, high = shown.loglog
    return {
        "values": texts(fit.predictors, fit.profiles[shown.profile].values, stratum),
        "time": shown.time,
        "unit": fit.unit,
        "probability": 1 - shown.survival,
        "lower": 1 - high,
        "upper": 1 - low,
        "tolerance": 1e-9,
        "source": fit.source,
    }


def _fine_gray_equation(names: Sequence[str], times: Sequence[float], unit: str) -> dict[str, Any]:
    return {
        "id": "all",
        "competing_events": {"handled": "subdistribution", "which": "death"},
        "terms": linear_terms(names),
        "horizons": [{"time": time, "unit": unit} for time in times],
    }


def _write_fit(folder: Path, names: Sequence[str], coefficients: Row, covariance: Matrix) -> None:
    write_vector(folder / "coef.csv", dict(zip(names, coefficients, strict=True)))
    # rows and columns in another order than the coefficients: they are matched by name
    back = list(range(len(names)))[::-1]
    write_matrix(folder / "vcov.csv", [names[i] for i in back], [[covariance[i][j] for j in back] for i in back])


def _package(folder: Path, tree: Mapping[str, Any]) -> Model:
    return package_model(read_description(write_description(folder, tree))).model
