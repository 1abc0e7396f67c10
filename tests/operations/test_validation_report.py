"""The report of a validation as contents: every figure in its tables is that of the Validation, in reading order."""

import math

import pytest

from clinicalc.operations.validation_report import compose_validation_report
from clinicalc.operations.validation_report_methods import NO_APPROVAL
from clinicalc.report.contents import (
    Block,
    FactList,
    FlowPart,
    GroupsPart,
    KeyFiguresPart,
    NetBenefitPart,
    NotedCell,
    Prose,
    Row,
    Section,
    Table,
)
from clinicalc.report.vetting_sheet import VettingSheet
from clinicalc.validation.updated import UpdateMethod
from clinicalc.validation.validated import HorizonValidation, Measure
from tests.operations.reported_validations import KINDS, reported, updated

NAMES = {
    "Observed / expected": ("observed_to_expected", 3),
    "Calibration intercept": ("intercept", 3),
    "Calibration slope": ("slope", 3),
    "C": ("c", 3),
    "Uno’s C": ("uno", 3),
    "AUC at the horizon": ("auc", 3),
    "Brier score": ("brier", 4),
}


def composed(kind: str) -> VettingSheet:
    return compose_validation_report(reported(kind))


def section(sheet: VettingSheet, begins: str, at: str = "") -> Section:
    return next(one for one in sheet.sections if one.heading.startswith(begins) and one.heading.endswith(at))


def table(one: Section) -> Table:
    return next(block for block in one.blocks if isinstance(block, Table))


def cell_words(cell: object) -> str:
    if isinstance(cell, NotedCell):
        return " ".join((cell.text, *cell.notes))
    assert isinstance(cell, str)
    return cell


def rows_of(one: Section) -> dict[str, list[str]]:
    return {cell_words(row.cells[0]): [cell_words(cell) for cell in row.cells[1:]] for row in table(one).rows}


def said(blocks: tuple[Block, ...]) -> str:
    parts: list[str] = []
    for block in blocks:
        if isinstance(block, Prose):
            parts += block.paragraphs
        elif isinstance(block, FactList):
            parts += [f"{fact.name}: {' '.join(fact.paragraphs)}" for fact in block.facts]
    return " ".join(parts)


def spelled(value: float | None, decimals: int) -> str:
    return "–" if value is None else f"{value:,.{decimals}f}".replace("-", "−")


def percent(value: float | None, decimals: int = 1) -> str:
    return "–" if value is None else f"{spelled(100 * value, decimals)}\u202f%"


def between(measure: Measure, decimals: int) -> str:
    if measure.value is None or measure.lower is None:
        return "–"
    return f"{spelled(measure.lower, decimals)} to {spelled(measure.upper, decimals)}"


def between_percent(measure: Measure, decimals: int = 1) -> str:
    if measure.value is None or measure.lower is None or measure.upper is None:
        return "–"
    return f"{spelled(100 * measure.lower, decimals)} to {spelled(100 * measure.upper, decimals)}\u202f%"


def at(horizon: HorizonValidation) -> str:
    return "" if horizon.span is None else f", {horizon.span.words}"


@pytest.mark.parametrize("kind", KINDS)
def test_sections_in_reading_order(kind: str) -> None:
    sheet = composed(kind)
    told = reported(kind)
    headings = [one.heading for one in sheet.sections]
    assert sheet.says == told.validation.verdict[0]
    figures = [f"In five figures, with 95\u202f% limits{at(horizon)}" for horizon in told.validation.horizons]
    assert headings[: 4 + len(figures)] == [
        "What was found",
        *figures,
        "These people, and whom the model is for",
        "Where everybody went",
        "Missing, and outside of the model’s limits",
    ]
    assert headings[-2:] == ["How it was worked out", "What it does not say"]
    for horizon in told.validation.horizons:
        for what in (
            "In five figures, with 95\u202f% limits",
            "Right on average, and over the range",
            "Predicted and observed",
            "How the predictions lie",
            "Telling people apart, and error",
            "Decisions, of 100 people",
            "Who is found, and who is not",
            "Net benefit over decision points",
        ):
            assert f"{what}{at(horizon)}" in headings
    assert ("The update" in headings) == (told.updated is not None)


