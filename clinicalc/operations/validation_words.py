"""How figures of a validation are written in its report: shares, ratios, limits, p values, and names."""

from clinicalc.assessment.model import Model
from clinicalc.assessment.numerals import EN_DASH, MINUS, NARROW_SPACE
from clinicalc.coefficients.questions import ChoicePredictor
from clinicalc.coefficients.spans import Span
from clinicalc.operations.validation_names import INTERVALS, METHODS
from clinicalc.validation.validated import FaultKind, Interval, Measure

LIMITS = f"95{NARROW_SPACE}% limits"
FAULT_NAMES = {
    FaultKind.TOO_LOW: "predictions too low",
    FaultKind.TOO_HIGH: "predictions too high",
    FaultKind.TOO_EXTREME: "predictions too extreme",
    FaultKind.TOO_MODERATE: "predictions too moderate",
    FaultKind.UNIT: "a column in another unit",
    FaultKind.GROUP_TOO_LOW: "predictions too low in a group",
    FaultKind.GROUP_TOO_HIGH: "predictions too high in a group",
}
_LEAST_P = 0.0001


def figure_words(value: float | None, decimals: int = 2) -> str:
    """With a true minus, which a rounded nought has not; "–" for none."""
    if value is None or value != value:
        return EN_DASH
    text = f"{value:,.{decimals}f}"
    return text.removeprefix("-") if float(text.replace(",", "")) == 0 else text.replace("-", MINUS)


def share_of_all(value: float | None, decimals: int = 1) -> str:
    """A share of people that were counted as a percentage, which may be 0 or 100; "–" for none."""
    return EN_DASH if value is None or value != value else f"{figure_words(100.0 * value, decimals)}{NARROW_SPACE}%"


def of_hundred(value: float | None, decimals: int = 1) -> str:
    """A share of people as so many of 100, without a sign."""
    return EN_DASH if value is None else figure_words(100.0 * value, decimals)


def limits_words(measure: Measure, decimals: int = 2, *, percent: bool = False) -> str:
    """Both limits: "0.77 to 0.94", "3.4 to 6.6 %"; "–" for none."""
    if measure.value is None or measure.lower is None or measure.upper is None:
        return EN_DASH
    part = 100.0 if percent else 1.0
    low, high = (figure_words(part * limit, decimals) for limit in (measure.lower, measure.upper))
    return f"{low} to {high}{f'{NARROW_SPACE}%' if percent else ''}"


def how_words(measure: Measure) -> str:
    """How a figure was made, and how its limits."""
    made, limited = METHODS[measure.method], INTERVALS[measure.interval]
    limits = f"limits {limited}" if measure.interval is not Interval.NONE else ""
    if measure.interval in (Interval.NORMAL, Interval.WILSON):
        limits = f"{limited} limits"
    return "; ".join(part for part in (made, limits) if part)


def p_words(p: float | None) -> str:
    """A p value to three decimals, four where it is small; "–" for none."""
    if p is None or p != p:
        return EN_DASH
    if p < _LEAST_P:
        return f"<{_LEAST_P:g}"
    return f"{p:.3f}" if p >= 0.001 else f"{p:.4f}"


def at_words(span: Span | None) -> str:
    """After a heading: ", 10 years"; "" for an outcome without time."""
    return "" if span is None else f", {span.words}"


def by_words(span: Span | None) -> str:
    """After "the event": " by 10 years"; "" for an outcome without time."""
    return "" if span is None else f" by {span.words}"


def name_field(model: Model, id: str) -> str:
    """The label of a predictor or derived value, the question of an exclusion; what is none of these as it stands."""
    content = model.content
    for predictor in (*content.predictors, *content.derived):
        if predictor.id == id:
            return predictor.label
    for exclusion in content.exclusions:
        if exclusion.id == id:
            return exclusion.ask
    return id


def name_level(model: Model, by: str, level: str) -> str:
    """The label of an answer; what is none as it stands."""
    for predictor in model.content.predictors:
        if predictor.id == by and isinstance(predictor, ChoicePredictor):
            for choice in predictor.choices:
                if choice.id == level:
                    return choice.label
    return level
