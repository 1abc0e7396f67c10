"""What a calibration figure says in words: how it was made, its sentence, its table."""

from collections.abc import Iterator

from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE, percent
from clinicalc.estimation.calibrated import (
    Calibration,
    CalibrationGroup,
    CalibrationIndices,
    NoCurve,
    Observed,
    SmoothCurve,
    Smoother,
)
from clinicalc.report.phrases import count_words

OBSERVED_WORDS = {
    Observed.WILSON: "shares with Wilson limits",
    Observed.KAPLAN_MEIER: "one minus Kaplan–Meier with log-log limits",
    Observed.AALEN_JOHANSEN: "Aalen–Johansen incidence with log-log limits",
}
CURVE_NAMES = {
    Smoother.LOWESS: "lowess",
    Smoother.COX_SPLINE: "Cox spline",
    Smoother.FINE_GRAY_SPLINE: "Fine–Gray spline",
}
NO_CURVE_WORDS = {
    NoCurve.TOO_FEW_PEOPLE: "fewer than 20 people",
    NoCurve.TOO_FEW_PREDICTIONS: "too few different predictions",
    NoCurve.TOO_FEW_EVENTS: "fewer than 10 people with the event, or without it",
    NoCurve.NOT_FOLLOWED: "nobody was followed so long",
    NoCurve.CAME_LATE: "there are other events, and people came under observation after time nought",
    NoCurve.NOT_FITTED: "the smooth curve could not be fitted",
}
_TENTHS = 10


def share_words(share: float) -> str:
    """An observed share, which may be none or all of the people, in percent with one decimal."""
    if share in (0.0, 1.0):
        return f"{100.0 * share:.0f}{NARROW_SPACE}%"
    return percent(share)


def observed_words(group: CalibrationGroup) -> str:
    """The observed risk with its limits: "10.5 % (9.5–11.5)"."""
    if group.observed is None:
        return "not known, nobody was followed so long"
    words = share_words(group.observed)
    if group.lower is None or group.upper is None:
        return f"{words} (no limits)"
    low, high = (share_words(limit) for limit in (group.lower, group.upper))
    bare = f"{low.removesuffix(f'{NARROW_SPACE}%')}{EN_DASH}{high.removesuffix(f'{NARROW_SPACE}%')}"
    return f"{words} ({bare})"


def points_words(share: float) -> str:
    """A distance of two risks in percentage points: "1.2 points"."""
    points = 100.0 * share
    decimals = 1 if points >= 1.0 else 2
    least = 10.0**-decimals
    return f"<{least:g} points" if 0.0 < points < least / 2 else f"{points:.{decimals}f} points"


def group_noun(calibration: Calibration) -> str:
    """What the groups are: tenths, or fewer where predictions tie."""
    count = len(calibration.groups)
    return "tenths of the people" if count == _TENTHS else f"{count_words(count, 'group')} of like predictions"


def smoother_words(curve: SmoothCurve) -> str:
    """How the curve was made: "lowess, span 2/3"."""
    match curve.smoother:
        case Smoother.LOWESS:
            return "lowess, span 2/3"
        case Smoother.COX_SPLINE:
            model = "Cox model"
        case Smoother.FINE_GRAY_SPLINE:
            model = "Fine–Gray model"
    terms = f"a spline of {len(curve.knots)} knots in" if curve.knots else "a straight line in"
    return f"{model} on {terms} log(−log(1{NARROW_SPACE}−{NARROW_SPACE}prediction))"


def figure_notes(calibration: Calibration, end: float, note: str) -> Iterator[str]:
    """The lines under the plot: what each form is, how the curve was made, what is not drawn, the caller's own note."""
    lost = sum(group.observed is None for group in calibration.groups)
    beyond = int((calibration.spread.predictions > end).sum())
    circles = f"Circles: {group_noun(calibration)}, {OBSERVED_WORDS[calibration.observed]} (95{NARROW_SPACE}%)."
    cut = sum(group.upper is not None and group.upper > end for group in calibration.groups)
    limits = f" {count_words(cut, 'limit')} beyond {100.0 * end:g}{NARROW_SPACE}% cut off." if cut else ""
    bars = "Bars: people at each prediction"
    bars += f"; {beyond:,} above {100.0 * end:g}{NARROW_SPACE}% not drawn." if beyond else "."
    missing = f" {lost} not drawn: nobody followed so long." if lost else ""
    yield f"Dashed line: observed as predicted. {circles}{missing}{limits} {bars}"
    if calibration.curve is not None:
        curve = calibration.curve
        how = f" from {curve.resamples} bootstrap samples" if curve.resamples else ""
        band = f"; tinted its 95{NARROW_SPACE}% band{how}" if curve.lower is not None else ""
        yield f"Curve: {smoother_words(curve)}{band}."
    elif calibration.no_curve is not None:
        yield f"No curve: {NO_CURVE_WORDS[calibration.no_curve]}."
    yield note


def figure_sentence(calibration: Calibration, span: str) -> str:
    """The figure for a screen reader."""
    overall = calibration.overall
    when = f" at {span}" if span else ""
    mean = f"mean predicted {percent(overall.predicted)}, observed {observed_words(overall)}, 95{NARROW_SPACE}% limits"
    words = f"Calibration{when} in {overall.people:,} people: {mean}"
    return words if calibration.indices is None else f"{words}; {index_words(calibration.indices)}"


def index_words(indices: CalibrationIndices) -> str:
    """How far the curve is from the diagonal: mean, median, 90th percentile and largest distance."""
    ici, e50, e90, emax = map(points_words, (indices.ici, indices.e50, indices.e90, indices.emax))
    return f"distance of the curve from the diagonal: mean (ICI) {ici}, median (E50) {e50}, E90 {e90}, largest {emax}"


def figure_table(calibration: Calibration, span: str) -> tuple[tuple[str, ...], ...]:
    """A heading, everybody, each group, and the indices, each with its words."""
    limits = f"with 95{NARROW_SPACE}% limits"
    rows = [("People", f"predicted and observed{f' at {span}' if span else ''}, {limits}")]
    named = [("All", calibration.overall)]
    named += [(f"Group {place}", group) for place, group in enumerate(calibration.groups, 1)]
    for name, group in named:
        label = f"{name}, {group.people:,} people, {group.events:,} with the event seen"
        rows.append((label, f"predicted {percent(group.predicted)}, observed {observed_words(group)}"))
    if calibration.indices is not None:
        indices = calibration.indices
        rows += [
            ("ICI", points_words(indices.ici)),
            ("E50", points_words(indices.e50)),
            ("E90", points_words(indices.e90)),
            ("Emax", points_words(indices.emax)),
        ]
    return tuple(rows)
