"""Standard errors of coefficients from the intervals that a paper prints beside them."""

from collections.abc import Iterator
from dataclasses import dataclass
from math import exp, isfinite, log
from statistics import NormalDist

from clinicalc.coefficients.pointers import quoted
from clinicalc.coefficients.schema import Equation, Interval, Term
from clinicalc.development.reconstruction_plan import EquationPlan
from clinicalc.errors import Problem


@dataclass(frozen=True, slots=True)
class StandardError:
    """The standard error of a coefficient on the link scale.

    `rounding` is the share of it by which half a unit of the last printed digit at both ends of the interval can move
    it; nought where the standard error itself was given.
    """

    term: str
    value: float
    rounding: float
    printed: bool


def take_standard_errors(
    equation: Equation, place: int, plan: EquationPlan
) -> tuple[tuple[StandardError, ...], tuple[Problem, ...]]:
    """One standard error for each estimated term, in term order, and what is wrong; use the first only without faults.

    SE = (ln U - ln L) / (2 z) from the interval of a ratio, (U - L) / (2 z) from that of a coefficient, z the normal
    quantile of the interval's level.
    """
    base = f"/model/equations/{place}/terms"
    found: list[StandardError] = []
    problems = list(_find_strays(equation, plan, base))
    for index, term in enumerate(equation.terms):
        if term.fixed is True:
            continue
        path = f"{base}/{index}"
        if term.id in plan.standard_errors:
            value = plan.standard_errors[term.id]
            if isfinite(value) and value > 0:
                found.append(StandardError(term.id, value, 0.0, printed=False))
            else:
                text = f"the standard error of {quoted(term.id)} is {quoted(value)}; it must be above 0."
                problems.append(Problem(path, text))
        elif isinstance(term.interval, Interval):
            fault = judge_interval(term, term.interval)
            if fault:
                problems.append(Problem(f"{path}/interval", fault))
            else:
                found.append(_from_interval(term.id, term.interval))
        else:
            problems.append(
                Problem(
                    path,
                    f"{quoted(term.id)} has neither a printed interval nor a standard error. Give one of them, or mark"
                    ' the term "fixed" if it was not estimated.',
                )
            )
    return tuple(found), tuple(problems)


def judge_interval(term: Term, interval: Interval) -> str:
    """What is wrong with the printed interval of a term; "" if nothing is."""
    lower, upper = interval.lower, interval.upper
    ends = f"{quoted(lower)} to {quoted(upper)}"
    if not (isfinite(lower) and isfinite(upper)) or not lower < upper:
        return f"the interval of {quoted(term.id)}, {ends}, has no width above 0: its lower limit must be the smaller."
    ratio = interval.scale == "ratio"
    if ratio and lower <= 0:
        return (
            f"the interval of {quoted(term.id)}, {ends}, is said to be one of a ratio, and a ratio is above 0. Is it"
            ' the interval of the coefficient (scale "link")?'
        )
    estimate = exp(min(term.coefficient, 700.0)) if ratio else term.coefficient
    # as the rule at load has it, on the link scale
    low, high = (log(lower), log(upper)) if ratio else (lower, upper)
    if low <= term.coefficient <= high:
        return ""
    other = term.coefficient if ratio else exp(min(term.coefficient, 700.0))
    slip = ""
    if lower <= other <= upper:
        slip = f' Is its scale "{"link" if ratio else "ratio"}"?'
    what = "the ratio" if ratio else "the coefficient"
    return f"the interval of {quoted(term.id)}, {ends}, does not hold its estimate: {what} is {estimate:.4g}.{slip}"


def _from_interval(term: str, interval: Interval) -> StandardError:
    quantile = NormalDist().inv_cdf(0.5 + interval.level / 2.0)
    half = _half_digit(interval)
    if interval.scale == "ratio":
        width = log(interval.upper) - log(interval.lower)
        moved = half / interval.upper + half / interval.lower
    else:
        width = interval.upper - interval.lower
        moved = 2.0 * half
    return StandardError(term, width / (2.0 * quantile), moved / width, printed=True)


def _half_digit(interval: Interval) -> float:
    """Half a unit of the last printed digit: the one of the two ends that shows more decimals."""
    decimals = max(_count_decimals(interval.lower), _count_decimals(interval.upper))
    return 0.5 * float(f"1e{-decimals}")


def _count_decimals(value: float) -> int:
    mantissa, _, exponent = repr(float(value)).partition("e")
    decimals = len(mantissa.partition(".")[2].rstrip("0"))
    return max(0, decimals - int(exponent or 0))


def _find_strays(equation: Equation, plan: EquationPlan, base: str) -> Iterator[Problem]:
    terms = {term.id for term in equation.terms}
    estimated = {term.id for term in equation.terms if term.fixed is not True}
    for id in set(plan.standard_errors) - estimated:
        yield Problem(base, f"the plan gives a standard error for {quoted(id)}, which is no estimated term.")
    for id in set(plan.means) - terms:
        yield Problem(base, f"the plan gives a mean for {quoted(id)}, which is no term.")
