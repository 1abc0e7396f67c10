"""How numbers are written for people: window, print and sentences use these and nothing else."""

from math import floor, log10

NARROW_SPACE = "\u202f"
MINUS = "\u2212"
EN_DASH = "\u2013"


def percent(probability: float, complement: float | None = None) -> str:
    """A probability as a percentage with one decimal; never "0 %" or "100 %".

    `complement` is 1 - probability where that is known more precisely than by subtracting.
    """
    rest = 1.0 - probability if complement is None else complement
    text = f"{100.0 * probability:.1f}"
    if text == "0.0":
        return f"<0.1{NARROW_SPACE}%"
    if text == "100.0" or rest < 0.0005:
        return f">99.9{NARROW_SPACE}%"
    return f"{text}{NARROW_SPACE}%"


def percent_range(lower: float, upper: float) -> str:
    """A range of probabilities, the percent sign once where both ends are plain figures."""
    low, high = percent(lower), percent(upper)
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
