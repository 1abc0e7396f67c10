"""The sentence of each finding of a screening: the column, what is the matter, and what can be done about it."""

from collections.abc import Callable, Mapping

from clinicalc.assessment.findings import Grade
from clinicalc.assessment.numerals import NARROW_SPACE, plain, plain_range
from clinicalc.coefficients.pointers import listed, quoted
from clinicalc.estimation.screened import Figure, Screen, Screened
from clinicalc.estimation.screening_collinearity import ILL_CONDITIONED, INFLATED
from clinicalc.estimation.screening_columns import FAR, SPARSE
from clinicalc.estimation.screening_competing_words import word_competing_censored, word_competing_counted
from clinicalc.estimation.screening_imputed_words import word_filled_in, word_not_filled_in, word_not_mixed
from clinicalc.estimation.screening_people_words import (
    word_all_events,
    word_below_minimum,
    word_complete_cases,
    word_events_per_parameter,
    word_no_complete_cases,
    word_no_events,
    word_no_minimum,
    word_no_people,
    word_too_many_terms,
)
from clinicalc.estimation.screening_phrases import (
    Name,
    choose,
    word_between,
    word_column,
    word_count,
    word_level,
    word_of_all,
    word_people,
    word_points,
    word_share,
    word_with_level,
)

_JOIN = (
    "so the coefficient runs off without end. Join this level with another one of like meaning, or leave the term out."
)


def word_screened(found: Screened, name: Name = quoted) -> str:
    """One or more plain sentences about a finding; columns stand in quotation marks unless `name` calls them else."""
    return _WORDS[found.code](found, name)


def _not_finite(found: Screened, name: Name) -> str:
    return (
        f"{word_column(found, name)} cannot be computed for {word_people(found)}: it has no finite value, as when the"
        " logarithm of 0 is taken. Correct these values, or choose another transformation."
    )


def _constant(found: Screened, name: Name) -> str:
    return (
        f"{word_column(found, name)} is {word_level(found)} for all {word_people(found)} who can be used, so it tells"
        " nobody apart and has no coefficient. Leave it out, or check how its values are read."
    )


def _level_without_events(found: Screened, name: Name) -> str:
    count = word_count(found, Figure.PEOPLE)
    with_level = word_with_level(found)
    what = f"none of the {count} people {with_level} had the event"
    if count == "1":
        what = f"the only person {with_level} did not have the event"
    return f"{word_column(found, name)}: {what}, {_JOIN}"


def _level_only_events(found: Screened, name: Name) -> str:
    count = word_count(found, Figure.PEOPLE)
    who = "the only person" if count == "1" else f"all {count} people"
    what = f"{word_column(found, name)}: {who} {word_with_level(found)} had the event"
    if found.gravity is Grade.STOP:
        return f"{what}, {_JOIN}"
    return (
        f"{what}. The coefficient can be found from when they had it; check that this level is not a consequence of the"
        " event."
    )


def _separated(found: Screened, name: Name) -> str:
    then = (
        "so the coefficient runs off without end. Check that the column is not made from the outcome; otherwise leave"
        " it out or join values into fewer steps."
    )
    if found.detail == "order":
        return (
            f"{word_column(found, name)}: at each of the {word_count(found, Figure.EVENTS)} events the person who had"
            f" it has the most extreme value of all who are still followed, {then}"
        )
    return (
        f"{word_column(found, name)}: the values of people with and without the event do not overlap (they part at"
        f" {word_between(found)}), {then}"
    )


def _nearly_separated(found: Screened, name: Name) -> str:
    then = (
        "The coefficient rests on these few and its interval will be very wide. Check that the column is not made from"
        " the outcome, and whether the model needs it."
    )
    count = word_count(found, Figure.PEOPLE)
    if found.detail == "order":
        return (
            f"{word_column(found, name)} puts people nearly in the order of their events: only {count} of the"
            f" {word_count(found, Figure.EVENTS)} events {choose(count, 'goes', 'go')} against it. {then}"
        )
    return (
        f"{word_column(found, name)} nearly tells people with and without the event apart: cut at"
        f" {word_between(found)} it leaves only {count} {choose(count, 'person', 'people')} on the wrong side. {then}"
    )


def _held_by_penalty(found: Screened, name: Name) -> str:
    level = f", people {word_with_level(found)}" if found.level else ""
    return (
        f"{word_column(found, name)}{level}: without the penalty the coefficient would run off without end"
        " (separation). It is finite because of the penalty, which decides how large it is. Check that the column"
        " is not made from the outcome, and how many people this rests on."
    )


def _sparse_level(found: Screened, name: Name) -> str:
    return (
        f"{word_column(found, name)}: of the {word_people(found)} {word_with_level(found)},"
        f" {word_count(found, Figure.EVENTS)} had the event and {word_count(found, Figure.WITHOUT)} did not; fewer than"
        f" {SPARSE} of either kind say little about a coefficient. Join this level with another one of like meaning, or"
        " expect a wide interval."
    )


