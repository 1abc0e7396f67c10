"""The figures beside the number on a print: what is chosen is there, every figure is read back, nothing else is."""

from dataclasses import replace

import pytest

from clinicalc.assessment.band_assumptions import band_assumptions
from clinicalc.assessment.numerals import percent, percent_range
from clinicalc.assessment.result import Assessment
from clinicalc.report.compose import compose
from clinicalc.report.compose_beside import REBUILT_BELOW
from clinicalc.report.contents import ComparisonPart, Section, SharesPart
from clinicalc.report.fonts import read_lettering
from clinicalc.report.pages import Page, lay_out
from clinicalc.report.paper import Paper
from clinicalc.report.parts import PrintParts, offered_parts
from clinicalc.report.pdf import make_report
from clinicalc.report.phrases_comparison import NO_PROMISE, difference_sentence
from clinicalc.report.phrases_decision import ABOUT_COEFFICIENTS
from clinicalc.report.phrases_spread import SPREAD_MEANING
from clinicalc.report.shapes import Text
from clinicalc.report.shares_figure import share_words
from tests.assessment.cases import FULL, run
from tests.report.beside import EVERYTHING, LIPIDS, PRACTICE_POINT, TARNWICK, estimate_of, full
from tests.report.printing import PRACTICE, PRINTED, pages_of, with_band

BARE = PrintParts(comparison=False, assumptions=False)


def read(assessment: Assessment, parts: PrintParts = EVERYTHING, paper: Paper = Paper.A4) -> list[str]:
    """The text of every page."""
    return pages_of(make_report(assessment, practice=PRACTICE, printed_at=PRINTED, parts=parts, paper=paper))


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("id", FULL)
def test_every_figure_is_read_back(id: str, paper: Paper) -> None:
    changes = () if id == "diabetes-2007-clinical" else ("systolic_bp=118",)
    assessment = full(id, changes)
    estimate = estimate_of(assessment)
    text = " ".join(read(assessment, paper=paper))
    assert estimate.spread is not None
    moving = any(part.link_sd > 0.0 for part in estimate.spread.parts)
    figures = [percent_range(estimate.spread.lower, estimate.spread.upper)]
    figures += [SPREAD_MEANING] if moving else ["up or down, the number stays the same"]
    assert estimate.shares is not None
    figures += [percent(estimate.shares.reference_probability), estimate.reference_person]
    figures += [figure for step in estimate.shares.steps for figure in (step.label, step.own, share_words(step.amount))]
    if changes:
        assert estimate.comparison is not None
        assert estimate.comparison.changed is not None
        assert estimate.comparison.difference is not None
        figures += [
            percent(estimate.comparison.changed.probability),
            difference_sentence(estimate.comparison),
            NO_PROMISE,
        ]
    found = estimate.matching_age
    assert found is not None
    figures += [f"{found.age:.1f} years" if found.age is not None else found.because or "age for which the model gives"]
    figures += band_assumptions(assessment)
    assert [figure for figure in figures if figure not in text] == []


def test_decision_points_stand_on_the_ruler_and_in_words() -> None:
    first = read(full(points=(PRACTICE_POINT,)))[0]
    assert "Decision point 10.0\u202f%" in first
    assert "Decision point 12.5\u202f%" in first
    assert "12.3\u202f%, above the decision point 10.0\u202f% (Practice setting; invented for" in first
    assert "12.3\u202f%, below this practice’s decision point 12.5\u202f% (Second look; agreed in the" in first
    assert "very probably above 10.0\u202f% (about 95 of 100)" in first
    assert ABOUT_COEFFICIENTS in first


def test_a_number_beside_a_decision_point_has_the_digits_that_tell_them_apart() -> None:
    assert estimate_of(full()).probability == pytest.approx(0.12291, abs=1e-6)  # as the file's worked example has it
    close = replace(PRACTICE_POINT, probability=0.12295)  # "12.3 %" would stand above it
    sheet = compose(full(points=(close,)), practice="", printed_at=PRINTED, parts=EVERYTHING)
    assert sheet.result.figure == "12.29\u202f%"
    assert sheet.result.figure in " ".join(read(full(points=(close,))))


def test_parts_are_printed_only_where_they_are_chosen_and_there() -> None:
    def headings(parts: PrintParts) -> list[str]:
        return [section.heading for section in compose(full(), practice="", printed_at=PRINTED, parts=parts).further]

    assert headings(BARE) == []
    assert headings(PrintParts()) == ["Comparison"]
    assert headings(EVERYTHING) == ["Comparison", "Shares", "Matching age"]
    nothing = full(changes=(), matching_age=False)
    sections = compose(nothing, practice="", printed_at=PRINTED, parts=EVERYTHING).further
    assert [section.heading for section in sections] == ["Shares"]
    refused = full(changes=("smoker=perhaps",))
    assert estimate_of(refused).comparison is not None
    assert "Comparison" not in " ".join(read(refused, PrintParts()))
    unchanged = full(changes=("smoker=yes",))
    assert not offered_parts(unchanged).comparison
    assert offered_parts(with_band(age="")) == PrintParts(False, False, False, False, False)


