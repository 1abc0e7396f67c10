"""From a [fit] table of the description, and the files it names, to a `Fit` in the equation's own terms."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import replace
from pathlib import Path

import numpy as np
from msgspec import UnsetType

from clinicalc.coefficients.pointers import quoted
from clinicalc.development.baseline_json import baseline_of_json
from clinicalc.development.baseline_tables import take_baselines
from clinicalc.development.description import FitTable
from clinicalc.development.fit import Fit, FitKind
from clinicalc.development.fit_names import find_intercept, match_terms, take_reference
from clinicalc.development.fit_reading import FitReading, Wanted
from clinicalc.development.fitted import fit_with_intercept, rows_of
from clinicalc.development.horizon_times import match_times
from clinicalc.development.named_figures import NamedMatrix, NamedVector, judge_same_names, take_matrix, take_vector
from clinicalc.development.printed_people import PrintedBand, Slopes
from clinicalc.development.tables import Fault, NumberTable, count_digits, read_number_table
from clinicalc.errors import Problem

FEW_DIGITS = 7
AS_IN_R = "The robust covariance stands beside the terms; the variance of the baseline is the model's, as in R."


def take_fit(table: FitTable, wanted: Wanted, folder: Path) -> tuple[Fit | None, tuple[Problem, ...]]:
    """The fit that a table describes, and every problem met on the way (then there is no fit)."""
    reading = FitReading(table, wanted, folder)
    kind = FitKind(table.kind)
    _check_covariance_kind(reading, kind)
    vector = reading.take("coefficients", table.coefficients, take_vector)
    matrix = _take_covariance(reading)
    if vector is not None and matrix is not None:
        fault = judge_same_names(vector, matrix)
        if fault:
            reading.say("covariance", fault)
    intercept = None if vector is None else find_intercept(reading, kind, vector)
    ids = {} if vector is None else match_terms(reading, vector, intercept)
    reference = take_reference(reading, kind, ids) if set(ids.values()) == set(wanted.terms) else None
    fit = None
    if vector is not None and not reading.problems:
        if kind.has_intercept:
            fit = _with_intercept(reading, kind, vector, matrix, str(intercept), ids, reference)
        else:
            fit = _with_hazard(reading, kind, vector, matrix, ids, reference)
    elif not kind.has_intercept:
        _look_at_baseline(reading)
    if fit is not None and vector is not None:
        fit = replace(fit, remarks=(*fit.remarks, *_tell_digits(vector)))
    return (None if reading.problems else fit), tuple(reading.problems)


def _tell_digits(vector: NamedVector) -> Iterator[str]:
    digits = count_digits(np.array(list(vector.figures.values())))
    if digits < FEW_DIGITS:
        yield f"The coefficients have at most {digits} significant digits; write.csv gives 15."


def _check_covariance_kind(reading: FitReading, kind: FitKind) -> None:
    table, covariance_kind = reading.table, reading.table.covariance_kind
    if not reading.wanted.band:
        if not isinstance(table.covariance, UnsetType):
            reading.say(
                "covariance", 'the equation says "none" of its uncertainty, and here is a covariance. Keep one.'
            )
        return
    if isinstance(table.covariance, UnsetType):
        reading.say(
            "",
            '"covariance" is missing. In R: write.csv(vcov(fit), ...). Where there is none, the equation '
            "says uncertainty = "
            '{basis = "none", because = "..."}.',
        )
    elif isinstance(covariance_kind, UnsetType):
        reading.say("", '"covariance_kind" is missing: "model" (from the likelihood) or "robust" (sandwich, cluster).')
    elif kind is FitKind.FINE_GRAY and covariance_kind != "robust":
        reading.say(
            "covariance_kind",
            "the covariance of a Fine–Gray fit must be robust: its weights make the model-based one wrong. In R:"
            " coxph(..., weights = fgwt, data = finegray(...)) with cluster(id); vcov(fit) is then the robust one.",
        )


def _take_covariance(reading: FitReading) -> NamedMatrix | None:
    file = reading.table.covariance
    if isinstance(file, UnsetType) or not reading.wanted.band:
        return None
    return reading.take("covariance", file, take_matrix)


def _with_intercept(
    reading: FitReading,
    kind: FitKind,
    vector: NamedVector,
    matrix: NamedMatrix | None,
    intercept: str,
    ids: Mapping[str, str],
    reference: Mapping[str, float] | None,
) -> Fit:
    for part in ("baseline", "times", "interval"):
        if not isinstance(getattr(reading.table, part), UnsetType):
            reading.say(part, f"a {kind} fit has its baseline in the intercept, and no time. Leave this out.")
    if len(reading.wanted.horizons) != 1:
        reading.say(
            "",
            f"a {kind} fit answers for one horizon; the equation has {len(reading.wanted.horizons)}. Fit and describe "
            "each horizon on its own.",
        )
    names = list(ids)
    return fit_with_intercept(
        kind,
        tuple(ids.values()),
        [vector.figures[intercept], *(vector.figures[name] for name in names)],
        None if matrix is None else matrix.in_order([intercept, *names]),
        reference=None if reference is None else [reference[name] for name in names],
        robust=reading.table.covariance_kind == "robust",
    )


def _with_hazard(
    reading: FitReading,
    kind: FitKind,
    vector: NamedVector,
    matrix: NamedMatrix | None,
    ids: Mapping[str, str],
    reference: Mapping[str, float] | None,
) -> Fit | None:
    table = _take_baseline(reading)
    times = _take_times(reading)
    if table is None or times is None:
        return None
    names = tuple(ids)
    if reference is None and ("H" in table.columns or not set(names) <= set(table.columns)):
        reading.say("", _no_reference(names))
        return None
    b = np.array([vector.figures[name] for name in names], dtype=np.float64)
    covariance = None if matrix is None else matrix.in_order(names)
    printed = reading.table.interval
    if not isinstance(printed, UnsetType) and not {"surv", "lower", "upper"} <= set(table.columns):
        reading.say(
            "interval", "the baseline's table has no limits (surv, lower, upper) that this is about. Leave it out."
        )
    robust = reading.table.covariance_kind == "robust"
    band = None if isinstance(printed, UnsetType) else PrintedBand(printed.scale, printed.level)
    taken = take_baselines(table, times, Slopes(names, b, covariance, reference), band)
    if isinstance(taken, Fault):
        reading.say("baseline", taken.message)
        return None
    baselines, remarks = taken
    return Fit(
        kind=kind,
        names=tuple(ids.values()),
        coefficients=tuple(b.tolist()),
        covariance=None if covariance is None else rows_of(covariance),
        robust=robust,
        baselines=baselines,
        remarks=(*remarks, AS_IN_R) if robust and kind is FitKind.COX and "A" in table.columns else remarks,
    )


def _no_reference(names: Sequence[str]) -> str:
    example = ", ".join(f"{quoted(name)} = 0" for name in names[:2])
    return (
        '"reference" is missing: the value of each term at which the baseline hazard holds. It cannot be guessed: R\'s '
        "basehaz() stands at the means of the columns but at 0 for 0/1 ones, unless centered = FALSE. State it, as "
        f'{{{example}, ...}}, or as "zero".'
    )


def _look_at_baseline(reading: FitReading) -> None:
    """Read the baseline only to say what is wrong with the file itself."""
    _take_baseline(reading)
    _take_times(reading)


def _take_baseline(reading: FitReading) -> NumberTable | None:
    file = reading.table.baseline
    if isinstance(file, UnsetType):
        reading.say(
            "", f'"baseline" is missing: a {reading.table.kind} fit has its baseline hazard in a table of its own.'
        )
        return None
    return reading.take("baseline", file, _read_baseline)


def _read_baseline(text: str, is_json: bool) -> NumberTable | Fault:
    return baseline_of_json(text) if is_json else read_number_table(text)


def _take_times(reading: FitReading) -> tuple[float, ...] | None:
    stated = reading.table.times
    times = match_times(reading.wanted.horizons, None if isinstance(stated, UnsetType) else stated)
    if isinstance(times, Fault):
        reading.say("times", times.message)
        return None
    return times
