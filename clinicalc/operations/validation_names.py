"""What the figures of a validation are called, and how each was made, in words."""

from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.validation.validated import HorizonValidation, Interval, Measure, Method, Outcomes

METHODS = {
    Method.NONE: "",
    Method.SHARE: "share of people counted",
    Method.KAPLAN_MEIER: "Kaplan–Meier",
    Method.AALEN_JOHANSEN: "Aalen–Johansen",
    Method.LOGIT_OFFSET: "logistic, log odds as offset",
    Method.POISSON_OFFSET: "log of events over expected, Poisson",
    Method.COX_OFFSET: "Cox, log of predicted hazard as offset",
    Method.INCIDENCE_SHIFT: "shift of the mean risk to Aalen–Johansen",
    Method.LOGIT_SLOPE: "logistic, of the log odds",
    Method.COX_SLOPE: "Cox, of log(−log(1 − risk))",
    Method.FINE_GRAY_SLOPE: "Fine–Gray, of log(−log(1 − risk))",
    Method.HARRELL: "Harrell",
    Method.HARRELL_STAYING: "Harrell, other events stay to the end",
    Method.UNO: "Uno, to the horizon",
    Method.AREA: "event by then against none, weighted",
    Method.SQUARES: "mean squared error",
    Method.WEIGHTED_SQUARES: "squared error, weighted for those lost",
    Method.SMOOTH_CURVE: "mean distance, curve to diagonal",
}
"""How a figure was made."""

INTERVALS = {
    Interval.NONE: "",
    Interval.NORMAL: "normal",
    Interval.LOG: "on the log scale",
    Interval.LOGIT: "on the logit scale",
    Interval.LOG_LOG: "on the log-log scale",
    Interval.WILSON: "Wilson",
    Interval.INFLUENCE: "from each person’s influence",
    Interval.BOOTSTRAP: "bootstrap",
    Interval.GROUPED_BOOTSTRAP: "bootstrap of people in groups of like predictions",
    Interval.DRAWN_COEFFICIENTS: "from drawn coefficients of the curve",
}
"""How limits were made."""
MEAN_ERROR = "Mean calibration error (ICI)"
"""The mean distance of the smooth curve from the diagonal, wherever a figure has room for its name; else "ICI"."""


def list_measures(at: HorizonValidation) -> tuple[tuple[str, Measure], ...]:
    """The figures of a horizon with their names, in reading order; those that the outcome does not have are left out.

    Observed and expected risk, which are percentages, are not among them.
    """
    timed = at.outcomes is not Outcomes.BINARY
    found = [
        ("Observed / expected", at.observed_to_expected),
        ("Calibration intercept", at.intercept),
        ("Calibration slope", at.slope),
        (MEAN_ERROR, at.ici),
        ("C" if timed else "C, the area under the ROC curve", at.c),
        ("Uno’s C", at.uno),
        ("AUC at the horizon", at.auc),
        ("Brier score", at.brier),
        ("Scaled Brier score", at.scaled_brier),
    ]
    return tuple((name, measure) for name, measure in found if timed or name not in ("Uno’s C", "AUC at the horizon"))


def spell_figure(value: float | None, places: int = 4) -> str:
    """A figure with so many decimals and a true minus; "–" for none."""
    if value is None or value != value:
        return "–"
    # a difference of 0.00004 either way is nought
    return f"{round(value, places) + 0.0:.{places}f}".replace("-", "−")


def spell_percent(value: float | None) -> str:
    """A share as a percentage; "–" for none."""
    return "–" if value is None or value != value else f"{spell_figure(100.0 * value, 1)}{NARROW_SPACE}%"
