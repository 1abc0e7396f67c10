"""What a validation comes to, as plain values: who was used, measures with intervals, groups, decisions, faults."""

from collections.abc import Mapping
from dataclasses import dataclass
from enum import StrEnum

import numpy as np
from numpy.typing import NDArray

from clinicalc.coefficients.spans import Span
from clinicalc.estimation.calibrated import Calibration

Array = NDArray[np.float64]
LEVEL = 0.95
"""Of every interval of a validation."""


class Interval(StrEnum):
    """How an interval was made."""

    NONE = "none"
    NORMAL = "normal"
    LOG = "log"
    LOGIT = "logit"
    LOG_LOG = "log_log"
    WILSON = "wilson"
    INFLUENCE = "influence"
    BOOTSTRAP = "bootstrap"
    GROUPED_BOOTSTRAP = "grouped_bootstrap"
    """Percentiles over people drawn again, each known by his group of people of like predictions."""
    DRAWN_COEFFICIENTS = "drawn_coefficients"
    """Percentiles over curves whose coefficients were drawn from their joint normal."""


class Method(StrEnum):
    """How a figure was made; the intervals of all but the bootstrap go by a formula or by each person's influence."""

    NONE = "none"
    SHARE = "share"
    """Of people counted."""
    KAPLAN_MEIER = "kaplan_meier"
    AALEN_JOHANSEN = "aalen_johansen"
    LOGIT_OFFSET = "logit_offset"
    """Intercept of a logistic model of the outcome with the log odds of the risk as offset (Cox 1958)."""
    POISSON_OFFSET = "poisson_offset"
    """Log of events over those expected in all follow-up until the horizon (Crowson, Atkinson & Therneau 2016)."""
    COX_OFFSET = "cox_offset"
    """Log of the cumulative hazard at the horizon of a Cox model with the log of the predicted one as offset."""
    INCIDENCE_SHIFT = "incidence_shift"
    """The shift of log(-log(1 - risk)) at which the mean risk is the incidence of Aalen & Johansen."""
    LOGIT_SLOPE = "logit_slope"
    COX_SLOPE = "cox_slope"
    """Of log(-log(1 - risk)), over the whole follow-up."""
    FINE_GRAY_SLOPE = "fine_gray_slope"
    HARRELL = "harrell"
    """Over the whole follow-up; of a yes or no, the area under the ROC curve."""
    HARRELL_STAYING = "harrell_staying"
    """Harrell's where those with another event stay without the event to the end (Wolbers et al. 2009)."""
    UNO = "uno"
    AREA = "area"
    """Under the ROC curve: who had the event by the horizon against who had not, weighted for those lost."""
    SQUARES = "squares"
    """Mean squared error (Brier 1950)."""
    WEIGHTED_SQUARES = "weighted_squares"
    """The same, weighted for those lost (Graf et al. 1999)."""
    SMOOTH_CURVE = "smooth_curve"


class Outcomes(StrEnum):
    """What is known of the people: yes or no, times to the event, or times where other events may come first."""

    BINARY = "binary"
    TIMES = "times"
    COMPETING = "competing"


@dataclass(frozen=True, slots=True)
class Measure:
    """A figure with its interval; `value` is None where it cannot be worked out, and `why` then says why in words.

    A value may have no limits; `why` then says why it has none. `remark` says how a figure
    is to be read, where that is easily missed.
    """

    value: float | None
    lower: float | None = None
    upper: float | None = None
    interval: Interval = Interval.NONE
    why: str = ""
    method: Method = Method.NONE
    remark: str = ""


@dataclass(frozen=True, slots=True, eq=False)
class PeopleCount:
    """Where everybody in the file went; each person is counted once, in this order.

    `excluded` by id of the exclusion answered yes; `not_covered`: no equation applies; `no_outcome`; `missing` people
    who lack a value, and `missing_by` how many lack each (a person may lack several); `refused`: outside limits within
    which the model gives a number, `refused_by` predictor; `used`. Of those used `beyond` counts by predictor who lay
    outside the derivation range with a caution.
    """

    in_file: int
    excluded: Mapping[str, int]
    not_covered: int
    no_outcome: int
    missing: int
    missing_by: Mapping[str, int]
    refused: int
    refused_by: Mapping[str, int]
    used: int
    beyond: Mapping[str, int]


