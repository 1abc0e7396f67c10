"""Sentences about events that come before the event of a model."""

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.estimation.screened import Figure, Screened
from clinicalc.estimation.screening_phrases import Name, word_share


def word_competing_censored(found: Screened, name: Name) -> str:
    """How far a Cox fit lies above the share of people with the event."""
    text = (
        f"By {found.level}, {word_share(found, Figure.SHARE)} have had the event and"
        f" {word_share(found, Figure.OTHER_SHARE)} a competing event first (Aalen–Johansen). With competing events"
        f" taken as censored it is {word_share(found, Figure.VALUE)} (one minus Kaplan–Meier): {_above(found)}, and the"
        " probabilities of this Cox fit are likewise above the share of people who will have the event."
    )
    if found.gravity is Grade.NOTE:
        return text
    if found.detail == "late":
        return f"{text} Say so where a patient is told; people who came late are in no Fine–Gray fit here."
    return f'{text} Where that share is what a patient is to be told, fit kind = "fine-gray".'


def word_competing_counted(found: Screened, name: Name) -> str:
    """How far the figure that was not taken would lie above."""
    return (
        f"By {found.level}, {word_share(found, Figure.SHARE)} have had the event and"
        f" {word_share(found, Figure.OTHER_SHARE)} a competing event first (Aalen–Johansen); this fit is of that share."
        f" One minus Kaplan–Meier, with competing events taken as censored, would be {word_share(found, Figure.VALUE)}:"
        f" {_above(found)}."
    )


def _above(found: Screened) -> str:
    """As in "23.7 % more", or how many times as much from twice on."""
    excess = found.figure(Figure.DIFFERENCE)
    if excess < 0.0005:
        return "no more"
    return f"{100.0 * excess:.1f}{NARROW_SPACE}% more" if excess < 1.0 else f"{1.0 + excess:.1f} times as much"
