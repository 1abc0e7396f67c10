"""The baseline of a hazard fit, from its running sums H, A and q, or from what was printed for several people."""

import math
from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.development.fit import FitBaseline
from clinicalc.development.printed_people import PEOPLE_WANTED, Made, PrintedBand, Slopes, solve_people
from clinicalc.development.squares import square_of_sums
from clinicalc.development.tables import Fault, NumberTable

Array = NDArray[np.float64]

MOMENT = "q."
_UNUSED = ("n.risk", "n.event", "n.censor")
_SUMS = ("time", "H", "A")
_PRINTED = ("time", "surv", "std.err", "lower", "upper", "cumhaz", "std.chaz")


def take_baselines(
    table: NumberTable, times: Sequence[float], slopes: Slopes, printed: PrintedBand | None
) -> tuple[tuple[FitBaseline, ...], tuple[str, ...]] | Fault:
    """A baseline for each of the times, and remarks on what was checked. A Fault says all that is wrong."""
    stands = sorted({float(time) for time in table.column("time")}) if "time" in table.columns else []
    if not stands:
        return Fault('the table has no column "time".')
    absent = [time for time in times if time not in stands]
    if absent:
        return Fault(
            f"there is no row at time {listed((f'{time:g}' for time in absent), 'or')}; the table has "
            f"{listed(f'{time:g}' for time in stands[:8])}. Print the baseline at the horizon's own time, or say "
            '"times" where the fit counts time otherwise than the horizons do (days for years, say).'
        )
    is_sums = "H" in table.columns
    fault = _judge_columns(table, slopes, is_sums)
    if fault:
        return Fault(fault)
    with np.errstate(all="ignore"):  # what is not finite is said in words
        made = list(_from_sums(table, times, slopes) if is_sums else _from_people(table, times, slopes, printed))
    faults = [answer.message for answer in made if isinstance(answer, Fault)]
    if faults:
        return Fault(" ".join(dict.fromkeys(faults)))
    pairs = [answer for answer in made if not isinstance(answer, Fault)]
    return tuple(baseline for baseline, _ in pairs), tuple(dict.fromkeys(remark for _, remark in pairs if remark))


def _judge_columns(table: NumberTable, slopes: Slopes, is_sums: bool) -> str:
    about = [f"{MOMENT}{name}" for name in slopes.names] if is_sums else list(slopes.names)
    known = {*(_SUMS if is_sums else _PRINTED), *about, *_UNUSED}
    strange = [name for name in table.columns if name not in known]
    if "hazard" in strange:
        return "this is what basehaz() gives: a hazard without what its band is made of. " + PEOPLE_WANTED
    if strange:
        return (
            f"the column {quoted(strange[0])} is not known here. Beside {listed(about)} there may be "
            f"{listed(_SUMS if is_sums else _PRINTED)}."
        )
    here = [name for name in about if name in table.columns]
    absent = [name for name in about if name not in table.columns]
    needed = slopes.covariance is not None
    if absent and (here or needed):
        what = "the sums q of every term" if is_sums else "the value of every term in each row"
        more = "" if is_sums else f" {PEOPLE_WANTED}"
        return f"the column{'s' * (len(absent) > 1)} {listed(map(quoted, absent))} {_is(absent)} missing: {what}.{more}"
    if is_sums and needed and "A" not in table.columns:
        return 'the column "A" is missing: the sum of the squared increments of H.'
    return ""


def _is(names: Sequence[str]) -> str:
    return "is" if len(names) == 1 else "are"


def _from_sums(table: NumberTable, times: Sequence[float], slopes: Slopes) -> Iterator[Made]:
    reference = slopes.reference_row
    for time in times:
        rows = np.flatnonzero(table.column("time") == time)
        at = f"at time {time:g}"
        hazard = float(table.column("H")[rows[0]])
        if len(rows) != 1:
            yield Fault(f"{at} stand {len(rows)} rows; sums have one.")
        elif hazard <= 0:
            yield Fault(f"{at} the cumulative hazard H is {quoted(hazard)}; it is more than 0 once there was an event.")
        elif reference is not None:
            lp0 = math.log(hazard) - float((reference * slopes.coefficients).sum())
            yield _complete_sums(table, int(rows[0]), slopes, reference, lp0)


def _complete_sums(table: NumberTable, row: int, slopes: Slopes, reference: Array, lp0: float) -> Made:
    time, hazard = float(table.column("time")[row]), float(table.column("H")[row])
    if slopes.covariance is None:
        return FitBaseline(time, lp0), ""
    squares = float(table.column("A")[row])
    if squares <= 0:
        return Fault(f"at time {time:g} the sum A is {quoted(squares)}; a sum of squares is more than 0.")
    if squares > hazard * hazard * (1 + 1e-12):
        return Fault(
            f"at time {time:g} A is {quoted(squares)}, more than the square of H ({quoted(hazard * hazard)}): it is"
            " the sum of the squares of the increments of H. Is it a standard error, are H and A exchanged, or do case"
            " weights add up to 1 and not to the number of people?"
        )
    moments = np.array([table.column(f"{MOMENT}{name}")[row] for name in slopes.names], dtype=np.float64)
    square = square_of_sums(hazard, squares, moments)
    if not (np.isfinite(square.variance) and np.isfinite(square.centre).all()):
        return Fault(f"at time {time:g} the sums are too far from each other in size to be those of one fit.")
    return FitBaseline(time, lp0, square.variance, tuple((reference + square.centre).tolist())), ""


def _from_people(
    table: NumberTable, times: Sequence[float], slopes: Slopes, printed: PrintedBand | None
) -> Iterator[Made]:
    for time in times:
        rows = np.flatnonzero(table.column("time") == time)
        part = NumberTable(table.columns, (), table.values[rows])
        yield solve_people(part, time, slopes, printed)
