"""A comparison in words: what was changed, both numbers, people, the difference with its band."""

from collections.abc import Sequence

from clinicalc.assessment.comparison import Comparison, Side
from clinicalc.assessment.numerals import MINUS, percent_beside, percent_range
from clinicalc.report.phrases import level_words

NO_PROMISE = "This compares people who differ in these values; it does not promise what changing them brings."
"""Stands beside every comparison."""

_MOST_DECIMALS = 4
"""Of a difference in percentage points: beyond, it is only said to be smaller than the last of them."""


def comparison_sentences(comparison: Comparison, points: Sequence[float] = ()) -> tuple[str, ...]:
    """Everything about a comparison in reading order; `points` are the decision points beside its numbers."""
    said = (
        changes_sentence(comparison),
        sides_sentence(comparison, points),
        people_words(comparison),
        difference_sentence(comparison),
    )
    return tuple(sentence for sentence in said if sentence)


def changes_sentence(comparison: Comparison) -> str:
    """What was changed: "Changed: Smokes now, No instead of Yes."; "" where there is no comparison."""
    if comparison.own is None:
        return ""
    if not comparison.changes:
        return "Changed: nothing; every changed value is the one that was entered."
    parts = (
        f"{change.label}{'' if change.label.endswith('?') else ','} {change.changed} instead of {change.own}"
        for change in comparison.changes
    )
    return f"Changed: {'; '.join(parts)}."


def sides_sentence(comparison: Comparison, points: Sequence[float] = ()) -> str:
    """Both numbers, the changed one with its band: "12.3 % as entered, 6.8 % with the changes (95 % band …)."."""
    own, changed = comparison.own, comparison.changed
    if own is None or changed is None:
        return ""
    band = side_band_words(changed, comparison.level, points)
    after = f" ({band})" if band else ""
    return f"{side_words(own, points)} as entered, {side_words(changed, points)} with the changes{after}."


def people_words(comparison: Comparison) -> str:
    """Both numbers and their difference as counts of people, then what a comparison does not promise.

    "" where there is no comparison. Counted are 100 people, or 1000 where a count of 100 would be nought or all of
    them, or where its figures would not subtract to the difference.
    """
    own, changed, apart = comparison.own, comparison.changed, comparison.difference
    if own is None or changed is None or apart is None:
        return ""
    whole = 100 if _fits(100, own.probability, changed.probability, apart) else 1000
    counts = f"{_count(whole, own)} as entered, {_count(whole, changed)} with the changes"
    return f"Of {whole} people: {counts}, {_more_or_fewer(whole, own, changed, apart)}. {NO_PROMISE}"


def difference_sentence(comparison: Comparison) -> str:
    """The difference in percentage points with its band, or why there is none: "Difference −5.1 points, …"."""
    apart, low, high = comparison.difference, comparison.difference_lower, comparison.difference_upper
    if apart is None:
        return f"No comparison: {comparison.because}"
    if apart == 0.0 and low in (None, 0.0) and high in (None, 0.0):
        return "Difference 0 points: for the model these values make no difference here."
    figure, band = difference_words(comparison), difference_band_words(comparison)
    after = f", {band}." if band else f". No band of it: {comparison.because}"
    return f"Difference {figure} points{after}"


def difference_words(comparison: Comparison) -> str:
    """The difference in percentage points with its sign, as many decimals as its band: "−6.2"; "" without numbers."""
    return "" if comparison.difference is None else _difference_figures(comparison)[0]


def difference_band_words(comparison: Comparison) -> str:
    """The band of the difference: "95 % band −8.5 to −4.0 points"; "" without one."""
    if comparison.difference is None or comparison.difference_lower is None or comparison.difference_upper is None:
        return ""
    _, lower, upper = _difference_figures(comparison)
    return f"{level_words(comparison.level)} band {lower} to {upper} points"


def side_words(side: Side, points: Sequence[float] = ()) -> str:
    """One of the two numbers as a percentage, on its side of each of the decision points."""
    return percent_beside(side.probability, side.complement, [(point, side.probability >= point) for point in points])


def side_band_words(side: Side, level: float, points: Sequence[float] = ()) -> str:
    """The band of one of the two numbers: "95 % band 4.5–7.9 %"; "" without one."""
    if side.lower is None or side.upper is None:
        return ""
    return f"{level_words(level)} band {percent_range(side.lower, side.upper, points)}"


def _fits(whole: int, own: float, changed: float, apart: float) -> bool:
    """Whether counts out of so many people are neither none nor all, and subtract to the rounded difference."""
    counts = [round(whole * share) for share in (own, changed)]
    kept = all(0.01 <= share <= 0.99 for share in (own, changed))
    return kept and counts[1] - counts[0] == round(whole * apart)


def _count(whole: int, side: Side) -> str:
    count = round(whole * side.probability)
    if count == 0:
        return "fewer than 1"
    return str(count) if count < whole else "all but fewer than 1"


def _more_or_fewer(whole: int, own: Side, changed: Side, apart: float) -> str:
    if apart == 0.0:
        return "the same"
    counts = [round(whole * side.probability) for side in (own, changed)]
    count = abs(counts[1] - counts[0])
    if count == 0 or abs(apart) * whole < 0.5:
        return f"fewer than 1 in {whole} apart"
    return f"{count} {'more' if apart > 0 else 'fewer'}"


def _difference_figures(comparison: Comparison) -> list[str]:
    """The difference and the ends of its band, all to one decimal, or to as many as show the sign of each."""
    ends = (comparison.difference, comparison.difference_lower, comparison.difference_upper)
    shares = [end for end in ends if end is not None]
    least = min((abs(share) for share in shares if share != 0.0), default=1.0)
    decimals = 1
    while decimals < _MOST_DECIMALS and round(100.0 * least, decimals) == 0.0:
        decimals += 1
    return [_point(share, decimals) for share in shares]


def _point(share: float, decimals: int) -> str:
    text = f"{abs(100.0 * share):.{decimals}f}"
    if share == 0.0:
        return text
    sign = MINUS if share < 0.0 else "+"
    if float(text) == 0.0:
        return f"{'just below' if share < 0.0 else 'just above'} 0"
    return f"{sign}{text}"
