"""Sentences about the people of a fit as a whole: their events, how many are needed, how many can be used."""

from collections.abc import Mapping

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import NARROW_SPACE, plain
from clinicalc.estimation.sample_size import ASSUMED_SHARE, R2Origin
from clinicalc.estimation.screened import Figure, Screened
from clinicalc.estimation.screening_phrases import Name, choose, word_coefficients, word_count, word_of_all, word_people


def word_no_people(found: Screened, name: Name) -> str:
    """Nobody has an outcome."""
    return (
        "Nobody’s outcome is known, so nothing can be fitted. Check the column of the outcome and the values that stand"
        " for an event and for none."
    )


def word_no_events(found: Screened, name: Name) -> str:
    """There are no events."""
    return (
        f"None of the {word_people(found)} has the event, so nothing can be fitted. Check the column of the outcome and"
        " the value that stands for an event."
    )


def word_all_events(found: Screened, name: Name) -> str:
    """There are only events."""
    return (
        f"All {word_people(found)} have the event. Check the column of the outcome and the values that stand for an"
        " event and for none; people without the event belong into the file too."
    )


def word_too_many_terms(found: Screened, name: Name) -> str:
    """More coefficients than events, or than people without."""
    events, without = word_count(found, Figure.EVENTS), word_count(found, Figure.WITHOUT)
    fewer = found.figure(Figure.WITHOUT) < found.figure(Figure.EVENTS)
    telling = f"{without} people without the event" if fewer else f"{events} {choose(events, 'event', 'events')}"
    return (
        f"The equation has {word_coefficients(found)} and there {choose(without if fewer else events, 'is', 'are')}"
        f" only {telling} among the {word_people(found)} who can be used. Nothing is fitted. Leave terms out, or bring"
        " more people in."
    )


def word_events_per_parameter(found: Screened, name: Name) -> str:
    """Events for each coefficient, beside what would be needed."""
    return f"{_per_parameter(found)} {_minimum(found)}"


def word_no_minimum(found: Screened, name: Name) -> str:
    """Events for each coefficient, and why what would be needed is not known."""
    if found.detail == R2Origin.APPARENT:
        why = (
            "after adjustment for optimism the terms explain nothing; the model may be no better than one risk for"
            " everybody."
        )
    else:
        why = "the R² stated is not between 0 and the largest that is possible with these events. Correct it."
    return f"{_per_parameter(found)} The smallest sample could not be worked out: {why}"


def word_below_minimum(found: Screened, name: Name) -> str:
    """Fewer people than would be needed."""
    return (
        f"{_per_parameter(found)} {_minimum(found)} With fewer, probabilities are likely to be too extreme in other"
        " people. Leave terms out, bring more people in, or shrink the coefficients."
    )


def _per_parameter(found: Screened) -> str:
    events = word_count(found, Figure.EVENTS)
    each = plain(found.figure(Figure.PER_PARAMETER))
    return (
        f"{events} {choose(events, 'event', 'events')} among {word_people(found)} for {word_coefficients(found)}:"
        f" {each} for each coefficient."
    )


def _minimum(found: Screened) -> str:
    return (
        f"The smallest sample by Riley and others (2019) is {word_count(found, Figure.MINIMUM)} people,"
        f" {plain(found.figure(Figure.MINIMUM_PER_PARAMETER))} events for each coefficient, with a Cox–Snell R² of"
        f" {plain(found.figure(Figure.R2))}, {_ORIGINS[R2Origin(found.detail)]}."
    )


_ORIGINS: Mapping[R2Origin, str] = {
    R2Origin.ANTICIPATED: "as it was stated to be expected",
    R2Origin.ASSUMED: (
        f"assumed to be {100 * ASSUMED_SHARE:g}{NARROW_SPACE}% of the largest possible because none was stated"
    ),
    R2Origin.APPARENT: (
        "that of this fit in the people it was made from, adjusted for optimism (a check afterwards, not a plan made"
        " before)"
    ),
}


def word_complete_cases(found: Screened, name: Name) -> str:
    """How many can be used."""
    events = word_count(found, Figure.EVENTS)
    counted = f"{events} {choose(events, 'event', 'events')}"
    text = f"Every value and the outcome are known for {word_of_all(found)}, with {counted};"
    if found.gravity is Grade.NOTE:
        return f"{text} only these are used."
    return (
        f"{text} only these are used. That many people left out can change whom the model speaks for: compare them with"
        " those used, or fill missing values in by a stated method before."
    )


def word_no_complete_cases(found: Screened, name: Name) -> str:
    """Nobody can be used."""
    return (
        f"None of the {word_count(found, Figure.OF_PEOPLE)} people has every value and the outcome, so nothing can be"
        " fitted. Leave out the column that is missing most, or check the codes for missing."
    )
