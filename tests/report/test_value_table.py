"""The values as typed: each with its unit, its range and the marks of the findings about it."""

import pytest

from clinicalc.assessment.result import Assessment
from clinicalc.report.compose import compose
from clinicalc.report.contents import Column, Mark, MarksCell, RangeCell, Row, RowKind, Table, TypedCell
from clinicalc.report.fonts import read_lettering
from clinicalc.report.pages import lay_out
from clinicalc.report.shapes import Line, Poly, Rect, Shape, Text, Tone
from clinicalc.report.table import set_mark, set_table
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


def texts_of(assessment: Assessment) -> list[Text]:
    """The texts of the first page."""
    page = lay_out(read_lettering(), compose(assessment, practice=PRACTICE, printed_at=PRINTED))[0]
    return [shape for shape in page.shapes if isinstance(shape, Text)]


def test_a_question_stands_over_all_values_with_its_answer_in_the_column_of_the_answers() -> None:
    texts = texts_of(with_band())
    question = next(text for text in texts if text.text == "Has it happened before?")
    no, yes = (next(text for text in texts if text.text == said) for said in ("No", "Yes"))
    age, smokes, heading = (
        next(text for text in texts if text.text == said) for said in ("Age", "Smokes now", "typed")
    )
    assert no.x == yes.x
    assert question.y == no.y < heading.y < age.y
    assert no.y < smokes.y == yes.y < age.y  # the answers begin beside the headings of the numbers
    assert age.x == question.x < heading.x < smokes.x
    assert [text.text for text in texts].count("typed") == 1


def test_values_of_one_kind_and_long_tables_stand_below_each_other() -> None:
    column = Column("asked", 0.0, 100.0)
    numbers = Table((column,), tuple(Row((f"row {n}",)) for n in range(3)), kinds_apart=True)
    assert {text.x for text in texts_in(numbers)} == {0.0}
    columns = tuple(Column("", 100.0 * place, 90.0) for place in range(5))
    kinds = (RowKind.NUMBER, RowKind.ANSWER)
    rows = tuple(Row((f"row {n}", TypedCell("1"), "", MarksCell(()), ""), kinds[n % 2]) for n in range(26))
    long, short = (Table(columns, part, kinds_apart=True) for part in (rows, rows[:24]))
    assert {text.x for text in texts_in(long) if text.text.startswith("row")} == {0.0}
    assert len({text.x for text in texts_in(short) if text.text.startswith("row")}) == 2


def texts_in(table: Table) -> list[Text]:
    return [s for strip in set_table(read_lettering(), table) for s in strip.shapes if isinstance(s, Text)]


def test_an_answer_that_was_used_in_other_words_says_both() -> None:
    columns = tuple(Column("", 100.0 * place, 90.0) for place in range(5))
    rows = (
        Row(("Age", TypedCell("61", "years"), "", MarksCell(()), "")),
        Row(("Smokes", TypedCell("y"), "Yes", MarksCell(()), ""), RowKind.ANSWER),
        Row(("Sex", TypedCell("x", "(not used)"), "–", MarksCell(()), ""), RowKind.ANSWER),
    )
    said = [text.text.strip() for text in texts_in(Table(columns, rows, kinds_apart=True))]
    assert said == ["Age", "61", "years", "Smokes", "y", "Yes", "Sex", "x", "(not used)"]


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


def test_what_a_value_is_the_mean_of_stands_with_it() -> None:
    cells = rows_of(run("tarnwick-cvd-10y", DEMO, systolic_bp="142 of 2 visits of 3 readings"))[
        "Systolic blood pressure"
    ]
    assert cells.cells[1] == TypedCell("142", "mmHg, mean of 2 visits, 3 readings each")
