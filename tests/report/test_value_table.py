"""The values as typed: each with its unit, its range and the marks of the findings about it."""

import pytest

from clinicalc.assessment.result import Assessment
from clinicalc.report.compose import compose
from clinicalc.report.contents import Mark, MarksCell, RangeCell, Row, Table, TypedCell
from clinicalc.report.fonts import read_lettering
from clinicalc.report.pages import lay_out
from clinicalc.report.shapes import Line, Poly, Rect, Shape, Text, Tone
from clinicalc.report.table import set_mark
from clinicalc.report.value_table import compose_values, mark
from tests.assessment.cases import DEMO, WOMAN_EGFR_90, run
from tests.report.printing import PRACTICE, PRINTED, with_band


def rows_of(assessment: Assessment) -> dict[object, Row]:
    """The rows of the table by their label."""
    blocks = [block for block in compose_values(assessment).blocks if isinstance(block, Table)]
    return {row.cells[0]: row for block in blocks for row in block.rows}


def test_the_derivation_range_stands_in_the_unit_of_the_typed_value() -> None:
    age = rows_of(with_band())["Age"].cells[4]
    assert isinstance(age, RangeCell)
    assert (age.span.low_text, age.span.high_text, age.value, age.inside) == ("30", "75", 50.0, True)
    cells = rows_of(run("tarnwick-cvd-10y", DEMO, total_cholesterol="200 mg/dL"))["Total cholesterol"].cells
    assert cells[1] == TypedCell("200", "mg/dL")
    assert cells[2] == "5.172 mmol/L"  # 200 * 0.02586
    assert isinstance(cells[4], RangeCell)
    # the file's 2.4 to 8.9 mmol/L over 0.02586 is 92.81 to 344.2 mg/dL; to three digits, inwards, as in the findings
    assert (cells[4].span.low_text, cells[4].span.high_text) == ("92.9", "344")
    assert cells[4].value == pytest.approx(200.0)


def test_the_answer_about_an_exclusion_stands_under_typed_and_below_the_headings() -> None:
    assessment = with_band()
    page = lay_out(read_lettering(), compose(assessment, practice=PRACTICE, printed_at=PRINTED))[0]
    texts = [shape for shape in page.shapes if isinstance(shape, Text)]
    heading = next(text for text in texts if text.text == "typed")
    question = next(text for text in texts if text.text == "Has it happened before?")
    answer = next(text for text in texts if text.text == "No")
    age = next(text for text in texts if text.text == "Age")
    assert answer.x == heading.x
    assert heading.y < question.y == answer.y < age.y
    assert [text.text for text in texts].count("typed") == 1


def test_a_value_outside_its_range_has_a_pointer_and_the_mark_of_its_finding() -> None:
    assessment = run("tarnwick-cvd-10y", DEMO, systolic_bp="215")
    place = next(n for n, finding in enumerate(assessment.findings, 1) if finding.field == "systolic_bp")
    *_, marks, span = rows_of(assessment)["Systolic blood pressure"].cells
    assert marks == MarksCell((mark(place, assessment.findings[place - 1]),))
    assert isinstance(span, RangeCell)
    assert not span.inside
    page = lay_out(read_lettering(), compose(assessment, practice=PRACTICE, printed_at=PRINTED))[0]
    label = next(s for s in page.shapes if isinstance(s, Text) and s.text == "Systolic blood pressure")
    beside = [s for s in page.shapes if _middle(s) is not None and abs((_middle(s) or 0) - label.y) < 8]
    assert any(isinstance(s, Rect) and s.outline is Tone.INK and s.fill is None for s in beside)  # a caution: outlined
    assert any(isinstance(s, Text) and s.text == str(place) for s in beside)
    assert any(isinstance(s, Poly) and s.fill is Tone.INK for s in beside)


def _middle(shape: Shape) -> float | None:
    match shape:
        case Text():
            return shape.y
        case Rect():
            return shape.y + shape.height / 2
        case Poly():
            return sum(y for _, y in shape.points) / len(shape.points)
        case _:
            return None


def test_a_worked_out_value_and_one_not_given_say_so() -> None:
    assessment = run("total-cvd-2024-base", WOMAN_EGFR_90, egfr="", creatinine="0.9 mg/dL", systolic_bp="")
    rows = rows_of(assessment)
    assert rows["eGFR"].cells[1] == TypedCell("", "worked out")
    assert str(rows["eGFR"].cells[2]).endswith("mL/min/1.73 m²")
    assert rows["Systolic blood pressure"].cells[1] == TypedCell("", "not given")


def test_what_was_typed_and_not_used_has_a_dash_in_the_place_of_its_value() -> None:
    cells = rows_of(with_band(age="abc"))["Age"].cells
    assert cells[1:3] == (TypedCell("abc", "(not used)"), "–")
    assert isinstance(cells[4], RangeCell)
    assert cells[4].value is None


def test_the_grade_of_a_mark_is_the_amount_of_its_ink() -> None:
    lettering = read_lettering()
    stop, caution, note = (set_mark(lettering, Mark("1", weight), 0.0) for weight in range(3))
    assert isinstance(stop[0], Rect)
    assert isinstance(stop[1], Text)
    assert (stop[0].fill, stop[1].tone) == (Tone.INK, Tone.SHEET)
    assert isinstance(caution[0], Rect)
    assert (caution[0].fill, caution[0].outline) == (None, Tone.INK)
    assert isinstance(note[0], Line)
