"""What was done about doubt, for the report of a fit: penalty, missing values, optimism, competing events."""

from collections.abc import Iterator

from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE, plain
from clinicalc.development.estimating import FittedStudy
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_losses import say_lost
from clinicalc.development.study_method_figures import (
    Corrected,
    ImputationFigures,
    OptimismFigures,
    Penalty,
    PenaltyFigures,
    Statistic,
)
from clinicalc.report.contents import Block, Column, Prose, Row, Section, Table

_NAMES = {
    Statistic.C: "C",
    Statistic.SLOPE: "calibration slope",
    Statistic.INTERCEPT: "calibration intercept",
    Statistic.BRIER: "Brier score",
}
_NO_BOOTSTRAP = (
    "Not looked into: the study asks for no bootstrap. Every figure of performance here is that in the people the fit"
    " was made from, in whom it looks better than it will in others."
)
_OPTIMISM = (
    "Optimism is how much better a fit looks in the people it was made from than in others like them (Harrell, Lee and"
    " Mark 1996); the corrected figure is what is left of the apparent one without it. It is no validation in other"
    " people."
)
_INCIDENCE = (
    f"The share with the event is the cumulative incidence of Aalen and Johansen; beside it one minus"
    f" Kaplan{EN_DASH}Meier with other events taken as censored, which is the share in a world without them and lies"
    " above it."
)


def tell_methods(fitted: FittedStudy, figures: FitFigures, of: str) -> Iterator[Section]:
    """A section for each of them; `of` names the fit in headings, "" for the only one."""
    if figures.penalty is not None:
        yield Section(f"Penalty{of}", (Prose((_penalty(figures.penalty),)),), whole=True)
    yield Section(f"Missing values{of}", tuple(_missing(fitted, figures)), whole=True)
    yield Section(f"Optimism{of}", tuple(_optimism(figures)), whole=True)
    if figures.incidences:
        yield Section(f"Competing events{of}", (Prose((_INCIDENCE,)), _incidences(figures)), whole=True)


def _penalty(penalty: PenaltyFigures) -> str:
    degrees = f"{plain(penalty.degrees, 3)} effective degrees of freedom of the slopes"
    if penalty.kind is Penalty.FIRTH:
        how = "Firth’s penalty (Firth 1993), half the logarithm of the determinant of the information."
    else:
        strength = "" if penalty.strength is None else f" of strength {plain(penalty.strength, 4)}"
        chosen = "as the study file states it"
        if penalty.chosen:
            chosen = f"chosen by 10-fold cross-validated deviance{penalty.chosen_anew}"
        how = (
            f"A ridge penalty{strength}, {chosen}, on the standardised slopes; {degrees}. The band holds no allowance"
            " for the bias that comes of shrinkage."
        )
    if penalty.mean_predicted is None or penalty.observed is None:
        return how
    return (
        f"{how} The mean of the predictions is {_share(penalty.mean_predicted, 2)}, where"
        f" {_share(penalty.observed, 2)} had the event."
    )


def _missing(fitted: FittedStudy, figures: FitFigures) -> Iterator[Block]:
    imputed, left = figures.imputed, figures.left_out
    if imputed is not None:
        yield from _imputed(fitted, figures, imputed)
    elif left.left_out:
        yield Prose(
            (
                f"Complete cases: {left.left_out:,} of the {left.applicable:,} people to whom it applies"
                f" ({_share(left.left_out / left.applicable)}) lack a value or the outcome and were left out. That is"
                " without harm only where what is missing does not go with what would have been found.",
            )
        )
    else:
        yield Prose(("Nothing was missing in the people to whom it applies.",))


