"""Counts, shares, levels and limits of a finding, as they stand in its sentence."""

from collections.abc import Callable

from clinicalc.assessment.numerals import EN_DASH, MINUS, NARROW_SPACE, plain
from clinicalc.coefficients.pointers import visible
from clinicalc.estimation.screened import Figure, Screened

Name = Callable[[str], str]
"""How a column is called in a sentence."""


def word_column(found: Screened, name: Name) -> str:
    """The first column of a finding, as it is called."""
    return name(found.columns[0])


def word_level(found: Screened) -> str:
    """Its level in quotation marks, or the digits of a value."""
    return found.level.replace("-", MINUS) if found.detail == "value" else f"“{visible(found.level)}”"


def word_with_level(found: Screened) -> str:
    """As in "with “former”" or "with the value 1"."""
    return f"with the value {word_level(found)}" if found.detail == "value" else f"with {word_level(found)}"


def word_count(found: Screened, figure: Figure) -> str:
    """A figure as a whole number with its thousands apart."""
    return f"{round(found.figure(figure)):,}"


def word_people(found: Screened) -> str:
    """ "1 person", "1,200 people"."""
    count = word_count(found, Figure.PEOPLE)
    return f"{count} {choose(count, 'person', 'people')}"


def word_coefficients(found: Screened) -> str:
    """ "12 coefficients"."""
    count = word_count(found, Figure.PARAMETERS)
    return f"{count} {choose(count, 'coefficient', 'coefficients')}"


def choose(count: str, one: str, many: str) -> str:
    """The form that goes with a count as written: `one` beside "1", else `many`."""
    return one if count == "1" else many


def word_share(found: Screened, figure: Figure) -> str:
    """A share between 0 and 1 as a percentage with one decimal."""
    return f"{100.0 * found.figure(figure):.1f}{NARROW_SPACE}%"


def word_of_all(found: Screened) -> str:
    """As in "30 of 100 people (30.0 %)"."""
    count, whole = word_count(found, Figure.PEOPLE), word_count(found, Figure.OF_PEOPLE)
    return f"{count} of {whole} people ({word_share(found, Figure.SHARE)})"


def word_points(difference: float) -> str:
    """A difference of shares in percentage points, with its sign."""
    text = f"{100.0 * difference:+.1f}"
    return text.replace("-", MINUS)


def word_between(found: Screened) -> str:
    """The two limits of a finding, or the one value where they are the same."""
    low, high = plain(found.figure(Figure.LOW), 4), plain(found.figure(Figure.HIGH), 4)
    return low if low == high else f"{low}{f' {EN_DASH} ' if low[0] == MINUS else EN_DASH}{high}"
