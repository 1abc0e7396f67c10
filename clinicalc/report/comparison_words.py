"""A comparison in words beside its drawing: for a screen reader, and for the table behind it."""

from collections.abc import Sequence

from clinicalc.assessment.comparison import Comparison, Side
from clinicalc.report.phrases_comparison import difference_band_words, difference_words, side_band_words, side_words


def compare_sentence(comparison: Comparison, own: Side, changed: Side, points: Sequence[float] = ()) -> str:
    """The comparison for a screen reader; `points` are the decision points beside its numbers, as probabilities."""
    parts = [
        f"As entered {_with_band(own, comparison, points)}; with changes {_with_band(changed, comparison, points)}",
        f"difference {difference_words(comparison)} percentage points",
        difference_band_words(comparison),
    ]
    return "; ".join(filter(None, parts))


def compare_table(
    comparison: Comparison, own: Side, changed: Side, points: Sequence[float] = ()
) -> tuple[tuple[str, ...], ...]:
    """Every changed value, both numbers with their bands, and the difference with its own; two texts a row."""
    band = difference_band_words(comparison)
    return (
        *((change.label, f"{change.own}, changed to {change.changed}") for change in comparison.changes),
        ("As entered", _with_band(own, comparison, points)),
        ("With changes", _with_band(changed, comparison, points)),
        ("Difference", f"{difference_words(comparison)} percentage points{f', {band}' if band else ''}"),
    )


def _with_band(side: Side, comparison: Comparison, points: Sequence[float]) -> str:
    return ", ".join(filter(None, (side_words(side, points), side_band_words(side, comparison.level, points))))
