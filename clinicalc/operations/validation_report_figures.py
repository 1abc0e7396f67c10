"""How a model does at one horizon, for the report: key figures, calibration, spread, discrimination and error."""

from collections.abc import Iterator, Sequence

from clinicalc.assessment.numerals import EN_DASH, NARROW_SPACE
from clinicalc.operations.validation_names import MEAN_ERROR
from clinicalc.operations.validation_words import (
    LIMITS,
    at_words,
    by_words,
    figure_words,
    how_words,
    limits_words,
    share_of_all,
)
from clinicalc.report.calibration_figure import ShownCalibration
from clinicalc.report.calibration_words import points_words
from clinicalc.report.contents import (
    CalibrationPart,
    Cell,
    Column,
    KeyFiguresPart,
    NotedCell,
    Prose,
    Row,
    Section,
    SpreadPart,
    Table,
)
from clinicalc.report.key_figures import KeyFigure, KeyFigures
from clinicalc.report.spread_figure import ShownSpread
from clinicalc.validation.validated import HorizonValidation, Measure, Outcomes

_LONGEST_WHY = 48
_COLUMNS = (
    Column("figure", 0.0, 150.0),
    Column("value", 150.0, 62.0, at_end=True),
    Column(LIMITS, 218.0, 96.0, at_end=True),
    Column("how it was made", 332.0, 178.0),
)
_READ = {
    "O/E": (
        "Observed over expected above 1 says that more had the event than the model expects, which is then too low;"
        " below 1, that it is too high."
    ),
    "slope": "A slope below 1 says that predictions are too extreme, above 1 that they lie too close together.",
    "error": (
        "The Brier score is the mean squared distance of prediction and outcome. Scaled, it is the part of the score of"
        " the same prediction for everybody that the model takes away; below 0 the model is worse than that."
    ),
}
_NULL = "of the observed risk for everybody"
_SHORT_ERROR = "Mean error (ICI)"
"""Its name in a row of figures, where the whole one would take two lines."""


def tell_key_figures(horizon: HorizonValidation) -> Section:
    """The five figures of one horizon in a row."""
    shown = KeyFiguresPart(list_key_figures(horizon))
    return Section(f"In five figures, with {LIMITS}{at_words(horizon.span)}", (shown,), whole=True)


def tell_figures(horizon: HorizonValidation) -> Iterator[Section]:
    """All sections of one horizon but the key figures and those of decisions."""
    at = at_words(horizon.span)
    yield Section(f"Right on average, and over the range{at}", tuple(_calibration_table(horizon)), whole=True)
    yield Section(f"Predicted and observed{at}", (CalibrationPart(show_calibration(horizon)),), whole=True)
    yield Section(f"How the predictions lie{at}", (SpreadPart(show_spread(horizon)),), whole=True)
    yield Section(f"Telling people apart, and error{at}", tuple(_error_table(horizon)), whole=True)


def show_calibration(horizon: HorizonValidation) -> ShownCalibration:
    """The calibration figure of a horizon."""
    span = "" if horizon.span is None else horizon.span.words
    return ShownCalibration(horizon.calibration, span, _other(horizon))


def show_spread(horizon: HorizonValidation) -> ShownSpread:
    """How the predictions of a horizon lie; who was lost before it, or had another event first, stands below."""
    spread = horizon.calibration.spread
    if horizon.span is None:
        return ShownSpread(spread)
    return ShownSpread(spread, f"with the event seen by {horizon.span.words}", "no event seen by then")


def list_key_figures(horizon: HorizonValidation) -> KeyFigures:
    """The five figures that stand first, with limits under them."""
    ici = horizon.ici
    figure, _, unit = ("", "", "") if ici.value is None else points_words(ici.value).partition(" ")
    scaled = horizon.scaled_brier
    return KeyFigures(
        (
            _key("Observed / expected", horizon.observed_to_expected),
            _key("Calibration slope", horizon.slope),
            _key("C statistic", horizon.c),
            KeyFigure(
                "Scaled Brier score",
                EN_DASH if scaled.value is None else figure_words(100.0 * scaled.value, 1),
                "" if scaled.value is None else "%",
                _under(scaled, limits_words(scaled, 1, percent=True)),
            ),
            KeyFigure(_SHORT_ERROR, figure or EN_DASH, unit, _under(ici, span_words(ici))),
        )
    )


