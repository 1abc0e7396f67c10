"""The sentences about the re-measurement spread, the same in window, print and text."""

from collections.abc import Sequence

from clinicalc.assessment.numerals import join_words, percent_range
from clinicalc.assessment.spread import Spread

SPREAD_NAME = "Re-measurement spread"

SPREAD_MEANING = "Spread: how far the number would move if the same patient were measured again."
"""Stands wherever a spread is drawn or printed, beside what is always said of the band."""


def spread_meaning(spread: Spread | None) -> str:
    """What stands beside a drawn spread, or before there is one; where it has no width, that it promises nothing."""
    moves = spread is None or any(part.link_sd > 0.0 for part in spread.parts)
    return SPREAD_MEANING if spread is None or moves else spread_sentence(spread)


def spread_sentence(spread: Spread, points: Sequence[float] = ()) -> str:
    """The spread with what it says and the values whose variation is in it; `points` are the decision points beside it.

    Where no value moves the number within one SD, as between the cuts of a model, it says so: a spread of no width
    would read as a promise.
    """
    moving = [part for part in spread.parts if part.link_sd > 0.0]
    if not moving:
        values = join_words([in_sentence(part.label) for part in spread.parts], "or")
        return (
            f"{SPREAD_NAME}: within one SD of {values}, up or down, the number stays the same. A larger difference may"
            " still move it."
        )
    values = ", ".join(in_sentence(part.label) for part in moving)
    return (
        f"{SPREAD_NAME} {percent_range(spread.lower, spread.upper, points)}: how far the number would move if the same"
        f" patient were measured again, in {100.0 * spread.level:g} of 100 measurements round the values typed"
        f" ({values})."
    )


def spread_sources(spread: Spread) -> tuple[str, ...]:
    """For each source, which values vary within a person as it states, in the order of the values."""
    by_source: dict[str, list[str]] = {}
    for part in spread.parts:
        by_source.setdefault(part.source.rstrip(". "), []).append(in_sentence(part.label))
    return tuple(
        f"Variation of {join_words(values)} within a person: {source}." for source, values in by_source.items()
    )


def in_sentence(label: str) -> str:
    """A label as it stands inside a sentence: "systolic blood pressure", but "HDL cholesterol"."""
    return label if label[1:2].isupper() else label[:1].lower() + label[1:]
