"""The figures of a fit as sentences of its documentation, one equation after the other."""

from collections.abc import Callable, Sequence

from clinicalc.assessment.numerals import NARROW_SPACE, plain
from clinicalc.coefficients.file_types import LONGEST_TEXT
from clinicalc.coefficients.pointers import visible
from clinicalc.development.fit_method_words import (
    percent,
    say_corrected,
    say_counted,
    say_filled,
    say_incidences,
    say_missing,
    say_optimism,
)
from clinicalc.development.stated_fit import MinimumSize, StatedFit
from clinicalc.estimation.sample_size import ASSUMED_SHARE, R2Origin

Texts = tuple[str, ...]
"""One text for each item that is needed, none where there is nothing to say."""


def word_people(figures: Sequence[StatedFit]) -> Texts:
    """People, events, competing events, and events for each coefficient."""
    return _join(figures, _people)


def word_needed(figures: Sequence[StatedFit]) -> Texts:
    """The smallest sample by Riley and others, beside what there was; nothing where no equation has one."""
    return _join(figures, _needed)


def word_follow_up(figures: Sequence[StatedFit]) -> Texts:
    """The median follow-up; nothing where there is none."""
    return _join(figures, _follow_up)


def word_missing(figures: Sequence[StatedFit]) -> Texts:
    """Who was left out, and what each predictor lacked."""
    return _join(figures, _missing)


def word_analysis(figures: Sequence[StatedFit]) -> Texts:
    """How it was fitted, once where all equations were fitted alike."""
    return _once(figures, lambda fit: _closed(fit.method) if fit.method.strip() else "")


def word_discrimination(figures: Sequence[StatedFit]) -> Texts:
    """The apparent C statistic with its interval; nothing where it was not worked out."""
    return _join(figures, _discrimination)


def word_calibration(figures: Sequence[StatedFit]) -> Texts:
    """The apparent calibration slope, and what it does not say."""
    return _join(figures, _calibration)


def word_internal(figures: Sequence[StatedFit]) -> Texts:
    """What the bootstrap made of the figures of performance; nothing where there was none."""
    return _join(figures, say_optimism)


def word_specification(figures: Sequence[StatedFit]) -> Texts:
    """That the file holds all of it."""
    return _once(figures, lambda fit: "All coefficients, the baseline and their uncertainty are in this file.")


def word_software(figures: Sequence[StatedFit]) -> Texts:
    """Programs with their versions."""
    return _once(figures, _software)


def _once(figures: Sequence[StatedFit], word: Callable[[StatedFit], str]) -> Texts:
    """What is the same for all equations said once; otherwise as `_join`. Not for counts: they would look like sums."""
    different = {word(fit) for fit in figures}
    return (different.pop(),) if len(different) == 1 and different != {""} else _join(figures, word)


def _join(figures: Sequence[StatedFit], word: Callable[[StatedFit], str]) -> Texts:
    """All equations in as few texts as an item can hold, each under its label where there are several."""
    said = [(fit.equation, word(fit)) for fit in figures]
    if not any(text for _, text in said):
        return ()
    if len(said) == 1:
        return (said[0][1],)
    texts: list[str] = [""]
    for equation, text in said:
        named = f"{visible(equation)}: {text or 'not stated.'}"
        if len(texts[-1]) + len(named) >= LONGEST_TEXT:
            texts.append("")
        texts[-1] = f"{texts[-1]} {named}".lstrip()
    return tuple(text for text in texts if text)


def _people(fit: StatedFit) -> str:
    share = f"{100.0 * fit.events / fit.people:.1f}{NARROW_SPACE}%" if fit.people else "none"
    competing = "" if fit.competing is None else f", {fit.competing:,} with a competing event first"
    each = ""
    if fit.parameters == 1:
        each = " for 1 coefficient"
    elif fit.parameters:
        each = f"; {plain(fit.events / fit.parameters)} events for each of {fit.parameters} coefficients"
    counted = f"{say_counted(fit.people)}, {say_counted(fit.events, 'event', 'events')} ({share}){competing}{each}."
    return " ".join([counted, *say_incidences(fit)])


def _needed(fit: StatedFit) -> str:
    if fit.minimum is None:
        return ""
    size = fit.minimum.size
    enough = "" if fit.people >= size.people else f" There were fewer: {fit.people:,}."
    return (
        f"{size.people:,} people by the criteria of Riley and others (Stat Med 2019;38:1276),"
        f" {plain(size.per_parameter)} events for each coefficient, with a Cox–Snell R² of {plain(size.r2)},"
        f" {_origin(fit.minimum)}.{enough}"
    )


def _origin(minimum: MinimumSize) -> str:
    match minimum.origin:
        case R2Origin.ANTICIPATED:
            return "as expected beforehand"
        case R2Origin.ASSUMED:
            return f"assumed as {100 * ASSUMED_SHARE:g}{NARROW_SPACE}% of the largest possible"
        case R2Origin.APPARENT:
            return "that of this fit adjusted for optimism, so worked out afterwards and not planned"


def _follow_up(fit: StatedFit) -> str:
    if fit.follow_up is None:
        return ""
    method = f" ({fit.follow_up.method})" if fit.follow_up.method else ""
    return f"Median {plain(fit.follow_up.median)} {fit.follow_up.unit}{method}."


def _missing(fit: StatedFit) -> str:
    return say_missing(fit) if fit.filling is None else say_filled(fit, fit.filling)


def _discrimination(fit: StatedFit) -> str:
    c = fit.concordance
    if c is None:
        return ""
    return (
        f"C statistic {c.value:.3f} ({100 * c.level:g}{NARROW_SPACE}% interval {c.lower:.3f} to {c.upper:.3f}) in the"
        f" people the model was fitted to, {say_corrected(fit)}."
    )


def _calibration(fit: StatedFit) -> str:
    texts = []
    if fit.calibration_slope is not None:
        slope = fit.calibration_slope
        why = "where maximum likelihood makes it 1" if slope.is_exact else "as the penalty left it"
        texts.append(
            f"Slope {slope.value:.2f} in the people the model was fitted to, {why}; it says nothing about other people."
        )
    if fit.mean is not None:
        texts.append(f"Mean predicted there {percent(fit.mean.predicted)}, observed {percent(fit.mean.observed)}.")
    return " ".join(texts)


def _software(fit: StatedFit) -> str:
    named = [f"{visible(name)} {visible(version)}".strip() for name, version in fit.software]
    return f"{', '.join(named)}." if named else ""


def _closed(text: str) -> str:
    return f"{text.strip().rstrip('.')}."