def test_the_first_page_stays_as_it_is_whatever_is_printed_after_it() -> None:
    bare, *_ = read(full(), BARE)
    first, second, last = read(full())
    assert first.replace("page 1 of 3", "page 1 of 2") == bare
    assert "For the clinician, page 2 of 3" in second
    assert "For the patient, page 3 of 3" in last


def test_shares_that_are_not_there_say_why() -> None:
    assessment = full(LIPIDS, (), values={"hdl_cholesterol": "not measured"})
    text = " ".join(read(assessment))
    assert "No shares: HDL cholesterol was not measured, so there is no value to set against another." in text
    assert "No matching age. HDL cholesterol was not measured" in text
    assert "What was not measured is in it." in text
    assert "people with the values that are known, about" in text
    assert "people with these values, about" not in text


@pytest.mark.parametrize("paper", Paper)
def test_what_a_rebuilt_band_assumes_is_listed_or_said_to_be_elsewhere(paper: Paper) -> None:
    assessment = run(LIPIDS, FULL[LIPIDS])
    first, second, _ = read(assessment, PrintParts(), paper)
    assert REBUILT_BELOW in first
    assert len(band_assumptions(assessment)) == 9
    assert all(assumption in second for assumption in band_assumptions(assessment))
    alone, _ = read(assessment, BARE, paper)
    assert "clinicalc inspect lists what was assumed" in alone
    assert band_assumptions(run(TARNWICK, FULL[TARNWICK])) == ()


def test_further_sections_follow_what_does_not_fit_on_one_page() -> None:
    assessment = full(LIPIDS, (), values={"hdl_cholesterol": "not measured"})
    first, second, last = read(assessment, PrintParts())
    assert "Practitioner’s signature" not in first
    assert second.index("Practitioner’s signature") < second.index("What the band assumes")
    assert "For the patient, page 3 of 3" in last


def test_the_patients_page_has_none_of_it() -> None:
    last = read(full(points=(PRACTICE_POINT,)))[-1]
    for words in (
        "Comparison",
        "Shares",
        "decision point",
        "Matching age",
        "Spread",
        "There is something more to know",
    ):
        assert words not in last
    open_value = read(full(LIPIDS, (), values={"hdl_cholesterol": "not measured"}))[-1]
    assert "HDL cholesterol is not known. What is usual for people like you stands in its place." in open_value
    assert "people with the values that are known" in open_value
    assert "Measuring again would move it too." in open_value
    without_band = read(full("total-cvd-2024-base", ()))[-1]
    assert "is known. Measured again, the number would differ somewhat." in without_band


def test_a_spread_of_no_width_says_that_the_number_stays() -> None:
    assessment = full("diabetes-2007-clinical", ())
    spread = estimate_of(assessment).spread
    assert spread is not None
    moving = any(part.link_sd > 0.0 for part in spread.parts)
    assert (SPREAD_MEANING in read(assessment)[0]) is moving


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("id", FULL)
def test_figures_stand_inside_the_margins_and_no_texts_lie_on_each_other(id: str, paper: Paper) -> None:
    changes = () if id == "diabetes-2007-clinical" else ("systolic_bp=118",)
    lettering = read_lettering()
    sheet = compose(full(id, changes), practice=PRACTICE, printed_at=PRINTED, parts=EVERYTHING)
    blocks = [type(block) for section in sheet.further for block in section.blocks]
    assert SharesPart in blocks
    assert (ComparisonPart in blocks) is bool(changes)
    assert all(isinstance(section, Section) for section in sheet.further)
    for page in lay_out(lettering, sheet, paper):
        texts = [shape for shape in page.shapes if isinstance(shape, Text)]
        for place, one in enumerate(texts):
            left, right = ends(one)
            assert 42.0 - 12.0 <= left <= right <= page.width - 42.0 + 12.0, one
            for other in texts[place + 1 :]:
                apart = abs(one.y - other.y) >= 0.7 * min(one.size, other.size)
                (_, end), (start, _) = sorted((ends(one), ends(other)))
                assert apart or end <= start + 0.01, (one, other)


def ends(text: Text) -> tuple[float, float]:
    """Left and right end of a text."""
    wide = read_lettering().width(text.text, text.size, text.weight)
    return text.left(wide), text.left(wide) + wide


def pages(id: str, parts: PrintParts, paper: Paper) -> tuple[Page, ...]:
    """The pages of a usual patient with these parts."""
    return lay_out(read_lettering(), compose(full(id), practice=PRACTICE, printed_at=PRINTED, parts=parts), paper)


@pytest.mark.parametrize("paper", Paper)
def test_shares_comparison_and_matching_age_take_one_page_more(paper: Paper) -> None:
    assert len(pages(TARNWICK, EVERYTHING, paper)) == 3
