"""What the methods of a study's fit came to, as its documentation states it: plain values, predictors by label."""

from collections.abc import Iterator, Mapping

from clinicalc.development.stated_fit import (
    MissingShare,
    StatedFigure,
    StatedFilling,
    StatedIncidence,
    StatedMean,
    StatedOptimism,
)
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_losses import say_lost
from clinicalc.development.study_method_figures import OptimismFigures, Statistic
from clinicalc.development.study_optimism import has_few_events

Labels = Mapping[str, str]
"""Labels by predictor id; "" is the outcome."""


def state_filling(figures: FitFigures, labels: Labels) -> StatedFilling | None:
    """The imputation; None where values were not filled in."""
    found = figures.imputed
    if found is None:
        return None
    return StatedFilling(
        sets=found.sets,
        rounds=found.rounds,
        seed=found.seed,
        filled=tuple(_share(found.filled, labels)),
        not_filled=tuple(_share(found.not_filled, labels)),
        mixing=found.mixing,
        worst=labels.get(found.worst, found.worst),
        settled=found.settled,
    )


def state_optimism(figures: FitFigures) -> StatedOptimism | None:
    """The bootstrap; None where there was none."""
    found = figures.optimism
    if found is None:
        return None
    stated = tuple(
        StatedFigure(name_statistic(one.statistic, found), one.apparent, one.optimism, one.corrected)
        for one in found.figures
    )
    lost = tuple(say_lost(one) for one in found.lost)
    return StatedOptimism(found.replicates, found.used, found.seed, stated, lost, has_few_events(figures))


def state_incidences(figures: FitFigures) -> Iterator[StatedIncidence]:
    """The share with the event at each horizon, where there are competing events."""
    several = len(figures.equations) > 1
    for one in figures.incidences:
        horizon = f"{one.span.words} ({one.equation})" if several else one.span.words
        yield StatedIncidence(horizon, one.incidence, one.se, one.other, one.naive)


def state_mean(figures: FitFigures) -> StatedMean | None:
    """Mean prediction and share observed of a penalised fit, None where likelihood makes them the same."""
    found = figures.penalty
    if found is None or found.mean_predicted is None or found.observed is None:
        return None
    return StatedMean(found.mean_predicted, found.observed)


def name_statistic(statistic: Statistic, found: OptimismFigures) -> str:
    """What a figure of performance is called; those of a fit to times are of all events up to the last horizon."""
    at = "" if found.span is None else f", {found.span.words}"
    match statistic:
        case Statistic.C:
            return "C"
        case Statistic.SLOPE:
            return "Calibration slope"
        case Statistic.INTERCEPT:
            return f"Log of observed over expected{at}" if at else "Calibration intercept"
        case Statistic.BRIER:
            return f"Brier score{at}"


def _share(counts: Mapping[str, int], labels: Labels) -> Iterator[MissingShare]:
    for id, count in counts.items():
        if count:
            yield MissingShare(labels.get(id, id), count)
