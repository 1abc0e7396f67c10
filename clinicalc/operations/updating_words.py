"""An update in sentences, as they stand in the new version's ancestry and documentation, and are printed."""

from collections.abc import Iterator

from clinicalc.assessment.numerals import join_words
from clinicalc.validation.updated import EquationUpdate, GroupWeights, Testing, Update, UpdateMethod
from clinicalc.validation.validated import HorizonValidation, Measure, Validation

METHOD_WORDS = {
    UpdateMethod.CLOSED_TEST: "closed testing",
    UpdateMethod.KEEP: "kept as it was",
    UpdateMethod.INTERCEPT: "a new baseline, every coefficient as it was",
    UpdateMethod.INTERCEPT_SLOPE: "a new baseline, every coefficient times one slope",
    UpdateMethod.REFIT: "baseline and every coefficient estimated anew, terms as they were",
    UpdateMethod.TWO_SCALE: "baseline and slope from observed and predicted risks of groups",
}
_SHORT = {
    UpdateMethod.KEEP: "the model as it was",
    UpdateMethod.INTERCEPT: "a new baseline alone",
    UpdateMethod.INTERCEPT_SLOPE: "baseline and slope",
    UpdateMethod.REFIT: "a refit",
}
_VERGOUWE = "Vergouwe et al., Stat Med 2017;36:4529"


def say_update(update: Update) -> Iterator[str]:
    """What was done to each equation, with the figures: sentences in reading order."""
    several = len(update.equations) > 1
    if several and update.wish.together:
        yield "All equations were updated together: one shift at each horizon and one slope."
    elif several:
        yield "Each equation was updated apart, by its own people."
    for place, equation in enumerate(update.equations):
        if equation.testing is not None and not (update.wish.together and place):
            name = "" if update.wish.together or not several else f"Equation {equation.id}: "
            yield say_testing(equation.testing, name)
        yield from _say_equation(equation, update)


def say_testing(testing: Testing, name: str = "") -> str:
    """The tests and what they chose, as one sentence; `name` stands before it."""
    tests = "; ".join(
        f"{_SHORT[test.fuller]} against {_SHORT[test.simpler]}: χ² {figure(test.chi2)} on {test.df} df, "
        f"p {say_p(test.p)}"
        for test in testing.tests
    )
    without = f" A refit was not among them: {testing.without_refit}." if testing.without_refit else ""
    return (
        f"{name}Closed testing at a level of {testing.alpha:g} ({_VERGOUWE}): {tests}. Chosen: "
        f"{_SHORT[testing.chosen]}.{without}"
    )


def say_validation(validation: Validation, version: str) -> Iterator[str]:
    """How the earlier version did in the people to whom it was updated, horizon by horizon."""
    for found in validation.horizons:
        at = "" if found.span is None else f" at {found.span.words}"
        measures = "; ".join(_measures(found))
        yield (
            f"Version {version}, from which this one was updated, in {validation.cohort} ({found.people:,} people, "
            f"{found.events:,} events){at}: {measures}."
        )


def figure(value: float) -> str:
    """Four digits, a true minus."""
    return f"{value:.4g}".replace("-", "−")


def say_p(p: float) -> str:
    """A p value as it is read."""
    return "< 0.0001" if p < 0.0001 else f"{p:.2g}"


def _say_equation(equation: EquationUpdate, update: Update) -> Iterator[str]:
    lead = f"Equation {equation.id}: " if len(update.equations) > 1 else ""
    for sentence in _tell(equation, update):
        yield lead + sentence if lead else sentence[0].upper() + sentence[1:]


def _tell(equation: EquationUpdate, update: Update) -> Iterator[str]:
    """Sentences that may stand after the name of the equation."""
    who = f"{equation.people:,} people with {equation.events:,} events"
    if equation.method is UpdateMethod.KEEP:
        yield f"{METHOD_WORDS[equation.method]}; tested in {who}."
        return
    yield f"{METHOD_WORDS[equation.method]}; estimated from {who}."
    if equation.slope_se is not None:
        yield f"slope {figure(equation.slope)}, standard error {figure(equation.slope_se)}."
    if equation.lines:
        shifts = [
            f"{figure(line.intercept)} at {line.span.words} (standard error {figure(line.covariance[0] ** 0.5)})"
            for line in equation.lines
        ]
        # beside a slope it is no shift of anybody, and its error is that far from most people
        moved = equation.slope_se is not None or equation.slope != 1.0
        what = "new linear predictor where the old one is 0:" if moved else "shift of the linear predictor"
        yield f"{what} {join_words(shifts)}."
    if equation.refit is not None and equation.refit.shrinkage is not None:
        shrinkage = equation.refit.shrinkage
        yield (
            f"uniform shrinkage {figure(shrinkage.factor)} (χ² {figure(shrinkage.chi2)} on {shrinkage.df} df; Van "
            "Houwelingen & le Cessie, Stat Med 1990;9:1303), stated and not applied."
        )
    if equation.method is UpdateMethod.TWO_SCALE:
        inverse = update.wish.weights is GroupWeights.INVERSE_VARIANCE
        weights = "by the inverse of their variance" if inverse else "alike"
        count = len(equation.groups) // len(equation.lines)
        yield (f"least squares through {count} groups by predicted risk on the scale of the link, weighted {weights}.")


def _measures(found: HorizonValidation) -> Iterator[str]:
    for name, measure in (
        ("observed to expected", found.observed_to_expected),
        ("calibration slope", found.slope),
        ("C", found.c),
        ("scaled Brier score", found.scaled_brier),
    ):
        if measure.value is not None:
            yield f"{name} {_say_measure(measure, measure.value)}"


def _say_measure(measure: Measure, value: float) -> str:
    if measure.lower is None or measure.upper is None:
        return figure(value)
    return f"{figure(value)} (95\u202f% limits {figure(measure.lower)} to {figure(measure.upper)})"
