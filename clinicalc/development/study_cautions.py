"""What the methods of a fit mean for whoever reads a number off its file: lines that its own cautions get beside them.

A file's cautions are notes among the findings of every result, so window, print, text and record carry them. There they
are made once, from the figures of the fit, and a study cannot leave them out.
"""

from collections import Counter
from collections.abc import Iterator

from clinicalc.assessment.numerals import join_words
from clinicalc.coefficients.pointers import visible
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.fit import FitKind
from clinicalc.development.fit_method_words import percent
from clinicalc.development.study_method_figures import Penalty
from clinicalc.development.study_terms import Tree

_MOST_NAMED = 3
"""Values named in one line; the documentation names all."""
_SHRUNK = {
    Penalty.RIDGE: "The coefficients were shrunk on purpose (ridge penalty), and the band does not hold the error that "
    "this adds to them.",
    Penalty.FIRTH: "The coefficients were kept finite by Firth’s penalty, because the data tell little of some of "
    "them: take the band as rough where a rare answer is given.",
}


def with_cautions(fitted: FittedStudy, model: Tree) -> Tree:
    """The model with these lines after its own cautions; as it is where there are none."""
    use = model.get("use")
    own = use.get("cautions") if isinstance(use, dict) else None
    if not isinstance(use, dict) or not isinstance(own, list):
        return model
    return {**model, "use": {**use, "cautions": list(dict.fromkeys([*own, *find_cautions(fitted)]))}}


def find_cautions(fitted: FittedStudy) -> Iterator[str]:
    """One line for each method that a reader of numbers has to know of."""
    yield from _say_filled(fitted)
    yield from _say_counted(fitted)
    for kind in dict.fromkeys(one.penalty.kind for one in fitted.figures if one.penalty is not None):
        yield _SHRUNK[kind]


def _say_filled(fitted: FittedStudy) -> Iterator[str]:
    imputed = [one for one in fitted.figures if one.imputed is not None]
    filled: Counter[str] = Counter()
    for one in imputed:
        if one.imputed is not None:
            filled.update(one.imputed.filled)
    people = {
        id: sum(one.people for one in imputed if id in fitted.people[one.id].columns) for id in filled
    }  # a value counts among those whose fit uses it
    labels = {predictor.id: predictor.label for predictor in fitted.model.content.predictors}
    named = [
        f"{visible(labels.get(id, id))} ({percent(count / people[id])})" for id, count in filled.most_common() if count
    ]
    if not named:
        return
    if len(named) > _MOST_NAMED:
        named = [*named[:_MOST_NAMED], f"{len(named) - _MOST_NAMED} more"]
    has_band = all(fit.covariance is not None for fit in fitted.fits.values())
    band = "; the band holds what that leaves open" if has_band else ""
    settled = all(one.imputed.settled for one in imputed if one.imputed is not None)
    open_ = "" if settled else " The sets of filled-in values had not settled."
    yield (
        f"In the people it was fitted to, missing values of {join_words(named)} were filled in by multiple imputation"
        f"{band}.{open_}"
    )


def _say_counted(fitted: FittedStudy) -> Iterator[str]:
    which = [
        equation.content.competing_events.which or "other events"
        for equation in fitted.model.equations
        if fitted.fits[equation.content.id].kind is FitKind.FINE_GRAY
    ]
    for name in dict.fromkeys(which):
        yield (
            f"Competing events ({visible(name)}) are counted: the number is the share of people who will have the "
            "event. A value that makes them likelier lowers it, so the difference that a changed value makes is not "
            "its effect on the event itself."
        )
