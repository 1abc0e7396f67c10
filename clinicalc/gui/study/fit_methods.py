"""What the methods beside the plain fit came to, in lines and rows: penalty, imputation, optimism, competing events."""

from collections.abc import Iterator

from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_losses import say_lost
from clinicalc.development.study_method_figures import (
    CompetingFigures,
    ImputationFigures,
    OptimismFigures,
    Penalty,
    PenaltyFigures,
    Statistic,
)
from clinicalc.development.study_methods_stated import name_statistic
from clinicalc.gui.study.data_words import count
from clinicalc.gui.study.fact_rows import Fact, FactColumn
from clinicalc.gui.study.figure_words import figure, share, signed

FILLED = (FactColumn("Value"), FactColumn("Filled in", is_figures=True), FactColumn("Of the people", is_figures=True))
POOLED = (
    FactColumn("Term"),
    FactColumn("Degrees of freedom", is_figures=True),
    FactColumn("Missing information", is_figures=True),
)
OPTIMISM = (
    FactColumn("Figure"),
    FactColumn("In these people", is_figures=True),
    FactColumn("Optimism", is_figures=True),
    FactColumn("Corrected", is_figures=True),
)
INCIDENCES = (
    FactColumn("Horizon"),
    FactColumn("With the event", is_figures=True),
    FactColumn("Standard error", is_figures=True),
    FactColumn("Another first", is_figures=True),
)
INCIDENCE_WORDS = (
    "The share with the event is the cumulative incidence of Aalen and Johansen: the other events come first in some"
    " people. One minus Kaplan–Meier is the share in a world without them, and no share of these people."
)
OPTIMISM_WORDS = (
    "Optimism is how much better a fit looks in the people it was made from than in others like them (Harrell, Lee and"
    " Mark 1996). It is no validation in other people."
)
_UNKNOWN_DEGREES = 1e6
"""Above this nothing of the degrees of freedom is seen in an interval."""


def penalty_lines(figures: FitFigures) -> Iterator[tuple[str, str]]:
    """How a fit was penalised; nothing where it was not."""
    penalty = figures.penalty
    if penalty is None:
        return
    degrees = f"; {figure(penalty.degrees, 3)} effective degrees of freedom" if penalty.kind is Penalty.RIDGE else ""
    yield "Penalty", f"{_penalty(penalty)}{degrees}"
    if penalty.mean_predicted is not None and penalty.observed is not None:
        yield "Mean of the predictions", f"{share(penalty.mean_predicted)}, where {share(penalty.observed)} had it"


def imputation_lines(imputed: ImputationFigures) -> Iterator[tuple[str, str]]:
    """How values were filled in, and how well the chains mixed."""
    rounds = f"each after {count(imputed.rounds, 'round')} over the columns"
    yield "Sets", f"{imputed.sets:,}, {rounds}, seed {imputed.seed}; coefficients are pooled over them (Rubin 1987)"
    of = f", of {imputed.worst}" if imputed.worst else ""
    told = "the sets agree" if imputed.settled else "the sets do not agree yet: say more rounds"
    yield "Mixing", f"{imputed.mixing:.3f} at worst{of} (ratio of Gelman and Rubin); {told}"
    if imputed.not_filled:
        lacking = ", ".join(f"{id or 'the outcome'} {number:,}" for id, number in imputed.not_filled.items())
        yield "Not filled in", f"people who lack it are left out: {lacking}"


def filled_facts(imputed: ImputationFigures, people: int) -> Iterator[Fact]:
    """A row for each value that was filled in."""
    for id, number in imputed.filled.items():
        yield Fact((id, f"{number:,}", share(number / people) if people else ""))


def pooled_facts(imputed: ImputationFigures) -> Iterator[Fact]:
    """A row for each pooled coefficient."""
    for term in imputed.terms:
        degrees = "very many" if not term.degrees < _UNKNOWN_DEGREES else f"{term.degrees:,.1f}"
        yield Fact((term.term, degrees, share(term.missing_information)))


def optimism_facts(optimism: OptimismFigures) -> Iterator[Fact]:
    """A row for each statistic."""
    for one in optimism.figures:
        digits = 4 if one.statistic is Statistic.BRIER else 3
        yield Fact(
            (
                name_statistic(one.statistic, optimism),
                signed(one.apparent, digits, plus=False),
                signed(one.optimism, digits),
                signed(one.corrected, digits, plus=False),
            )
        )


def drawn_words(optimism: OptimismFigures) -> str:
    """How many samples were drawn and used, and why others were not."""
    said = f"{count(optimism.replicates, 'bootstrap sample')}, seed {optimism.seed}"
    if optimism.used == optimism.replicates:
        return f"{said}; the model was fitted anew to each of them."
    lost = "; ".join(say_lost(one) for one in optimism.lost)
    return f"{said}; the model could be fitted anew to {optimism.used:,} of them. Lost: {lost}."


def incidence_facts(figures: FitFigures) -> Iterator[Fact]:
    """A row for each horizon of each equation, under it what it would be if other events were taken as censored."""
    for one in figures.incidences:
        of = f", {one.equation}" if len(figures.equations) > 1 else ""
        cells = (share(one.incidence), share(one.se), share(one.other))
        yield Fact((f"{one.span.words}{of}", *cells), _overstated(one))


def _penalty(penalty: PenaltyFigures) -> str:
    if penalty.kind is Penalty.FIRTH:
        return "Firth’s (Firth 1993)"
    if penalty.strength is None:
        return "ridge"
    how = f"chosen by 10-fold cross-validation{penalty.chosen_anew}" if penalty.chosen else "as the study file says"
    return f"ridge, strength {figure(penalty.strength, 4)}, {how}"


def _overstated(one: CompetingFigures) -> str:
    said = f"One minus Kaplan–Meier, others taken as censored: {share(one.naive)}"
    more = share(one.excess)
    return f"{said}." if one.incidence <= 0 or not float(more.partition("\u202f")[0]) else f"{said}, {more} more."
