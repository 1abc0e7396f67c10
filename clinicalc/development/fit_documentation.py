"""The documentation of a fitted model: what figures of the fit answer, what the researcher answered, what nobody did.

The list is what TRIPOD+AI (Collins GS, Moons KGM, Dhiman P, et al. BMJ 2024;385:e078378) asks of a model and no other
field of a coefficient file holds; the judgement of bias is that of PROBAST (Wolff RF, Moons KGM, Riley RD, et al. Ann
Intern Med 2019;170:51-58). Items are named in our own words.
"""

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from enum import StrEnum

from clinicalc.coefficients.schema import Documentation
from clinicalc.development.fit_documentation_words import (
    Texts,
    word_analysis,
    word_calibration,
    word_discrimination,
    word_follow_up,
    word_internal,
    word_missing,
    word_needed,
    word_people,
    word_software,
    word_specification,
)
from clinicalc.development.stated_fit import StatedFit


class Item(StrEnum):
    """What a model file should answer, in the order in which it is read."""

    USERS = "intended users and point of use"
    INEQUALITIES = "known inequalities"
    SOURCE = "data source and dates"
    ELIGIBILITY = "centres and eligibility"
    TREATMENTS = "treatments received"
    OUTCOME = "outcome definition"
    PREDICTORS = "predictor measurement"
    PEOPLE = "sample size and events"
    NEEDED = "sample size needed"
    FOLLOW_UP = "follow-up"
    MISSING = "missing data"
    ANALYSIS = "analysis"
    SELECTION = "choice of predictors"
    INTERNAL = "internal validation"
    FAIRNESS = "fairness"
    SUBGROUPS = "subgroups"
    THRESHOLDS = "reason for decision points"
    SPECIFICATION = "full specification"
    DISCRIMINATION = "discrimination"
    CALIBRATION = "apparent calibration"
    EXTERNAL = "external validation"
    UPDATING = "updating"
    SOFTWARE = "software"
    PROTOCOL = "protocol and registration"
    FUNDING = "funding"
    CONFLICTS = "conflicts of interest"
    DATA_AVAILABILITY = "data availability"
    CODE_AVAILABILITY = "code"
    LIMITATIONS = "limitations"
    POOR_INPUT = "missing or poor values in use"
    SKILL = "skill needed by the user"
    BIAS = "risk of bias"


NOT_STATED = "not stated"
OF_THE_FIT = " (figures of the fit)"

_BY_FIGURES: Mapping[Item, Callable[[Sequence[StatedFit]], Texts]] = {
    Item.PEOPLE: word_people,
    Item.NEEDED: word_needed,
    Item.FOLLOW_UP: word_follow_up,
    Item.MISSING: word_missing,
    Item.ANALYSIS: word_analysis,
    Item.INTERNAL: word_internal,
    Item.SPECIFICATION: word_specification,
    Item.DISCRIMINATION: word_discrimination,
    Item.CALIBRATION: word_calibration,
    Item.SOFTWARE: word_software,
}


@dataclass(frozen=True, slots=True)
class FitDocumentation:
    """The items for the file, and the names of those that nobody answered (they are also in its last item)."""

    items: tuple[Documentation, ...]
    unanswered: tuple[str, ...]


def document_fit(
    figures: Sequence[StatedFit], answered: Sequence[Documentation], *, is_timed: bool
) -> FitDocumentation:
    """All items that are answered, in the list's order, then the researcher's own, then one that names the rest.

    An answer belongs to the item of the same name, letter case and spaces aside, and is kept word for word; where
    figures answer it as well they follow under the same name with "(figures of the fit)". An answer of "not stated" is
    none, and an earlier list of what was not stated is made anew. Where the outcome is no time to an event
    (`is_timed`), follow-up is not asked for. A figure that was not worked out is not stated, never guessed.
    """
    given = [answer for answer in answered if _fold(answer.item) != NOT_STATED and not _says_nothing(answer.text)]
    own_figures = {_fold(f"{item}{OF_THE_FIT}") for item in _BY_FIGURES}
    given = [answer for answer in given if _fold(answer.item) not in own_figures]
    asked = [item for item in Item if is_timed or item is not Item.FOLLOW_UP]
    items: list[Documentation] = []
    unanswered: list[str] = []
    for item in asked:
        found = list(_answers(item, figures, given))
        items += found
        if not found:
            unanswered.append(item.value)
    known = {_fold(item) for item in asked}
    items += [answer for answer in given if _fold(answer.item) not in known]
    if unanswered:
        items.append(Documentation(item=NOT_STATED, text=f"{'; '.join(unanswered)}."))
    return FitDocumentation(tuple(items), tuple(unanswered))


def _answers(item: Item, figures: Sequence[StatedFit], given: Sequence[Documentation]) -> Iterator[Documentation]:
    own = [answer for answer in given if _fold(answer.item) == _fold(item)]
    yield from own
    word = _BY_FIGURES.get(item)
    for text in word(figures) if word else ():
        yield Documentation(item=f"{item}{OF_THE_FIT}" if own else item.value, text=text)


def _fold(text: str) -> str:
    return " ".join(text.casefold().split())


def _says_nothing(text: str) -> bool:
    return _fold(text).rstrip(".") in ("", NOT_STATED)
