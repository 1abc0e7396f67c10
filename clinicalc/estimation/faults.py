"""Why a model cannot be estimated from some people: the codes that `FitRefused` carries, and its plain words.

Whoever knows the columns' names words a sentence of its own from the code; these words are for those who do not.
"""

from enum import StrEnum

from clinicalc.errors import FitRefused


class FitFault(StrEnum):
    """The reason code of a refusal; `columns` of the error are the places of the columns at fault, from 0."""

    NO_PEOPLE = "no_people"
    NO_COLUMNS = "no_columns"
    NO_EVENTS = "no_events"
    NO_OTHERS = "no_others"
    NOBODY_COMPARED = "nobody_compared"
    OUTCOME_NOT_BINARY = "outcome_not_binary"
    STATUS_UNKNOWN = "status_unknown"
    NOT_FINITE = "not_finite"
    TIME_NOT_POSITIVE = "time_not_positive"
    ENTRY_NOT_BEFORE_TIME = "entry_not_before_time"
    WEIGHT_NOT_POSITIVE = "weight_not_positive"
    TOO_FEW_CLUSTERS = "too_few_clusters"
    MORE_COLUMNS_THAN_EVENTS = "more_columns_than_events"
    CONSTANT = "constant"
    COLLINEAR = "collinear"
    SEPARATED = "separated"
    NOT_CONVERGED = "not_converged"


_WORDS = {
    FitFault.NO_PEOPLE: "there is nobody to estimate from",
    FitFault.NO_COLUMNS: "there is no column to estimate a coefficient for",
    FitFault.NO_EVENTS: "nobody has the event",
    FitFault.NO_OTHERS: "everybody has the event",
    FitFault.NOBODY_COMPARED: "no two people can be compared: no event with somebody still there after it",
    FitFault.OUTCOME_NOT_BINARY: "the outcome has values other than 0 and 1",
    FitFault.STATUS_UNKNOWN: "a status is other than 0, 1 and 2",
    FitFault.NOT_FINITE: "a value is missing or not a number",
    FitFault.TIME_NOT_POSITIVE: "a time is 0 or below",
    FitFault.ENTRY_NOT_BEFORE_TIME: "somebody enters at or after the time at which he leaves",
    FitFault.WEIGHT_NOT_POSITIVE: "a weight is 0 or below",
    FitFault.TOO_FEW_CLUSTERS: "there are not two clusters",
    FitFault.MORE_COLUMNS_THAN_EVENTS: "there are more columns than events",
    FitFault.CONSTANT: "a column does not vary among those who can be compared",
    FitFault.COLLINEAR: "columns follow from one another",
    FitFault.SEPARATED: "columns tell events from others with almost no error, so that coefficients grow without limit",
    FitFault.NOT_CONVERGED: "the estimate did not come to rest",
}


def refuse_fit(fault: FitFault, columns: tuple[int, ...] = ()) -> FitRefused:
    """The error to raise."""
    return FitRefused(str(fault), _WORDS[fault], columns)
