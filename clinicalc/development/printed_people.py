"""The baseline of a hazard fit solved from what survfit prints for several people: survival and its standard error."""

from collections.abc import Mapping
from dataclasses import dataclass
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.development.fit import FitBaseline
from clinicalc.development.squares import Square, find_tied, square_of_people
from clinicalc.development.tables import Fault, NumberTable, count_digits

Array = NDArray[np.float64]

AGREEMENT = 1e-6
"""How far a printed log hazard (absolutely) or variance (relatively) may lie from what the other rows say."""
FEWEST_DIGITS = 8

PEOPLE_WANTED = (
    "Print survival and its standard error for several people: one at the reference, one more for every term with that"
    " term raised by one, and best one with all of them raised; with columns for the terms, as the guide's page on"
    " packaging does."
)


@dataclass(frozen=True, slots=True, eq=False)
class Slopes:
    """What a baseline is made with: names, coefficients of shape (p,), their covariance or None, the reference."""

    names: tuple[str, ...]
    coefficients: Array
    covariance: Array | None
    reference: Mapping[str, float] | None

    @property
    def reference_row(self) -> Array | None:
        """The reference point in the order of the names."""
        if self.reference is None:
            return None
        return np.array([self.reference[name] for name in self.names], dtype=np.float64)


@dataclass(frozen=True, slots=True)
class PrintedBand:
    """How the limits beside a printed survival were made: R's conf.type, and their level."""

    scale: str
    level: float


Made = tuple[FitBaseline, str] | Fault
"""A baseline with a remark on how it was checked ("" for none), or why there is none."""


def solve_people(part: NumberTable, time: float, slopes: Slopes, printed: PrintedBand | None) -> Made:
    """The baseline at one time from the rows of that time; with a covariance its variance and centre too."""
    at = f"at time {time:g}"
    hazards = _hazards(part)
    if isinstance(hazards, Fault):
        return Fault(f"{at}: {hazards.message}")
    x = _people(part, slopes)
    if isinstance(x, Fault):
        return x  # the same at every time
    lps = np.log(hazards) - (x * slopes.coefficients).sum(axis=1)
    apart = float(lps.max() - lps.min())
    if not apart <= AGREEMENT:
        return Fault(
            f"{at} the rows do not agree with the coefficients: log H less x'b should be the same in each and differs"
            f" by {apart:.3g}. Are the values of the terms those that were predicted for, in the fit's own coding,"
            " with all the digits, and from the same fit?"
        )
    if slopes.covariance is None:
        return FitBaseline(time, float(lps.mean())), ""
    spreads = _spreads(part, hazards, printed)
    if isinstance(spreads, Fault):
        return Fault(f"{at}: {spreads.message}")
    if not np.isfinite(spreads * spreads).all():
        return Fault(f"{at}: a standard error is not finite beside its estimate.")
    square = square_of_people(x, spreads * spreads, slopes.covariance)
    fault = _judge_square(square, x, slopes, at)
    if fault or square is None:
        return Fault(fault)
    left = len(x) - len(slopes.names) - 1
    remark = (
        f"The standard errors were checked with {left} more {'person' if left == 1 else 'people'} than needed."
        if left
        else "The table has just as many people as are needed, so nothing checked its standard errors; add one more."
    )
    return FitBaseline(time, float(lps.mean()), square.variance, tuple(square.centre.tolist())), remark


def _judge_square(square: Square | None, x: Array, slopes: Slopes, at: str) -> str:
    if square is None:
        size = len(slopes.names)
        tied = listed(quoted(slopes.names[place]) for place in find_tied(x))
        return (
            f"{at} the people of the {len(x)} row{'s' * (len(x) > 1)} do not settle the band: it takes {size + 1} for"
            f" {size} terms, who differ in each independently of the others, and these do not in {tied}."
            f" {PEOPLE_WANTED}"
        )
    if not square.misfit <= AGREEMENT:
        return (
            f"{at} the standard errors do not agree with each other and the covariance (by {square.misfit:.2g} of a"
            " variance). Is the covariance the one that survfit used (vcov of the same fit, robust where the fit is),"
            ' and is "std.err" that of survival, as summary(survfit(...)) gives it, not that of the cumulative hazard'
            ' ("std.chaz")?'
        )
    if not square.variance > 0:
        return (
            f"{at} the variance of the baseline itself comes out as {square.variance:.4g}; it is more than 0. The "
            "standard errors and the covariance are not from the same fit."
        )
    return ""


