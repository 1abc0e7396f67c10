"""What was found, in the report of a fit: notes of one kind in one line, and nothing lost by it."""

from dataclasses import replace
from pathlib import Path

import pytest

from clinicalc.assessment.findings import Grade
from clinicalc.cohort.problems import DataProblem, ProblemCode
from clinicalc.development.estimating import FittedStudy
from clinicalc.estimation.screened import Figure, Screen
from clinicalc.estimation.screening_words import word_screened
from clinicalc.operations.study_report_findings import tell_file, tell_findings, tell_remarks
from clinicalc.report.contents import Prose, Remark, RemarkList, Section
from tests.operations.reported_studies import binary_study, fit_from, shipped, two_equations


def remarks(section: Section) -> tuple[Remark, ...]:
    (block,) = section.blocks
    assert isinstance(block, RemarkList)
    return block.remarks


def proses(section: Section) -> tuple[str, ...]:
    (block,) = section.blocks
    assert isinstance(block, Prose)
    return block.paragraphs


def found(fitted: FittedStudy) -> tuple[Remark, ...]:
    return remarks(tell_findings(fitted, fitted.figures[0], ""))


def test_notes_of_missing_values_stand_in_one_line_with_every_count_and_share() -> None:
    fitted, _ = shipped()
    labels = {one.id: one.label for one in fitted.model.content.predictors}
    said = [one.message for one in found(fitted)]
    (missing,) = (text for text in said if text.startswith("Values are missing, of 5,000 people: "))
    (together,) = (text for text in said if text.startswith("Missing together, and no other, of 5,000 people: "))
    for one in fitted.figures[0].screened:
        if one.gravity is Grade.NOTE and one.code in (Screen.MISSING, Screen.MISSING_TOGETHER):
            line = missing if one.code is Screen.MISSING else together
            share = f"{round(one.figure(Figure.PEOPLE)):,} ({100 * one.figure(Figure.SHARE):.1f}\u202f%)"
            assert f"{labels[one.columns[-1]]} {share}" in line
            assert all(labels[id] in line for id in one.columns)
    assert "Total cholesterol, HDL cholesterol and Smokes now 7 (0.1\u202f%); " in together


def test_cautions_come_first_and_everything_else_is_said_in_full() -> None:
    fitted, _ = shipped()
    listed = found(fitted)
    assert [one.mark.number for one in listed] == [str(number) for number in range(1, len(listed) + 1)]
    grades = [one.grade for one in listed]
    assert grades == sorted(grades)  # Caution, Note
    said = [one.message for one in listed]
    told = (Screen.MISSING, Screen.MISSING_TOGETHER)
    for one in fitted.figures[0].screened:
        if one.code not in told:
            assert word_screened(one) in said
    assert said[0].startswith("HDL cholesterol is missing for 271 of 5,000 people")


def test_values_filled_in_stand_in_one_line() -> None:
    fitted, _ = shipped()
    (figures,) = fitted.figures
    filled = [
        replace(one, code=Screen.FILLED_IN, figures=(*one.figures, (Figure.SETS, 10.0)))
        for one in figures.screened
        if one.code is Screen.MISSING and one.gravity is Grade.NOTE
    ]
    (line,) = remarks(tell_findings(fitted, replace(figures, screened=tuple(filled)), ""))
    assert line.message.startswith("Values were missing, of 5,000 people, and were filled in 10 times from the other")
    assert "Systolic blood pressure 86 (1.7\u202f%), Total cholesterol 231 (4.6\u202f%), eGFR 235" in line.message


def test_a_single_note_keeps_its_own_sentence(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path))
    assert "age is missing for 30 of 600 people (5.0\u202f%)." in found(fitted)[0].message
    (section,) = tell_file(fitted.cohort.problems, fitted.cohort.rows)
    assert remarks(section)[-1].message.startswith(
        'Column "age": missing in 30 of 600 lines (5.0\u202f%). Lines 2, 22,'
    )


def test_nothing_found_is_said(tmp_path: Path) -> None:
    fitted, _ = fit_from(binary_study(tmp_path))
    section = tell_findings(fitted, replace(fitted.figures[0], screened=()), ": all")
    assert section.heading == "What was found: all"
    assert proses(section) == ("Nothing was found in the data that speaks against the fit.",)
    assert list(tell_file((), 600)) == []


def test_cells_without_a_value_stand_in_one_line_with_their_first_lines() -> None:
    fitted, _ = shipped()
    (section,) = tell_file(fitted.cohort.problems, fitted.cohort.rows)
    (line,) = remarks(section)
    assert line.message.startswith(
        'Cells without a value, of 5,000 lines: "sbp" in 86 (lines 2, 30, 112, 165, 168, …), '
    )
    assert line.message.endswith(' and "smoker" in 107 (lines 3, 20, 49, 58, 78, …).')


@pytest.mark.parametrize(("rows", "said"), [((), '"a" in 1 and '), ((7,), '"a" in 1 (line 7) and ')])
def test_few_lines_are_all_named(rows: tuple[int, ...], said: str) -> None:
    one = DataProblem(Grade.NOTE, "a", ProblemCode.MISSING, 1, rows, "")
    (section,) = tell_file((one, replace(one, column="b")), 1200)
    assert f"of 1,200 lines: {said}" in remarks(section)[0].message


def test_remarks_call_the_only_fit_by_no_id_and_repeat_no_finding() -> None:
    fitted, package = shipped()
    assert any("355 competing events were taken as censored" in remark for remark in fitted.remarks)
    (section,) = tell_remarks(fitted, package)
    assert proses(section) == ("Cox fit to 4,329 people with 522 events, ties by Efron.",)


def test_a_competing_event_is_remarked_where_no_finding_says_it() -> None:
    fitted, _ = shipped()
    (figures,) = fitted.figures
    bare = replace(fitted, figures=(replace(figures, screened=()),))
    (section,) = tell_remarks(bare, None)
    assert proses(section)[0].startswith("355 competing events were taken as censored. The probability is that of")


def test_remarks_of_several_fits_keep_their_ids(tmp_path: Path) -> None:
    (section,) = tell_remarks(*fit_from(two_equations(tmp_path)))
    assert [text.partition(":")[0] for text in proses(section)[1:]] == ['Equation "female"', 'Equation "male"']