def _dependent(found: Screened, name: Name) -> str:
    first, others = found.columns[0], found.columns[1:]
    if len(others) == 1:
        relation = f"{name(first)} says exactly the same as {name(others[0])}"
    else:
        relation = f"{name(first)} can be worked out exactly from {listed(name(other) for other in others)}"
    return (
        f"{relation}, so their coefficients cannot be told apart. Leave one of these columns out; of a category one"
        " level has to be the reference, without a column."
    )


def _collinear(found: Screened, name: Name) -> str:
    first, others = found.columns[0], found.columns[1:]
    return (
        f"{name(first)} can nearly be worked out from {listed(name(other) for other in others)}: the variance of its"
        f" coefficient is about {plain(found.figure(Figure.INFLATION))} times what it would be without them, and the"
        f" condition number of these columns is {plain(found.figure(Figure.CONDITION))} (said from {INFLATED:g} or from"
        f" {ILL_CONDITIONED:g} on). {_collinear_advice(found)}"
    )


def _collinear_advice(found: Screened) -> str:
    if found.gravity is Grade.NOTE:
        return (
            "They are made from the same value, where this is expected: the probability is well determined, the single"
            " coefficients are not."
        )
    return "Single coefficients and their intervals mean little; leave one of the columns out, or join them into one."


def _outliers(found: Screened, name: Name) -> str:
    count = word_count(found, Figure.PEOPLE)
    limits = plain_range(found.figure(Figure.LOW), found.figure(Figure.HIGH))
    return (
        f"{word_column(found, name)}: {count} {choose(count, 'value lies', 'values lie')} more than {FAR:g} robust"
        f" standard deviations from the median (outside {limits}; the furthest is {plain(found.figure(Figure.VALUE))})."
        " Check for another unit, a lost decimal point or a code for missing; a long tail may also be real."
    )


def _all_missing(found: Screened, name: Name) -> str:
    return (
        f"{word_column(found, name)} is missing for all {word_people(found)}. Check which column is read for it, its"
        " unit and its codes for missing."
    )


def _missing(found: Screened, name: Name) -> str:
    text = f"{word_column(found, name)} is missing for {word_of_all(found)}."
    if found.gravity is Grade.NOTE:
        return text
    return f"{text} People without it are left out of the fit; say in the documentation why it is missing."


def _missing_together(found: Screened, name: Name) -> str:
    together = listed(name(column) for column in found.columns)
    return f"{together} are missing together, and no other, for {word_of_all(found)}."


def _missing_with_outcome(found: Screened, name: Name) -> str:
    difference = word_points(found.figure(Figure.DIFFERENCE))
    limits = f"{word_points(found.figure(Figure.LOW))} to {word_points(found.figure(Figure.HIGH))}"
    apart = ", differences in follow-up left aside" if found.detail == "timed" else ""
    return (
        f"{word_column(found, name)}: {word_share(found, Figure.SHARE)} of those without a value had the event, and"
        f" {word_share(found, Figure.OTHER_SHARE)} of those with one; {difference} percentage points apart"
        f" (95{NARROW_SPACE}% interval {limits}{apart}). Leaving people out may then bias the risk. Find out why it is"
        " missing; this is a reason to look, not a test."
    )


_WORDS: Mapping[Screen, Callable[[Screened, Name], str]] = {
    Screen.NO_PEOPLE: word_no_people,
    Screen.NO_EVENTS: word_no_events,
    Screen.ALL_EVENTS: word_all_events,
    Screen.NOT_FINITE: _not_finite,
    Screen.CONSTANT: _constant,
    Screen.LEVEL_WITHOUT_EVENTS: _level_without_events,
    Screen.LEVEL_ONLY_EVENTS: _level_only_events,
    Screen.SEPARATED: _separated,
    Screen.NEARLY_SEPARATED: _nearly_separated,
    Screen.HELD_BY_PENALTY: _held_by_penalty,
    Screen.SPARSE_LEVEL: _sparse_level,
    Screen.DEPENDENT: _dependent,
    Screen.COLLINEAR: _collinear,
    Screen.TOO_MANY_TERMS: word_too_many_terms,
    Screen.EVENTS_PER_PARAMETER: word_events_per_parameter,
    Screen.NO_MINIMUM: word_no_minimum,
    Screen.BELOW_MINIMUM: word_below_minimum,
    Screen.OUTLIERS: _outliers,
    Screen.ALL_MISSING: _all_missing,
    Screen.MISSING: _missing,
    Screen.COMPLETE_CASES: word_complete_cases,
    Screen.NO_COMPLETE_CASES: word_no_complete_cases,
    Screen.MISSING_TOGETHER: _missing_together,
    Screen.MISSING_WITH_OUTCOME: _missing_with_outcome,
    Screen.COMPETING_CENSORED: word_competing_censored,
    Screen.COMPETING_COUNTED: word_competing_counted,
    Screen.FILLED_IN: word_filled_in,
    Screen.NOT_FILLED_IN: word_not_filled_in,
    Screen.NOT_MIXED: word_not_mixed,
}
