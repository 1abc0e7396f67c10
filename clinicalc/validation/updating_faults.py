"""Why a model is not updated to some people, in sentences."""

from collections.abc import Sequence
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from clinicalc.errors import FitRefused

LEAST_EVENTS = 10
"""For each coefficient of a refit: Peduzzi, Concato, Kemper, Holford, Feinstein, J Clin Epidemiol 1996;49:1373."""

_OFFER = 'Ask for "intercept_slope" or "intercept"'


class UpdateFault(StrEnum):
    """The reason code of a refusal."""

    NOBODY = "nobody"
    NO_EVENTS = "no_events"
    NO_OTHERS = "no_others"
    TOO_FEW_FOR_REFIT = "too_few_for_refit"
    ALL_EQUAL = "all_equal"
    SLOPE_NOT_POSITIVE = "slope_not_positive"
    BEYOND_FOLLOW_UP = "beyond_follow_up"
    NO_EVENTS_BY_HORIZON = "no_events_by_horizon"
    ONE_HORIZON = "one_horizon"
    NOT_A_HORIZON = "not_a_horizon"
    LOGIT_AND_TIMES = "logit_and_times"
    ENTERED_LATE = "entered_late"
    NO_COMPETING = "no_competing"
    GROUPS = "groups"
    NOT_ASKED_FOR = "not_asked_for"
    TOGETHER = "together"
    NO_ESTIMATE = "no_estimate"


def refuse_update(fault: UpdateFault, what: str) -> FitRefused:
    """The error to raise; `what` ends without a full stop."""
    return FitRefused(str(fault), what)


def refuse_slope(lead: str, slope: float) -> FitRefused:
    """The slope of the linear predictor is 0 or below."""
    said = f"{slope:.3g}".replace("-", "−")
    return refuse_update(
        UpdateFault.SLOPE_NOT_POSITIVE,
        f"{lead}the slope is {said}, and a slope must be above 0: among these people those with the higher "
        "predicted risk had no more events than those with the lower, so that a new version would turn the model round "
        "instead of mending it. Look for a column in a wrong unit or an outcome coded the other way round; if all is "
        'right, the model does not hold here, and only "intercept" or a refit can be asked for',
    )


def require_spread(lead: str, predictions: NDArray[np.float64]) -> None:
    """Nothing where the linear predictors of people differ. Raises FitRefused."""
    if np.ptp(predictions) <= 1e-12 * max(float(np.abs(predictions).max()), 1.0):
        raise refuse_update(
            UpdateFault.ALL_EQUAL,
            f"{lead}everybody has the same prediction, so that there is no slope. Look whether the columns vary; "
            'otherwise ask for "intercept"',
        )


def refuse_nobody(lead: str) -> FitRefused:
    """There is nobody to go by."""
    return refuse_update(UpdateFault.NOBODY, f"{lead}there is nobody with every value to update to")


def refuse_one_outcome(fault: UpdateFault, lead: str, who: str) -> FitRefused:
    """Nobody has the event, or everybody; `who` says which."""
    return refuse_update(
        fault,
        f"{lead}{who} the event, so that nothing can be updated. Check the column of the outcome and how it is coded",
    )


def refuse_too_few(lead: str, lacking: str) -> FitRefused:
    """A refit that was asked for and takes more events; `lacking` is from `say_too_few`."""
    return refuse_update(UpdateFault.TOO_FEW_FOR_REFIT, f"{lead}{lacking}. {_OFFER}, which take fewer")


def refuse_refit(lead: str, terms: Sequence[str], refused: FitRefused) -> FitRefused:
    """A refit that was asked for and has no estimate."""
    return refuse_update(UpdateFault.NO_ESTIMATE, f"{lead}{say_no_refit(terms, refused)}. {_OFFER}")


def say_no_refit(terms: Sequence[str], refused: FitRefused) -> str:
    """Why a refit has no estimate, with the terms by name, without a full stop."""
    named = ", ".join(terms[column] for column in refused.columns if column < len(terms))
    return f"a refit has no estimate: {bare_reason(refused)}{f' ({named})' if named else ''}"


def bare_reason(refused: FitRefused) -> str:
    """What a fit was refused for, without the numbers of its columns and without a full stop."""
    return refused.what.split(" (column")[0].rstrip(".")


def say_too_few(events: int, needed: int, whose: str) -> str:
    """Why no refit is made, without a full stop."""
    return (
        f"a refit of {needed // LEAST_EVENTS} coefficients takes {needed} {whose} at least, {LEAST_EVENTS} for each, "
        f"and there are {events}"
    )
