"""How numbers are written for people: window, print and sentences use these and nothing else."""

from collections.abc import Iterable, Sequence
from math import floor, log10

NARROW_SPACE = "\u202f"
MINUS = "\u2212"
EN_DASH = "\u2013"

MOST_DECIMALS = 6
"""Of a percentage that stands beside a figure close to it."""


def percent(probability: float, complement: float | None = None, *, decimals: int = 1) -> str:
    """A probability as a percentage, with one decimal unless more are asked for; never "0 %" or "100 %".

    `complement` is 1 - probability where that is known more precisely than by subtracting.
    """
    rest = 1.0 - probability if complement is None else complement
    least = float(f"1e-{decimals}")
    text = f"{100.0 * probability:.{decimals}f}"
    if float(text) == 0.0:
        return f"<{least:.{decimals}f}{NARROW_SPACE}%"
    if float(text) == 100.0 or rest < 0.005 * least:
        return f">{100.0 - least:.{decimals}f}{NARROW_SPACE}%"
    return f"{text}{NARROW_SPACE}%"


def percent_beside(probability: float, complement: float | None, points: Iterable[tuple[float, bool]]) -> str:
    """A percentage that stands on the right side of every point beside it; with more decimals only where it must.

    `points` are other probabilities, each with whether this one counts as above it; on it is above. Where even six
    decimals do not tell the two apart, the point's own digits stand for it, after "<" where it lies below.
    """
    beside = tuple(points)
    for decimals in range(1, MOST_DECIMALS + 1):
        text = percent(probability, complement, decimals=decimals)
        if all(_shows_side(text, point, above) for point, above in beside):
            return text
    nearest, above = min(beside, key=lambda place: abs(place[0] - probability))
    return f"{'' if above else '<'}{percent_in_full(nearest)}"


def percent_in_full(probability: float) -> str:
    """A stated probability as a percentage with every digit it was stated with, and one decimal at least."""
    text = f"{100.0 * probability:.9f}".rstrip("0")
    return f"{text}{'0' if text.endswith('.') else ''}{NARROW_SPACE}%"


def percent_of(share: float) -> str:
    """A share of people, or a mean risk, as a percentage with one decimal, "0.0 %" and "100.0 %" included."""
    return f"{100.0 * share:.1f}{NARROW_SPACE}%"


def percent_range(lower: float, upper: float, points: Sequence[float] = ()) -> str:
    """A range of probabilities, the percent sign once where both ends are plain figures.

    Its ends stand on the right side of each of the points, as `percent_beside` writes them.
    """
    low = percent_beside(lower, None, [(point, lower >= point) for point in points])
    high = percent_beside(upper, None, [(point, upper >= point) for point in points])
    if low[0] in "<>" or high[0] in "<>":
        return f"{low} to {high}"
    return f"{low[:-2]}{EN_DASH}{high}"


def of_people(probability: float) -> tuple[int | None, int]:
    """How many of 100 people (of 1000 under 1 %); None where it is fewer than one or all of them."""
    whole = 1000 if probability < 0.01 or probability > 0.99 else 100
    count = round(whole * probability)
    return (None if count in (0, whole) else count), whole


def plain(value: float, digits: int = 3) -> str:
    """A measured number to at least so many significant digits, never in exponent form, with a true minus."""
    if value == 0 or value != value:
        return "0" if value == 0 else "not a number"
    decimals = max(0, digits - 1 - floor(log10(abs(value))))
    text = f"{value:.{min(decimals, 12)}f}"
    if "." in text:
        text = text.rstrip("0").rstrip(".")
    return text.replace("-", MINUS)


def plain_range(low: float | None, high: float | None, unit: str = "") -> str:
    """A range of measured numbers with its unit; an open side is said in words."""
    after = f" {unit}" if unit else ""
    if low is None and high is None:
        return "any value"
    if low is None:
        return f"up to {plain(high or 0.0)}{after}"
    if high is None:
        return f"{plain(low)}{after} and above"
    if low == high:
        return f"{plain(low)}{after}"
    dash = f" {EN_DASH} " if low < 0 else EN_DASH
    return f"{plain(low)}{dash}{plain(high)}{after}"


def join_words(words: list[str], last: str = "and") -> str:
    """A list as it stands in a sentence: "a, b and c"."""
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} {last} {words[-1]}"


def _shows_side(text: str, point: float, above: bool) -> bool:
    """Whether a percentage as written lies where it should beside a point; "<" and ">" reach to their end."""
    sign = text[0] if text[0] in "<>" else ""
    figure, beside = float(text[len(sign) : -2]), round(100.0 * point, 9)
    if sign:
        return figure <= beside if sign == "<" and not above else sign == ">" and above and figure >= beside
    return (figure >= beside) == above