def _imputed(fitted: FittedStudy, figures: FitFigures, imputed: ImputationFigures) -> Iterator[Block]:
    labels = {"": "the outcome"} | {one.id: one.label for one in fitted.model.content.predictors}
    yield Prose(
        (
            f"Values were filled in {imputed.sets:,} times by chained equations, each set after {imputed.rounds:,}"
            f" rounds over the columns, seed {imputed.seed}. The model was fitted to each set and the fits pooled"
            " (Rubin 1987). Log likelihoods are means over the sets.",
            f"Largest ratio of Gelman and Rubin {imputed.mixing:.3f}"
            + (f", of {labels.get(imputed.worst, imputed.worst)}" if imputed.worst else "")
            + (": the sets agree." if imputed.settled else ": the sets do not agree yet, and more rounds are needed."),
        )
    )
    rows = [
        Row((labels.get(id, id), f"{count:,}", _share(count / figures.people), EN_DASH))
        for id, count in imputed.filled.items()
    ]
    rows += [Row((labels.get(id, id), EN_DASH, EN_DASH, f"{n:,}")) for id, n in imputed.not_filled.items() if n]
    columns = (
        Column("value", 0.0, 200.0),
        Column("filled in", 206.0, 80.0),
        Column("of the people used", 292.0, 100.0),
        Column("not filled in, left out", 398.0, 112.0),
    )
    yield Table(columns, tuple(rows), small=True)


def _optimism(figures: FitFigures) -> Iterator[Block]:
    optimism = figures.optimism
    if optimism is None:
        yield Prose((_NO_BOOTSTRAP,))
        return
    yield Prose((_drawn(optimism), _OPTIMISM))
    if optimism.figures:
        columns = (
            Column("figure", 0.0, 226.0),
            Column("in these people", 232.0, 88.0),
            Column("optimism", 326.0, 88.0),
            Column("corrected", 420.0, 90.0),
        )
        yield Table(columns, tuple(_corrected(one, optimism) for one in optimism.figures), small=True)
    else:
        yield Prose(("Optimism is not stated: too many samples could not be fitted.",))


def _corrected(one: Corrected, optimism: OptimismFigures) -> Row:
    digits = 4 if one.statistic is Statistic.BRIER else 3
    name = _NAMES[one.statistic]
    if optimism.span is not None and one.statistic is Statistic.INTERCEPT:
        name = "logarithm of observed over expected"
    if optimism.span is not None and one.statistic in (Statistic.INTERCEPT, Statistic.BRIER):
        name = f"{name}, {optimism.span.words}"
    figures = (one.apparent, one.optimism, one.corrected)
    return Row((name, *(_signed(figure, digits) for figure in figures)))


def _drawn(optimism: OptimismFigures) -> str:
    said = f"{optimism.replicates:,} samples were drawn with replacement, seed {optimism.seed}"
    if optimism.used == optimism.replicates:
        return f"{said}, and the model was fitted anew to each."
    lost = "; ".join(say_lost(one) for one in optimism.lost)
    return f"{said}; the model could be fitted anew to {optimism.used:,} of them. Lost: {lost}."


def _incidences(figures: FitFigures) -> Table:
    several = len(figures.equations) > 1
    columns = (
        Column("horizon, equation" if several else "horizon", 0.0, 112.0),
        Column("share with the event", 118.0, 92.0),
        Column("standard error", 216.0, 68.0),
        Column("another event first", 290.0, 82.0),
        Column("others censored", 378.0, 68.0),
        Column("higher by", 452.0, 58.0),
    )
    rows = []
    for one in figures.incidences:
        named = f"{one.span.words}, {one.equation}" if several else one.span.words
        shares = (_share(one.incidence, 2), _share(one.se, 2), _share(one.other, 2), _share(one.naive, 2))
        rows.append(Row((named, *shares, _share(one.excess) if one.incidence > 0 else EN_DASH)))
    return Table(columns, tuple(rows), small=True)


def _share(share: float, decimals: int = 1) -> str:
    return f"{100.0 * share:.{decimals}f}{NARROW_SPACE}%"


def _signed(value: float, decimals: int) -> str:
    """With a true minus, which a rounded nought has not."""
    text = f"{value:.{decimals}f}"
    return text.removeprefix("-") if float(text) == 0 else text.replace("-", "\u2212")
