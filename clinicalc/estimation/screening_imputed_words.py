"""Sentences about values that were filled in."""

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import plain
from clinicalc.estimation.chained_equations import SETTLED
from clinicalc.estimation.screened import Figure, Screened
from clinicalc.estimation.screening_phrases import Name, word_column, word_count, word_of_all

_MOSTLY = 0.5
"""Share filled in of a column from which more is made up than known."""


def word_filled_in(found: Screened, name: Name) -> str:
    """How many values of a column were filled in."""
    text = (
        f"{word_column(found, name)} was missing for {word_of_all(found)} and was filled in"
        f" {word_count(found, Figure.SETS)} times from the other columns and the outcome."
    )
    if found.gravity is Grade.NOTE:
        return text
    mostly = ""
    if found.figure(Figure.SHARE) > _MOSTLY:
        mostly = " Most of its values are made up, then: a coefficient stands on few people. Consider leaving it out."
    return (
        f"{text} That is right where it is missing for no reason but what is known of a person; say in the"
        f" documentation why it is missing.{mostly}"
    )


def word_not_filled_in(found: Screened, name: Name) -> str:
    """Who was left out all the same."""
    text = (
        f"Left out are {word_of_all(found)}, who lack what is not filled in: the outcome, a choice of several answers,"
        " or a value that cannot be worked out from what they have."
    )
    return text if found.gravity is Grade.NOTE else f"{text} Compare them with those used."


def word_not_mixed(found: Screened, name: Name) -> str:
    """That the chains still differ by where they began."""
    return (
        f"{word_column(found, name)}: after {word_count(found, Figure.ROUNDS)} rounds the sets of filled-in values"
        f" still differ by where they began (ratio of Gelman and Rubin {plain(found.figure(Figure.VALUE))}, above"
        f" {SETTLED:g}). They were used as they are. Say more rounds in [imputation], or leave out one of two columns"
        " that tell nearly the same."
    )