def test_faults_stand_first_and_by_name() -> None:
    validation = reported("timed").validation
    first = composed("timed").sections[0]
    words = said(first.blocks)
    for sentence in (*validation.verdict[1:], *(fault.sentence for fault in validation.faults)):
        assert words.count(sentence) == 1
    assert [[cell_words(cell) for cell in row.cells] for row in table(first).rows] == [
        ["predictions too low", "everybody", "<0.0001"],
        ["predictions too low in a group", "Sex: Female", "0.002"],
        ["a column in another unit", "HDL cholesterol", "<0.0001"],
    ]


def test_no_fault_is_not_called_proof() -> None:
    first = composed("competed").sections[0]
    assert "not the same as no fault" in said(first.blocks)
    assert not any(isinstance(block, Table) for block in first.blocks)


def test_everybody_is_somewhere() -> None:
    sheet, count = composed("timed"), reported("timed").validation.count
    (flow,) = [block.flow for block in section(sheet, "Where everybody went").blocks if isinstance(block, FlowPart)]
    left = [one.count for one in flow.stages[0].leaving]
    assert left == [88, 7, 41, 60, 4]
    assert flow.stages[0].count == count.in_file == sum(left) + flow.stages[1].count
    assert "Has the patient ever had a heart attack" in flow.stages[0].leaving[0].reason
    rows = rows_of(section(sheet, "Missing, and outside"))
    assert rows == {
        "Age": ["–", "–", f"31 ({percent(31 / 3000)})"],
        "Systolic blood pressure": ["–", f"3 ({percent(3 / 3200)})", "–"],
        "Total cholesterol": ["–", f"2 ({percent(2 / 3200)})", "–"],
        "HDL cholesterol": [f"45 ({percent(45 / 3200)})", "–", "–"],
        "eGFR": [f"21 ({percent(21 / 3200)})", "–", "–"],
    }


@pytest.mark.parametrize("kind", KINDS[:4])
def test_every_figure_of_a_horizon(kind: str) -> None:
    sheet = composed(kind)
    for horizon in reported(kind).validation.horizons:
        rows = rows_of(section(sheet, "Right on average", at(horizon)))
        rows |= rows_of(section(sheet, "Telling people apart", at(horizon)))
        for name, (attribute, decimals) in NAMES.items():
            measure: Measure = getattr(horizon, attribute)
            if name in ("Uno’s C", "AUC at the horizon") and horizon.span is None:
                assert name not in rows
                continue
            assert rows[name][:2] == [spelled(measure.value, decimals), between(measure, decimals)]
            assert measure.why in rows[name][2]
        assert rows["Observed risk"][:2] == [percent(horizon.observed.value, 2), between_percent(horizon.observed, 2)]
        assert rows["Expected risk"][0] == percent(horizon.expected, 2)
        assert rows["Brier score without a model"][0] == spelled(horizon.brier_null, 4)
        scaled = horizon.scaled_brier
        assert rows["Scaled Brier score"][:2] == [percent(scaled.value), between_percent(scaled)]
        ici = horizon.ici.value
        points = "–" if ici is None else f"{100 * ici:.{1 if 100 * ici >= 1 else 2}f} points"
        assert rows["Mean calibration error (ICI)"][0] == points
        assert ("Emax" in rows) == (horizon.calibration.indices is not None)
        assert f"Of {horizon.people:,} people {horizon.events:,} were seen to have" in said(
            section(sheet, "Right on average", at(horizon)).blocks
        )


