"""What the command says of a fit's methods beside the plain fit: lines of plain text, indented as its figures are."""

from collections.abc import Iterator

from clinicalc.assessment.numerals import NARROW_SPACE
from clinicalc.development.study_figures import FitFigures
from clinicalc.development.study_losses import say_lost
from clinicalc.development.study_method_figures import (
    Corrected,
    ImputationFigures,
    OptimismFigures,
    Penalty,
    PenaltyFigures,
)
from clinicalc.development.study_methods_stated import name_statistic
from clinicalc.operations.folding import fold


def tell_left_out(figures: FitFigures) -> Iterator[str]:
    """Who was left out; with values filled in, what was filled in and how, and whom that could not help."""
    left, imputed = figures.left_out, figures.imputed
    if imputed is not None:
        yield from _tell_filled(imputed)
    if not left.left_out:
        return
    if imputed is None:
        yield f"  Left out with a value missing: {left.left_out:,} of {left.applicable:,}"
    else:
        lacking = _counts(dict(imputed.not_filled))
        why = f", without {lacking}" if lacking else ""
        yield from fold(f"  Left out all the same: {left.left_out:,} of {left.applicable:,}{why}", hanging=4)


def tell_penalty(penalty: PenaltyFigures) -> Iterator[str]:
    """How the fit was penalised, and whether its predictions are right in the mean."""
    if penalty.kind is Penalty.FIRTH:
        kind = "Firth’s penalty"
    else:
        how = f"chosen by 10-fold cross-validation{penalty.chosen_anew}" if penalty.chosen else "as the study says"
        kind = (
            "Ridge penalty" if penalty.strength is None else f"Ridge penalty of strength {penalty.strength:.6g}, {how}"
        )
    # those of Firth's penalty are not worked out
    degrees = "" if penalty.kind is Penalty.FIRTH else f"; {penalty.degrees:.1f} effective degrees of freedom"
    yield f"  {kind}{degrees}"
    if penalty.mean_predicted is not None and penalty.observed is not None:
        yield f"  Mean predicted {_percent(penalty.mean_predicted)}, observed {_percent(penalty.observed)}"


def tell_optimism(found: OptimismFigures) -> Iterator[str]:
    """The figures of performance with their optimism, and samples that were lost."""
    used = "" if found.used == found.replicates else f", {found.used:,} of them fitted"
    yield f"  Bootstrap: {found.replicates:,} samples, seed {found.seed}{used}"
    for lost in found.lost:
        yield f"    Lost: {say_lost(lost)}"
    if not found.figures:
        yield "    No optimism is stated: too many samples could not be fitted."
        return
    named = [(name_statistic(one.statistic, found), one) for one in found.figures]
    width = max(len("Figure"), *(len(name) for name, _ in named))
    yield f"  {'Figure':<{width}}  {'Apparent':>9}  {'Optimism':>9}  {'Corrected':>9}"
    for name, one in named:
        yield f"  {name:<{width}}{_cells(one)}"


def pooled_columns(figures: FitFigures) -> tuple[str, dict[str, str]]:
    """The heading of two more columns for pooled coefficients, and their cells by term; empty where none are pooled."""
    if figures.imputed is None:
        return "", {}
    heading = f"  {'Degrees':>10}  {'Missing info':>12}"
    cells = {
        one.term: f"  {_degrees(one.degrees):>10}  {_percent(one.missing_information):>12}"
        for one in figures.imputed.terms
    }
    return heading, cells


def _tell_filled(imputed: ImputationFigures) -> Iterator[str]:
    rounds = "1 round" if imputed.rounds == 1 else f"{imputed.rounds} rounds"
    how = f"{imputed.sets} sets after {rounds} each, seed {imputed.seed}"
    yield from fold(f"  Filled in, {how}: {_counts(dict(imputed.filled))}", hanging=4)
    of = f" of {imputed.worst}" if imputed.worst else ""
    told = "the sets agree" if imputed.settled else "the sets do not agree yet; say more rounds"
    yield f"  Mixing: largest ratio of Gelman and Rubin {imputed.mixing:.3f}{of}; {told}"


def _counts(counts: dict[str, int]) -> str:
    return ", ".join(f"{id or 'the outcome'} {count:,}" for id, count in counts.items() if count)


def _cells(one: Corrected) -> str:
    # a difference of 0.00004 either way is nought
    return "".join(f"  {round(value, 4) + 0.0:>9.4f}" for value in (one.apparent, one.optimism, one.corrected))


def _degrees(degrees: float) -> str:
    return "very many" if not degrees < 1e6 else f"{degrees:,.1f}"


def _percent(share: float) -> str:
    return f"{100.0 * share:.1f}{NARROW_SPACE}%"
