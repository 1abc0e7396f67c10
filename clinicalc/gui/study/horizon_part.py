"""What a validation comes to at one horizon: key figures, calibration beside decisions and net benefit, all figures."""

from collections.abc import Iterator, Sequence
from dataclasses import replace

from PySide6.QtWidgets import QVBoxLayout, QWidget

from clinicalc.assessment.numerals import EN_DASH, MINUS, NARROW_SPACE
from clinicalc.gui.held_layouts import Block
from clinicalc.gui.labels import Heading, make_label
from clinicalc.gui.study.calibration_view import CalibrationView, PlotView
from clinicalc.gui.study.decision_rows import DECISIONS, FOUND, decision_facts, decision_notes, found_facts
from clinicalc.gui.study.fact_rows import Fact, FactColumn, FactRows
from clinicalc.gui.study.fact_table import FactTable
from clinicalc.gui.study.key_figures import KeyFigureRow
from clinicalc.gui.study.side_by_side import SideBySide
from clinicalc.gui.typeface import CAPTION, UNIT
from clinicalc.operations.validation_names import MEAN_ERROR
from clinicalc.operations.validation_report_decisions import show_net_benefit
from clinicalc.operations.validation_report_figures import list_key_figures, span_words
from clinicalc.operations.validation_words import LIMITS, figure_words, how_words, limits_words, share_of_all
from clinicalc.report.calibration_figure import ShownCalibration
from clinicalc.report.calibration_words import points_words
from clinicalc.report.key_figures import KeyFigure
from clinicalc.report.net_benefit_figure import draw_net_benefit
from clinicalc.validation.validated import HorizonValidation, Measure, Outcomes

_FIGURES = (
    FactColumn("Figure"),
    FactColumn("Value", is_figures=True),
    FactColumn(LIMITS, is_figures=True),
    FactColumn("How it was made"),
)
_NO_CURVE = "There is no curve: what happened to those flagged is not known, or all predictions are nought."
_OTHERS = "Other events are counted as such: the risk observed is that of having the event before any other."


class HorizonPart(Block):
    """`tables` are those in it, in reading order."""

    def __init__(self, shown: HorizonValidation, practice: Sequence[float]) -> None:
        """`practice` are the decision points that the practice acts at, at this horizon."""
        super().__init__()
        self.tables: list[FactTable] = []
        span = "" if shown.span is None else shown.span.words
        at = f" at {span}" if span else ""
        column = QVBoxLayout(self)
        column.setContentsMargins(0, 0, 0, 0)
        column.setSpacing(10)
        column.addWidget(KeyFigureRow(_name_limits(list_key_figures(shown).figures)))
        note = _OTHERS if shown.outcomes is Outcomes.COMPETING else ""
        calibration = CalibrationView(ShownCalibration(shown.calibration, span, note))
        left = (Heading(f"Calibration{at}"), calibration)
        column.addWidget(SideBySide(left, tuple(self._decisions(shown, practice, at))))
        column.addWidget(Heading(f"Every figure{at}"))
        column.addWidget(self._table(f"Every figure{at}", _FIGURES, tuple(_figure_facts(shown))))
        if shown.decisions:
            column.addWidget(Heading(f"Who is found, and who is not{at}"))
            facts = tuple(found_facts(shown, practice))
            column.addWidget(self._table(f"Who is found, and who is not{at}", FOUND, facts))

    def _decisions(self, shown: HorizonValidation, practice: Sequence[float], at: str) -> Iterator[QWidget]:
        yield Heading("Decision table, of 100 people")
        if shown.decisions:
            facts = tuple(decision_facts(shown, practice))
            yield self._table(f"Decision table, of 100 people{at}", DECISIONS, facts)
        for note in decision_notes(shown, practice):
            yield make_label(note, CAPTION, soft=True)
        yield Heading("Net benefit over decision points")
        net_benefit = show_net_benefit(shown)
        if net_benefit is None:
            yield make_label(_NO_CURVE, UNIT, soft=True)
        else:
            yield PlotView(lambda size, measure: draw_net_benefit(net_benefit, size, measure))

    def _table(self, name: str, columns: Sequence[FactColumn], facts: Sequence[Fact]) -> FactTable:
        table = FactTable(FactRows(columns, facts), name)
        self.tables.append(table)
        return table


def _name_limits(figures: Sequence[KeyFigure]) -> tuple[KeyFigure, ...]:
    """What stands under the figures is named at the first that has limits."""
    found = list(figures)
    for place, one in enumerate(found):
        if one.under[:1].isdigit() or one.under.startswith(MINUS):
            found[place] = replace(one, under=f"{one.under}, {LIMITS}")
            break
    return tuple(found)


def _figure_facts(shown: HorizonValidation) -> Iterator[Fact]:
    """Every figure with its limits and how both were made; why there is none stands under it."""
    by = "" if shown.span is None else f", by {shown.span.words}"
    other = f"; another event first in {shown.competing:,}" if shown.competing else ""
    yield Fact(("People used", f"{shown.people:,}", "", f"{shown.events:,} with the event{by}{other}"))
    yield _fact("Observed risk", shown.observed, share_of_all(shown.observed.value, 2), 2, percent=True)
    yield Fact(("Expected risk", share_of_all(shown.expected, 2), "", "mean of the predictions"))
    timed = shown.outcomes is not Outcomes.BINARY
    for name, measure, digits in (
        ("Observed / expected", shown.observed_to_expected, 3),
        ("Calibration intercept", shown.intercept, 3),
        ("Calibration slope", shown.slope, 3),
        ("C" if timed else "C, the area under the ROC curve", shown.c, 3),
        *((("Uno’s C", shown.uno, 3), ("AUC at the horizon", shown.auc, 3)) if timed else ()),
        ("Brier score", shown.brier, 4),
    ):
        yield _fact(name, measure, figure_words(measure.value, digits), digits)
    if shown.brier_null is not None:
        words = figure_words(shown.brier_null, 4)
        yield Fact(("Brier score without a model", words, "", "of the observed risk for everybody"))
    scaled = shown.scaled_brier
    yield _fact("Scaled Brier score", scaled, share_of_all(scaled.value), 1, percent=True)
    yield _distance(MEAN_ERROR, shown.ici, how_words(shown.ici))
    if shown.calibration.indices is not None:
        for name, measure, how in (
            ("E50", shown.e50, "median distance"),
            ("E90", shown.e90, f"distance that 90{NARROW_SPACE}% of the people do not exceed"),
            ("Emax", shown.emax, "largest distance"),
        ):
            yield _distance(name, measure, how)


def _distance(name: str, measure: Measure, how: str) -> Fact:
    """Of two risks, in percentage points."""
    value = EN_DASH if measure.value is None else points_words(measure.value)
    limits = span_words(measure)
    return Fact((name, value, "" if limits == EN_DASH else limits, how), measure.why or measure.remark)


def _fact(name: str, measure: Measure, value: str, digits: int, *, percent: bool = False) -> Fact:
    return Fact(
        (name, value, limits_words(measure, digits, percent=percent), how_words(measure)), measure.why or measure.remark
    )
