"""How everything in a validation was made, in words, and what a validation does not say."""

from collections.abc import Iterator

from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.operations.validation_names import list_measures
from clinicalc.report.calibration_words import OBSERVED_WORDS, smoother_words
from clinicalc.report.contents import Fact, FactList, Prose, Section
from clinicalc.validation.validated import HorizonValidation, Interval, Measure, Method, Outcomes, Validation

NO_APPROVAL = (
    "This report repeats what a comparison of predictions with what happened came to. The program advises nothing and"
    " claims no approval by any authority; no report makes a model right."
)
_SILENCE = (
    "It is no approval. Whether a practice uses the model is decided by its own people, in its model library, and no"
    " number is given for a patient before a file is vetted there.",
    "It is about these people and this time. A model that holds here may not hold next year: who comes, how values are"
    " measured and what is done for people all change. Look again.",
    "It says how predictions and events agree in groups of people. It does not say that the prediction for one person"
    " is right, nor what happens to somebody whose value is changed.",
    "Limits hold for chance in the choice of people only: not for values measured wrongly, outcomes not seen, or people"
    " who are missing from the file.",
    "Net benefit weighs people found against people flagged in vain, at the rate that a decision point implies. Harms,"
    " costs and wishes beyond that are not in it.",
)
_OUTCOMES = {
    Outcomes.BINARY: "The outcome is a yes or no of each person.",
    Outcomes.TIMES: (
        "The outcome is a time to the event; whoever was lost from sight before the horizon counts as long as he was"
        " seen."
    ),
    Outcomes.COMPETING: (
        "The outcome is a time to the event, and other events may come first: the observed risk is that of having the"
        " event before any other."
    ),
}
_METHODS = {
    Method.SHARE: "The share of the people counted.",
    Method.KAPLAN_MEIER: "One minus Kaplan–Meier.",
    Method.AALEN_JOHANSEN: "The cumulative incidence of Aalen and Johansen.",
    Method.LOGIT_OFFSET: (
        "The intercept of a logistic model of the outcome with the log odds of the prediction as offset (Cox 1958)."
    ),
    Method.POISSON_OFFSET: (
        "The log of the events over those expected in all follow-up until the horizon, with the standard error of a"
        " Poisson count (Crowson, Atkinson & Therneau 2016)."
    ),
    Method.COX_OFFSET: (
        "The log of the cumulative hazard at the horizon of a Cox model with the log of the predicted one as offset."
    ),
    Method.INCIDENCE_SHIFT: (
        "The shift of log(−log(1 − prediction)) at which the mean prediction is the incidence of Aalen and Johansen."
    ),
    Method.LOGIT_SLOPE: "The slope of a logistic model of the outcome on the log odds of the prediction.",
    Method.COX_SLOPE: "The slope of a Cox model on log(−log(1 − prediction)), over the whole follow-up.",
    Method.FINE_GRAY_SLOPE: ("The slope of a Fine–Gray model on log(−log(1 − prediction)), over the whole follow-up."),
    Method.HARRELL: "Harrell’s C, over the whole follow-up.",
    Method.HARRELL_STAYING: (
        "Harrell’s C, where whoever had another event stays without the event to the end (Wolbers and others 2009)."
    ),
    Method.UNO: "Uno’s C up to the horizon, weighted for those lost from sight.",
    Method.AREA: (
        "The area under the ROC curve of those with the event by the horizon against those without, weighted for those"
        " lost from sight."
    ),
    Method.SQUARES: "The mean squared distance of prediction and outcome (Brier 1950).",
    Method.WEIGHTED_SQUARES: (
        "The mean squared distance of prediction and outcome, weighted for those lost from sight (Graf and others"
        " 1999)."
    ),
}
_OWN_WORDS = {
    "Observed / expected": "The observed risk over the mean of the predictions.",
    "C, the area under the ROC curve": "Of all pairs of one with the event and one without, as Harrell’s C.",
    "Scaled Brier score": "One, less the Brier score over that of the observed risk for everybody.",
}
_INTERVALS = {
    Interval.NORMAL: "from the standard error",
    Interval.LOG: "on the log scale",
    Interval.LOGIT: "on the logit scale",
    Interval.LOG_LOG: "on the log-log scale",
    Interval.WILSON: "Wilson’s",
    Interval.INFLUENCE: "from the influence of each person",
    Interval.BOOTSTRAP: "by bootstrap",
    Interval.GROUPED_BOOTSTRAP: "by bootstrap of people known by their group of like predictions",
    Interval.DRAWN_COEFFICIENTS: "by drawing the coefficients of the smooth curve from their joint normal",
}
_FLAGGED = "People whose prediction is at or above a decision point are flagged; nothing is rounded before."
_BENEFIT = (
    "Net benefit: true positives less false positives times t / (1 − t), for each person, at the decision point t"
    " (Vickers & Elkin 2006); of times from the observed risk among those flagged (Vickers and others 2008)."
)
_INDICES = (
    "ICI, E50, E90 and Emax: mean, median, 90th percentile and largest distance of the smooth curve from the diagonal"
    " over the people (Austin & Steyerberg 2019)."
)


def tell_methods(validation: Validation) -> Section:
    """Every method that stands behind a figure here, once."""
    horizons = validation.horizons
    facts = [Fact("Outcome", tuple(dict.fromkeys(_OUTCOMES[each.outcomes] for each in horizons)))]
    facts += [Fact(name, ways) for name, ways in _ways(horizons)]
    facts.append(Fact("Calibration figure", tuple(dict.fromkeys(line for each in horizons for line in _curve(each)))))
    facts.append(Fact("Decisions", (_FLAGGED, _BENEFIT)))
    facts.append(Fact("Limits", (_limits(validation),)))
    return Section("How it was worked out", (FactList(tuple(fact for fact in facts if fact.paragraphs)),))


def tell_silence() -> Section:
    """What a reader may not take from it."""
    return Section("What it does not say", (Prose(_SILENCE),), whole=True)


def _ways(horizons: tuple[HorizonValidation, ...]) -> Iterator[tuple[str, tuple[str, ...]]]:
    """Each figure with the ways in which it was made at the horizons."""
    found: dict[str, dict[str, None]] = {}
    for horizon in horizons:
        for name, measure in (("Observed risk", horizon.observed), *list_measures(horizon)):
            if measure.method not in (Method.NONE, Method.SMOOTH_CURVE):  # the curve has lines of its own
                found.setdefault(name, {})[_OWN_WORDS.get(name, _METHODS[measure.method])] = None
    return ((name, tuple(ways)) for name, ways in found.items())


def _curve(horizon: HorizonValidation) -> Iterator[str]:
    calibration = horizon.calibration
    yield f"Groups of like predictions: {OBSERVED_WORDS[calibration.observed]}."
    if calibration.curve is not None:
        yield f"Smooth curve: {smoother_words(calibration.curve)}."
        yield _INDICES


def _limits(validation: Validation) -> str:
    used: dict[Interval, None] = {}
    for horizon in validation.horizons:
        for measure in _shares(horizon):
            if measure.interval is not Interval.NONE and measure.lower is not None:
                used[measure.interval] = None
    ways = " or ".join(_INTERVALS[each] for each in used)
    own = f" Those of sensitivity, specificity and predictive values are {ways}." if ways else ""
    return f"95{NARROW_SPACE}%, two-sided; how each was made stands beside it.{own}"


def _shares(horizon: HorizonValidation) -> Iterator[Measure]:
    for one in horizon.decisions:
        yield from (one.sensitivity, one.specificity, one.positive_value, one.negative_value)
