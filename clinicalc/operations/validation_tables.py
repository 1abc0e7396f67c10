"""Every figure of a validation as tables for other programs: one CSV each, UTF-8, plain digits, shares from 0 to 1.

The tables are tidy: one row is one figure with its limits, or one place of a curve. A cell is empty where there is no
figure; `why` then says why. `horizon` and `unit` (UCUM) are empty for an outcome without time. A text from a file
that a spreadsheet would take for a formula has an apostrophe before it.
"""

import csv
import re
from collections.abc import Iterable, Iterator, Sequence
from io import StringIO
from pathlib import Path

import numpy as np

from clinicalc.coefficients.spans import Span
from clinicalc.operations.whole_folder import put_folder, require_folder
from clinicalc.validation.validated import LEVEL, HorizonValidation, Interval, Measure, Method, Validation

TABLES = (
    "about.csv",
    "people.csv",
    "faults.csv",
    "measures.csv",
    "groups.csv",
    "tenths.csv",
    "curve.csv",
    "decisions.csv",
    "net_benefit.csv",
)
"""The names of the files."""
Cell = str | int | float | None
_FORMULA = re.compile(r"[=+\-@\t\r\n]")
_PLAIN_NUMBER = re.compile(r"[+-]?\d+(\.\d+)?")
_AT = ("horizon", "unit")
_WHAT = "the tables"
_TENTH = ("predicted", "observed", "lower", "upper", "method")
_FIGURE = ("measure", "value", "lower", "upper", "level", "method", "interval", "why")


def write_validation_tables(folder: Path, validation: Validation, *, replace: bool = False) -> None:
    """All tables in a folder, which is made, or was empty, or with `replace` holds older ones; whole or not at all.

    Raises FileNotWritten where that cannot be.
    """
    put_folder(folder, tabulate_validation(validation), _WHAT, replace=replace)


def require_tables_place(folder: Path, *, replace: bool = False) -> None:
    """Nothing, where tables may be put in `folder`; asked before long work. Raises FileNotWritten."""
    require_folder(folder, TABLES, _WHAT, replace=replace)


def tabulate_validation(validation: Validation) -> dict[str, bytes]:
    """Each table by the name of its file."""
    tables: tuple[tuple[Sequence[str], Iterable[Sequence[Cell]]], ...] = (
        (("what", "text"), _about(validation)),
        (("step", "of", "people"), _people(validation)),
        (("kind", "of", "answer", "p", "sentence"), _faults(validation)),
        ((*_AT, *_FIGURE), _measures(validation)),
        (("by", "group", "people", "events", *_FIGURE), _groups(validation)),
        ((*_AT, "tenth", "people", "events", *_TENTH), _tenths(validation)),
        ((*_AT, "smoother", "predicted", "observed", "lower", "upper"), _curve(validation)),
        ((*_AT, "point", "label", "flagged", *_FIGURE), _decisions(validation)),
        ((*_AT, "point", "by_model", "on_everyone"), _net_benefit(validation)),
    )
    return {name: _write(heading, rows) for name, (heading, rows) in zip(TABLES, tables, strict=True)}


def _write(heading: Sequence[str], rows: Iterable[Sequence[Cell]]) -> bytes:
    text = StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(heading)
    writer.writerows([_spell(cell) for cell in row] for row in rows)
    return text.getvalue().encode("utf-8")


def _spell(cell: Cell) -> str:
    """A number in the fewest digits that give it back, never in exponent form; nothing for none."""
    if cell is None:
        return ""
    if isinstance(cell, str):
        return _spell_text(cell)
    if isinstance(cell, int):
        return str(cell)
    return np.format_float_positional(cell, trim="-") if np.isfinite(cell) else ""


def _spell_text(text: str) -> str:
    """As it stands, but what would run as a formula begins with an apostrophe; a code such as -9 is no formula."""
    return f"'{text}" if _FORMULA.match(text) and not _PLAIN_NUMBER.fullmatch(text) else text


def _at(span: Span | None) -> tuple[Cell, Cell]:
    return (None, None) if span is None else (span.time, span.unit)


def _figure(name: str, measure: Measure) -> tuple[Cell, ...]:
    method = "" if measure.method is Method.NONE else measure.method.value
    interval = "" if measure.interval is Interval.NONE else measure.interval.value
    level = LEVEL if measure.lower is not None else None
    return (name, measure.value, measure.lower, measure.upper, level, method, interval, measure.why)


def _bare(name: str, value: float | None) -> tuple[Cell, ...]:
    return _figure(name, Measure(value))


