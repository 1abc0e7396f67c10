"""The figures of a fit as sentences of its documentation, one equation after the other."""

from collections.abc import Callable, Sequence

from clinicalc.assessment.numerals import NARROW_SPACE, join_words, plain
from clinicalc.coefficients.pointers import visible
from clinicalc.development.stated_fit import MinimumSize, StatedFit
from clinicalc.estimation.sample_size import ASSUMED_SHARE, R2Origin

Texts = tuple[str, ...]
"""One text for each item that is needed, none where there is nothing to say."""

_LONGEST = 4000  # of a text in a coefficient file
_MOST_NAMED = 20
"""Columns with missing values that are named for one equation; a label has up to 120 characters."""


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
        if len(texts[-1]) + len(named) >= _LONGEST:
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
    return f"{_counted(fit.people)}, {_counted(fit.events, 'event', 'events')} ({share}){competing}{each}."


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
    holes = sorted((hole for hole in fit.missing if hole.people), key=lambda hole: -hole.people)
    whole = fit.people + fit.left_out
    if not holes and not fit.left_out:
        return "None."
    left = f"{_counted(fit.left_out)} of {whole:,} were left out" if fit.left_out else "Nobody was left out"
    if not holes:
        return f"{left}; no predictor is missing for anybody."
    named = [f"{visible(hole.label)} {hole.people:,} ({_percent(hole.people, whole)})" for hole in holes[:_MOST_NAMED]]
    more = len(holes) - len(named)
    others = f", and {more} more with fewer each" if more else ""
    listed = ", ".join(named) if more else join_words(named)
    return f"{left}; only complete cases were used. Missing: {listed}{others}."


def _discrimination(fit: StatedFit) -> str:
    c = fit.concordance
    if c is None:
        return ""
    return (
        f"C statistic {c.value:.3f} ({100 * c.level:g}{NARROW_SPACE}% interval {c.lower:.3f} to {c.upper:.3f}) in the"
        " people the model was fitted to, not corrected for optimism."
    )


def _calibration(fit: StatedFit) -> str:
    if fit.calibration_slope is None:
        return ""
    return (
        f"Slope {fit.calibration_slope:.2f} in the people the model was fitted to, where maximum likelihood makes it 1;"
        " it says nothing about other people."
    )


def _software(fit: StatedFit) -> str:
    named = [f"{visible(name)} {visible(version)}".strip() for name, version in fit.software]
    return f"{', '.join(named)}." if named else ""


def _counted(count: int, one: str = "person", many: str = "people") -> str:
    return f"{count:,} {one if count == 1 else many}"


def _percent(part: int, whole: int) -> str:
    return f"{100.0 * part / whole:.1f}{NARROW_SPACE}%"


def _closed(text: str) -> str:
    return f"{text.strip().rstrip('.')}."