def _key(name: str, measure: Measure) -> KeyFigure:
    return KeyFigure(name, figure_words(measure.value), "", _under(measure, limits_words(measure)))


def _under(measure: Measure, limits: str) -> str:
    """The limits, or why there are none where that is short; the tables say it in full."""
    if limits != EN_DASH:
        return limits
    short = measure.why if len(measure.why) <= _LONGEST_WHY else ""
    return short or ("no figure, see the table" if measure.value is None else "no limits")


def span_words(measure: Measure) -> str:
    """The limits of a distance of two risks, in percentage points; "–" for none."""
    if measure.value is None or measure.lower is None or measure.upper is None:
        return EN_DASH
    return f"{figure_words(100.0 * measure.lower, 1)} to {figure_words(100.0 * measure.upper, 1)} points"


def _calibration_table(horizon: HorizonValidation) -> Iterator[Prose | Table]:
    yield Prose((f"{_counted(horizon)} {_READ['O/E']} {_READ['slope']}",), keep=True)
    rows = [
        _row("Observed risk", horizon.observed, share_of_all(horizon.observed.value, 2), percent=True),
        Row(("Expected risk", share_of_all(horizon.expected, 2), EN_DASH, "mean of the predictions")),
        _row("Observed / expected", horizon.observed_to_expected, figure_words(horizon.observed_to_expected.value, 3)),
        _row("Calibration intercept", horizon.intercept, figure_words(horizon.intercept.value, 3)),
        _row("Calibration slope", horizon.slope, figure_words(horizon.slope.value, 3)),
        _index_row(horizon.ici),
    ]
    if horizon.calibration.indices is not None:
        rows += _other_indices(horizon)
    yield Table(_COLUMNS, tuple(rows), small=True)


def _index_row(ici: Measure) -> Row:
    value = EN_DASH if ici.value is None else points_words(ici.value)
    return Row((MEAN_ERROR, value, span_words(ici), _how(ici)))


def _other_indices(horizon: HorizonValidation) -> Iterator[Row]:
    for name, measure, how in (
        ("E50", horizon.e50, "median distance"),
        ("E90", horizon.e90, f"distance that 90{NARROW_SPACE}% of the people do not exceed"),
        ("Emax", horizon.emax, "largest distance"),
    ):
        yield Row((name, EN_DASH if measure.value is None else points_words(measure.value), span_words(measure), how))


def _error_table(horizon: HorizonValidation) -> Iterator[Prose | Table]:
    timed = horizon.outcomes is not Outcomes.BINARY
    found: Sequence[tuple[str, Measure]] = (
        ("C", horizon.c),
        *((("Uno’s C", horizon.uno), ("AUC at the horizon", horizon.auc)) if timed else ()),
    )
    rows = [_row(name, measure, figure_words(measure.value, 3), 3) for name, measure in found]
    rows.append(_row("Brier score", horizon.brier, figure_words(horizon.brier.value, 4), 4))
    rows.append(Row(("Brier score without a model", figure_words(horizon.brier_null, 4), EN_DASH, _NULL)))
    scaled = horizon.scaled_brier
    rows.append(_row("Scaled Brier score", scaled, share_of_all(scaled.value), 1, percent=True))
    yield Prose((_READ["error"],), keep=True)
    yield Table(_COLUMNS, tuple(rows), small=True)


def _row(name: str, measure: Measure, value: str, decimals: int | None = None, *, percent: bool = False) -> Row:
    places = decimals if decimals is not None else 2 if percent else 3
    return Row((name, value, limits_words(measure, places, percent=percent), _how(measure)))


def _how(measure: Measure) -> Cell:
    how = how_words(measure)
    note = measure.why or measure.remark
    return NotedCell(how, (note,)) if note and how else note or how


def _counted(horizon: HorizonValidation) -> str:
    other = f", and another event came first in {horizon.competing:,}" if horizon.competing else ""
    return (
        f"Of {horizon.people:,} people {horizon.events:,} were seen to have the event{by_words(horizon.span)}{other}."
    )


def _other(horizon: HorizonValidation) -> str:
    """A note under the calibration figure where other events come first."""
    if horizon.outcomes is not Outcomes.COMPETING:
        return ""
    return "Other events are counted as such: the risk observed is that of having the event before any other."