def _about(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    yield "title", validation.title
    yield "version", validation.version
    yield "fingerprint", validation.fingerprint
    yield "recalibration", validation.recalibration
    yield "cohort", validation.cohort
    yield from (("verdict", sentence) for sentence in validation.verdict)
    yield from (("remark", sentence) for sentence in validation.remarks)


def _people(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    """Where everybody went; the steps with something in `of` say how many of those counted before it were of what."""
    count = validation.count
    yield "in_file", "", count.in_file
    yield from (("excluded", id, people) for id, people in count.excluded.items())
    yield "not_covered", "", count.not_covered
    yield "no_outcome", "", count.no_outcome
    yield "missing", "", count.missing
    yield from (("missing_value", id, people) for id, people in count.missing_by.items())
    yield "refused", "", count.refused
    yield from (("refused_value", id, people) for id, people in count.refused_by.items())
    yield "used", "", count.used
    yield from (("beyond_derivation", id, people) for id, people in count.beyond.items())


def _faults(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    return ((one.kind.value, one.at, one.level, one.p, one.sentence) for one in validation.faults)


def _measures(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    for horizon in validation.horizons:
        for figure in _of_horizon(horizon):
            yield (*_at(horizon.span), *figure)


def _of_horizon(horizon: HorizonValidation) -> Iterator[tuple[Cell, ...]]:
    for name, count in (("people", horizon.people), ("events", horizon.events), ("competing", horizon.competing)):
        yield _bare(name, count)
    yield _figure("observed", horizon.observed)
    yield _bare("expected", horizon.expected)
    yield _figure("observed_to_expected", horizon.observed_to_expected)
    yield _figure("intercept", horizon.intercept)
    yield _figure("slope", horizon.slope)
    yield _figure("c", horizon.c)
    yield _figure("uno", horizon.uno)
    yield _figure("auc", horizon.auc)
    yield _figure("brier", horizon.brier)
    yield _bare("brier_null", horizon.brier_null)
    yield _figure("scaled_brier", horizon.scaled_brier)
    yield _figure("ici", horizon.ici)
    for name, distance in (("e50", horizon.e50), ("e90", horizon.e90), ("emax", horizon.emax)):
        if distance.value is not None:
            yield _figure(name, distance)
    limits = horizon.calibration.limits
    if limits is not None:
        yield _bare("ici_by_chance", limits.chance)
        yield _bare("ici_by_chance_95th", limits.chance_bound)


def _groups(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    for group in validation.groups:
        figures = (
            _figure("observed", group.observed),
            _bare("expected", group.expected),
            _figure("observed_to_expected", group.observed_to_expected),
            _figure("slope", group.slope),
            _figure("c", group.c),
        )
        for figure in figures:
            yield (group.by, group.level, group.people, group.events, *figure)


def _tenths(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    for horizon in validation.horizons:
        calibration = horizon.calibration
        for number, tenth in enumerate(calibration.groups, 1):
            figures = (tenth.predicted, tenth.observed, tenth.lower, tenth.upper, calibration.observed.value)
            yield (*_at(horizon.span), number, tenth.people, tenth.events, *figures)


def _curve(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    for horizon in validation.horizons:
        curve = horizon.calibration.curve
        if curve is not None:
            none: list[None] = [None] * len(curve.predicted)
            lower = none if curve.lower is None else curve.lower.tolist()
            upper = none if curve.upper is None else curve.upper.tolist()
            for place in zip(curve.predicted.tolist(), curve.observed.tolist(), lower, upper, strict=True):
                yield (*_at(horizon.span), curve.smoother.value, *place)


def _decisions(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    for horizon in validation.horizons:
        for one in horizon.decisions:
            figures = (
                _figure("flagged_share", one.flagged_share),
                _figure("sensitivity", one.sensitivity),
                _figure("specificity", one.specificity),
                _figure("positive_predictive_value", one.positive_value),
                _figure("negative_predictive_value", one.negative_value),
                _bare("missed_of_100", one.missed),
                _bare("net_benefit", one.net_benefit),
                _bare("net_benefit_on_everyone", one.treat_all),
            )
            for figure in figures:
                yield (*_at(horizon.span), one.point, one.label, one.flagged, *figure)


def _net_benefit(validation: Validation) -> Iterator[tuple[Cell, ...]]:
    for horizon in validation.horizons:
        curve = horizon.net_benefit
        if curve is not None:
            for place in zip(curve.points.tolist(), curve.by_model.tolist(), curve.treat_all.tolist(), strict=True):
                yield (*_at(horizon.span), *place)