@dataclass(frozen=True, slots=True)
class DecisionFigures:
    """At one decision point, where people at or above it are flagged; shares are of all people used.

    `event_share` is the observed risk of everybody by the horizon. Sensitivity, specificity and predictive values have
    limits; `missed` are people with the event below the point, of 100; `net_benefit` is in true positives for each
    person, `treat_all` the same where everybody is flagged. Where nobody reaches the point the values that need
    somebody are None with a reason.
    """

    point: float
    label: str
    flagged: int
    flagged_share: Measure
    sensitivity: Measure
    specificity: Measure
    positive_value: Measure
    negative_value: Measure
    net_benefit: float | None
    treat_all: float | None
    missed: float | None


@dataclass(frozen=True, slots=True, eq=False)
class NetBenefitCurve:
    """Net benefit over decision points, each of shape (k,): by the model, and where everybody is flagged (Vickers)."""

    points: Array
    by_model: Array
    treat_all: Array


@dataclass(frozen=True, slots=True, eq=False)
class HorizonValidation:
    """Everything at one horizon (`span` None for an outcome without time).

    `competing` counts in whom another event came first; with outcomes TIMES the model takes that for the end of
    watching, and the observed risk is that of a world without such events. `ici`, `e50`, `e90` and `emax` are those of
    `calibration`, with its limits.
    """

    span: Span | None
    outcomes: Outcomes
    people: int
    events: int
    competing: int
    observed: Measure
    expected: float
    observed_to_expected: Measure
    intercept: Measure
    slope: Measure
    c: Measure
    uno: Measure
    auc: Measure
    brier: Measure
    brier_null: float | None
    scaled_brier: Measure
    calibration: Calibration
    ici: Measure
    decisions: tuple[DecisionFigures, ...]
    net_benefit: NetBenefitCurve | None
    e50: Measure = Measure(None)
    e90: Measure = Measure(None)
    emax: Measure = Measure(None)


@dataclass(frozen=True, slots=True)
class GroupFigures:
    """One group that was named: `by` what, which answer, its people and events; too few for figures says `why`."""

    by: str
    level: str
    people: int
    events: int
    observed: Measure
    expected: float
    observed_to_expected: Measure
    slope: Measure
    c: Measure
    why: str = ""


class FaultKind(StrEnum):
    """What is wrong, by name."""

    TOO_LOW = "too_low"
    TOO_HIGH = "too_high"
    TOO_EXTREME = "too_extreme"
    TOO_MODERATE = "too_moderate"
    UNIT = "unit"
    GROUP_TOO_LOW = "group_too_low"
    GROUP_TOO_HIGH = "group_too_high"


@dataclass(frozen=True, slots=True)
class Fault:
    """One thing found wrong: predictions too low, too extreme (slope below 1), a column in a wrong unit, a group.

    `at` is the predictor's or the group's name with `level`, "" for everybody; `p` the p value it was judged by,
    against a limit that holds for all that was looked for; `sentence` says it for a reader.
    """

    kind: FaultKind
    sentence: str
    at: str = ""
    level: str = ""
    p: float | None = None


@dataclass(frozen=True, slots=True, eq=False)
class Validation:
    """A model in a cohort. `verdict` are the first sentences: the faults by name, or that none was found."""

    title: str
    version: str
    fingerprint: str
    recalibration: str
    cohort: str
    count: PeopleCount
    horizons: tuple[HorizonValidation, ...]
    groups: tuple[GroupFigures, ...]
    faults: tuple[Fault, ...]
    verdict: tuple[str, ...]
    remarks: tuple[str, ...] = ()