@pytest.mark.parametrize("kind", KINDS[:4])
def test_the_five_figures_that_stand_first(kind: str) -> None:
    sheet = composed(kind)
    for horizon in reported(kind).validation.horizons:
        (part,) = section(sheet, "In five figures", at(horizon)).blocks
        assert isinstance(part, KeyFiguresPart)
        five = part.shown.figures
        for one, measure in zip(five, (horizon.observed_to_expected, horizon.slope, horizon.c), strict=False):
            assert one.figure == spelled(measure.value, 2)
            if measure.lower is not None:
                assert one.under == between(measure, 2)
            else:
                assert one.under in (measure.why, "no figure, see the table", "no limits")
        assert five[3].figure == spelled(None if (s := horizon.scaled_brier.value) is None else 100 * s, 1)
        assert five[4].unit == ("" if horizon.ici.value is None else "points")


@pytest.mark.parametrize("kind", KINDS[:4])
def test_the_decision_tables(kind: str) -> None:
    sheet = composed(kind)
    for horizon in reported(kind).validation.horizons:
        first = table(section(sheet, "Decisions, of 100", at(horizon)))
        second = table(section(sheet, "Who is found", at(horizon)))
        points = sorted(horizon.decisions, key=lambda one: one.point)
        for one, row, other in zip(points, first.rows, second.rows, strict=True):
            cells = [cell_words(cell) for cell in row.cells]
            flagged = one.flagged / horizon.people
            with_event = 0.0 if one.flagged == 0 else flagged * (one.positive_value.value or math.nan)
            assert cells[0] == f"{percent(one.point)} {one.label}".strip()
            assert cells[1:4] == [spelled(100 * part, 1) for part in (flagged, with_event, flagged - with_event)]
            assert cells[4] == spelled(one.missed, 1)
            assert cells[5:] == [spelled(100 * w if w else w, 2) for w in (one.net_benefit, one.treat_all)]
            # everybody with the event is either flagged or missed
            assert one.missed is not None
            assert 100 * with_event + one.missed == pytest.approx(100 * (horizon.observed.value or 0.0), abs=1.0)
            measures = (one.sensitivity, one.specificity, one.positive_value, one.negative_value)
            for cell, measure in zip(other.cells[1:], measures, strict=True):
                words = cell_words(cell)
                if measure.value is None:
                    assert words == "none"
                elif measure.lower is None:
                    assert words == f"{percent(measure.value)} no limits"
                else:
                    assert words == f"{percent(measure.value)} ({between_percent(measure)})"
        (curve,) = section(sheet, "Net benefit", at(horizon)).blocks
        assert isinstance(curve, NetBenefitPart)
        assert {mark.point for mark in curve.shown.marks} == {one.point for one in points}


def test_the_practices_point_alone_stands_on_wash() -> None:
    for kind, expected in (("timed", ["10.0\u202f% Practice setting"]), ("competed", [])):
        sheet = composed(kind)
        one = section(sheet, "Decisions, of 100", ", 10 years")
        marked: list[Row] = [row for row in table(one).rows if row.marked]
        assert [cell_words(row.cells[0]) for row in marked] == expected
        assert ("On wash: the practice’s" in said(one.blocks)) == bool(expected)


@pytest.mark.parametrize("kind", KINDS[:4])
def test_every_group(kind: str) -> None:
    sheet, validation = composed(kind), reported(kind).validation
    groups = validation.groups
    drawn = next(b.shown for s in sheet.sections for b in s.blocks if isinstance(b, GroupsPart))
    assert [one.level for one in drawn.groups[1:]] == [group.level for group in groups]
    last = validation.horizons[-1]
    assert (drawn.groups[0].people, drawn.groups[0].ratio) == (last.people, last.observed_to_expected.value)
    rows = table(section(sheet, "Figures of the groups")).rows
    for one, group, row in zip(drawn.groups[1:], groups, rows, strict=True):
        ratio = group.observed_to_expected
        assert (one.people, one.events, one.ratio) == (group.people, group.events, ratio.value)
        assert (one.lower, one.upper) == (ratio.lower, ratio.upper)
        cells = [cell_words(cell) for cell in row.cells]
        assert cells[1:3] == [f"{group.people:,}", f"{group.events:,}"]
        assert cells[3].startswith(percent(group.observed.value))
        assert cells[4] == percent(group.expected)
        assert cells[5].startswith(spelled(group.slope.value, 2))
        assert cells[6].startswith(spelled(group.c.value, 2))
        assert group.why in cells[0]


