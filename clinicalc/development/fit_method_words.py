"""What was done about missing values, competing events and optimism, as sentences for one equation."""

from collections.abc import Iterator, Sequence

from clinicalc.assessment.numerals import NARROW_SPACE, join_words
from clinicalc.coefficients.pointers import visible
from clinicalc.development.stated_fit import MissingShare, StatedFigure, StatedFilling, StatedFit

_MOST_NAMED = 20
"""Columns with missing values that are named for one equation; a label has up to 120 characters."""
_MINUS = "\u2212"

_FEW_EVENTS = (
    "With so few events for each coefficient the corrected figures are likely still a little too good (Iba et al., BMC"
    " Med Res Methodol 2021;21:9)."
)
_NO_OTHER_PEOPLE = (
    "This takes account of the fitting of these terms, not of what was chosen by looking at the same people before, and"
    " is no validation in other people."
)


def say_missing(fit: StatedFit) -> str:
    """Who was left out, and what each predictor lacked, where complete cases were used."""
    holes = [hole for hole in fit.missing if hole.people]
    whole = fit.people + fit.left_out
    if not holes and not fit.left_out:
        return "None."
    left = f"{say_counted(fit.left_out)} of {whole:,} were left out" if fit.left_out else "Nobody was left out"
    if not holes:
        return f"{left}; no predictor is missing for anybody."
    return f"{left}; only complete cases were used. Missing: {_name(holes, whole)}."


def say_filled(fit: StatedFit, filling: StatedFilling) -> str:
    """What was filled in, how, whether the chains mixed, and who was left out all the same."""
    whole = fit.people + fit.left_out
    rounds = "1 round" if filling.rounds == 1 else f"{filling.rounds} rounds"
    text = (
        f"Filled in by multiple imputation: {_name(filling.filled, fit.people)}, among the {fit.people:,} people used;"
        f" {filling.sets} sets by chained equations, {rounds} each, seed {filling.seed}. Every predictor of the fit and"
        " the outcome are in these equations; coefficients, baseline and covariance are pooled by Rubin’s rules."
        f" {_say_mixing(filling)}"
    )
    if not fit.left_out:
        return f"{text} Nobody was left out."
    lacking = [hole for hole in filling.not_filled if hole.people]
    why = f", without {_name(lacking, whole)}" if lacking else ""
    verb = "was" if fit.left_out == 1 else "were"
    return f"{text} {say_counted(fit.left_out)} {verb} left out all the same{why}."


def say_incidences(fit: StatedFit) -> Iterator[str]:
    """How many have had the event by each horizon where other events come first."""
    for at in fit.incidences:
        yield (
            f"By {at.horizon} {percent(at.share)} have had the event (standard error {percent(at.se)}) and"
            f" {percent(at.other)} a competing event first (Aalen–Johansen); with these taken as censored the share"
            f" with the event would be {percent(at.censored)} (one minus Kaplan–Meier)."
        )


def say_corrected(fit: StatedFit) -> str:
    """What became of a C statistic's optimism."""
    found = None if fit.optimism is None else next((one for one in fit.optimism.figures if one.name == "C"), None)
    return "not corrected for optimism" if found is None else f"{found.corrected:.3f} when corrected for optimism"


def say_optimism(fit: StatedFit) -> str:
    """The bootstrap: samples, figures and why samples were lost; nothing where there was none."""
    found = fit.optimism
    if found is None:
        return ""
    lost = found.samples - found.used
    why = f" ({'; '.join(found.lost)})" if found.lost else ""
    could = f" {lost:,} of them could not be fitted{why}." if lost else ""
    text = (
        f"Bootstrap of {found.samples:,} samples drawn from the people of the fit (seed {found.seed}), the model fitted"
        f" anew to each.{could}"
    )
    if not found.figures:
        return f"{text} No optimism is stated: the samples that could be fitted are the easier ones."
    few = f" {_FEW_EVENTS}" if found.few_events else ""
    return f"{text} {' '.join(_say_figure(one) for one in found.figures)}{few} {_NO_OTHER_PEOPLE}"


def say_counted(count: int, one: str = "person", many: str = "people") -> str:
    """A count with its noun."""
    return f"{count:,} {one if count == 1 else many}"


def percent(share: float) -> str:
    """A share in per cent, to one decimal."""
    return f"{100.0 * share:.1f}{NARROW_SPACE}%"


def _say_mixing(filling: StatedFilling) -> str:
    of = f" ({visible(filling.worst)})" if filling.worst else ""
    told = "the chains had mixed" if filling.settled else "the chains had not mixed, and more rounds are needed"
    return f"Largest ratio of Gelman and Rubin {filling.mixing:.2f}{of}: {told}."


def _say_figure(one: StatedFigure) -> str:
    return f"{one.name}: {_signed(one.apparent)}, optimism {_signed(one.optimism)}, corrected {_signed(one.corrected)}."


def _signed(value: float) -> str:
    text = f"{value:.4f}"
    return text.lstrip("-") if float(text) == 0 else text.replace("-", _MINUS)


def _name(holes: Sequence[MissingShare], whole: int) -> str:
    """Predictors with how many lack each, most first."""
    ordered = sorted(holes, key=lambda hole: -hole.people)
    named = [f"{visible(hole.label)} {hole.people:,} ({percent(hole.people / whole)})" for hole in ordered]
    if len(named) <= _MOST_NAMED:
        return join_words(named)
    return f"{', '.join(named[:_MOST_NAMED])}, and {len(named) - _MOST_NAMED} more with fewer each"