def _people(part: NumberTable, slopes: Slopes) -> Array | Fault:
    """The terms of each row, shape (rows, p): from the columns, or the reference where there are none."""
    reference = slopes.reference_row
    if all(name in part.columns for name in slopes.names):
        x = np.column_stack([part.column(name) for name in slopes.names])
        if reference is not None and not (x == reference).all(axis=1).any():
            return Fault("no row is at the reference that the description states. One of the two is mistyped.")
        return x
    if reference is None:
        return Fault("neither columns for the terms nor a reference say for whom it was printed.")
    if len(part.values) != 1:
        return Fault(f"{len(part.values)} rows stand here, without columns for the terms that would tell them apart.")
    return reference.reshape(1, -1)


def _hazards(part: NumberTable) -> Array | Fault:
    """The cumulative hazards H of the rows."""
    if "cumhaz" in part.columns:
        hazards = part.column("cumhaz")
        if (hazards <= 0).any():
            return Fault(f"the cumulative hazard is {quoted(float(hazards.min()))}; it is more than 0 after an event.")
        if "surv" in part.columns and not (np.abs(-np.log(part.column("surv")) / hazards - 1) <= AGREEMENT).all():
            return Fault('"surv" is not exp(-cumhaz). Leave one of the two out; R: survfit(..., stype = 2).')
        return hazards
    if "surv" not in part.columns:
        return Fault('there is no column "surv" or "cumhaz".')
    survival = part.column("surv")
    wrong = survival[(survival <= 0) | (survival >= 1)]
    if wrong.size:
        slip = " Is it a percentage?" if (wrong > 1).any() else ""
        return Fault(f"the survival is {quoted(float(wrong[0]))}; it lies between 0 and 1.{slip}")
    return np.asarray(-np.log(survival), dtype=np.float64)


def _spreads(part: NumberTable, hazards: Array, printed: PrintedBand | None) -> Array | Fault:
    """The standard errors of log H: se(H)/H, se(S)/(S |ln S|), or from limits on the scale they were made on."""
    if "cumhaz" in part.columns and "std.chaz" in part.columns:
        column, errors = part.column("std.chaz"), part.column("std.chaz") / hazards
    elif "surv" in part.columns and "std.err" in part.columns:
        column = part.column("std.err")
        errors = column / (part.column("surv") * hazards)
    elif {"surv", "lower", "upper"} <= set(part.columns):
        return _from_limits(part, hazards, printed)
    else:
        return Fault(f'"surv" with "std.err", or "cumhaz" with "std.chaz", is missing. {PEOPLE_WANTED}')
    if (errors <= 0).any():
        return Fault(f"a standard error is {quoted(float(column.min()))}; it is more than 0.")
    if printed is not None and {"surv", "lower", "upper"} <= set(part.columns):
        limits = _from_limits(part, hazards, printed)
        if isinstance(limits, Fault):
            return limits
        if not (np.abs(limits / errors - 1) <= AGREEMENT).all():
            return Fault("the limits and the standard errors beside them are not of one band.")
    return _judge_digits(column) or errors


def _from_limits(part: NumberTable, hazards: Array, printed: PrintedBand | None) -> Array | Fault:
    survival, lower, upper = (part.column(name) for name in ("surv", "lower", "upper"))
    outside = np.flatnonzero((lower > survival) | (upper < survival) | (lower >= upper))
    if outside.size:
        row = outside[0]
        return Fault(
            f"the interval {quoted(float(lower[row]))} to {quoted(float(upper[row]))} does not contain its estimate "
            f"{quoted(float(survival[row]))}."
        )
    if printed is None:
        return Fault(
            'say how the limits were made: interval = {scale = "log-log", level = 0.95} (R: conf.type, conf.int).'
        )
    z = NormalDist().inv_cdf((1 + printed.level) / 2)
    if (lower <= 0).any() or (printed.scale == "log-log" and (upper >= 1).any()):
        return Fault("a limit is 0 or 1 and says nothing; print the standard errors.")
    if printed.scale == "log-log":
        errors = (np.log(-np.log(lower)) - np.log(-np.log(upper))) / (2 * z)
        skew = np.abs(np.log(-np.log(lower)) + np.log(-np.log(upper)) - 2 * np.log(hazards))
        if float((skew / errors).max()) > 1e-4:
            return Fault(
                'the limits do not lie evenly about the estimate on the log-log scale; R\'s own default is "log".'
            )
    else:
        errors = (np.log(survival) - np.log(lower)) / (z * hazards)  # R cuts the upper limit at 1
        if float(np.abs(np.minimum(1, survival * survival / lower) - upper).max()) > 1e-4:
            return Fault("the limits do not lie evenly about the estimate on the log scale; are they log-log limits?")
    return _judge_digits(lower) or np.asarray(errors, dtype=np.float64)


def _judge_digits(column: Array) -> Fault | None:
    digits = count_digits(column)
    if digits >= FEWEST_DIGITS:
        return None
    return Fault(
        f"the standard errors or limits were printed to {digits} significant digits, too few to solve for the band. "
        "write.csv writes 15; a printed summary does not."
    )