def test_methods_and_silence() -> None:
    methods = said(section(composed("competed"), "How it was worked out").blocks)
    for words in (
        "the observed risk is that of having the event before any other",
        "Observed risk: The cumulative incidence of Aalen and Johansen.",
        "Calibration slope: The slope of a Fine–Gray model on",
        "whoever had another event stays without the event",
        "Fine–Gray model on",
        "at or above a decision point are flagged",
    ):
        assert words in methods
    silence = said(section(composed("competed"), "What it does not say").blocks)
    for words in ("no approval", "may not hold next year", "before a file is vetted"):
        assert words in silence
    assert composed("timed").furniture.caution == NO_APPROVAL


def test_the_tests_of_an_update_and_its_lines() -> None:
    sheet = composed("intercept_slope")
    why = section(sheet, "Why this way")
    assert "Chosen: baseline and slope. A refit is not significantly better (p 0.181)." in said(why.blocks)
    assert [cell_words(cell) for cell in table(why).rows[1].cells] == [
        "a refit", "a new baseline alone", "24.11", "12", "0.020"
    ]  # fmt: skip
    # 0.2624 -+ 1.959964 x 0.05 and 1.0432 -+ 1.959964 x 0.06
    expected = ["0.2624 (0.1644 to 0.3604)", "1.0432 (0.9256 to 1.1608)", "3,000"]
    lines = rows_of(section(sheet, "Intercept and slope"))
    assert lines == {"5 years": [*expected, "180"], "10 years": [*expected, "401"]}
    assert "all: 3 people lack an outcome." in said(section(sheet, "Remarks on the update").blocks)


def test_old_stands_against_new() -> None:
    told = reported("intercept_slope")
    assert told.updated is not None
    assert told.updated.after is not None
    new, old = told.updated.after.horizons[1], told.validation.horizons[1]
    rows = rows_of(section(composed("intercept_slope"), "Old against new", ", 10 years"))
    assert rows["Expected risk"] == [percent(old.expected, 2), percent(new.expected, 2)]
    for name, (attribute, decimals) in NAMES.items():
        pair: list[Measure] = [getattr(each, attribute) for each in (old, new)]
        assert rows[name] == [f"{spelled(m.value, decimals)} ({between(m, decimals)})" for m in pair]


def test_a_refit_and_groups_of_two_scales() -> None:
    rows = rows_of(section(composed("refit"), "Coefficients"))
    # -0.345 -+ 1.959964 x 0.1
    assert rows["male"][1:] == ["−0.3450", "−0.5410 to −0.1490"]
    model = reported("refit").model
    old = {term.id: term.coefficient for term in model.content.equations[0].terms}
    assert rows["male"][0] == spelled(old["male"], 4)
    assert "Uniform shrinkage 0.975" in said(section(composed("refit"), "Coefficients").blocks)
    groups = table(section(composed("two_scale"), "Groups of the update"))
    assert len(groups.rows) == len(updated(UpdateMethod.TWO_SCALE).equations[0].groups)
    assert [cell_words(cell) for cell in groups.rows[0].cells[1:]] == [
        "300", "2.00\u202f%", "2.50\u202f%", "0.40\u202fpoints"
    ]  # fmt: skip


def test_a_model_that_is_kept_has_no_file() -> None:
    assert "there is no new version" in said(section(composed("keep"), "The file").blocks)
    assert "No file was made" in said(section(composed("refit"), "The file").blocks)
