"""The patient's page: whole numbers, plain words, nothing of the clinician's figures."""

import re

import msgspec
import pytest

from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.schema import ModelContent
from clinicalc.report.compose import compose
from clinicalc.report.contents import PatientSheet
from clinicalc.report.fonts import read_lettering
from clinicalc.report.pages import Page, lay_out
from clinicalc.report.paper import Paper
from clinicalc.report.parts import PrintParts
from clinicalc.report.pdf import make_report
from clinicalc.report.shapes import Dot, Line, Text, Tone
from tests.assessment.cases import DEMO, FULL, WOMAN_61, run
from tests.coefficients.tiny_model import tiny_logit_model
from tests.report.printing import PRACTICE, PRINTED, pages_of, printed, with_band, without_band

CASES = [(name, "low" if name == "cvd-2021-regional" else None) for name in FULL]
"""Every shipped file, with a recalibration where it asks for one."""


def with_intercept(intercept: float) -> Assessment:
    content = tiny_logit_model()
    horizon = msgspec.structs.replace(content.equations[0].horizons[0], intercept=intercept)
    equation = msgspec.structs.replace(content.equations[0], horizons=(horizon,))
    return with_band(content=msgspec.structs.replace(content, equations=(equation,)))


def with_plain(outcome: str, *cautions: str) -> ModelContent:
    content = tiny_logit_model()
    plain = msgspec.structs.replace(content.use.plain, outcome=outcome, cautions=cautions)
    return msgspec.structs.replace(content, use=msgspec.structs.replace(content.use, plain=plain))


def patient_page(assessment: Assessment) -> str:
    return pages_of(printed(assessment))[-1]


def sheet_of(assessment: Assessment) -> PatientSheet:
    sheet = compose(assessment, practice=PRACTICE, printed_at=PRINTED).patient
    assert sheet is not None
    return sheet


def laid_out(assessment: Assessment, paper: Paper = Paper.A4) -> tuple[Page, ...]:
    return lay_out(read_lettering(), compose(assessment, practice=PRACTICE, printed_at=PRINTED), paper)


def test_it_says_the_outcome_in_the_files_plain_words_until_when_and_for_whom() -> None:
    text = patient_page(with_band("Ottilie Fenn"))
    assert "Your chance of an invented illness within the next 10 years, for Ottilie Fenn" in text
    assert "for Ottilie Fenn" not in patient_page(with_band())
    long = sheet_of(with_band(content=with_plain("a first illness of heart or blood vessels (angina, stroke)")))
    assert long.title == "Your chance of a first illness of heart or blood vessels"
    assert long.lines == ("That is: angina, stroke", "within the next 10 years")


def test_both_counts_stand_there_and_the_dots_show_them() -> None:
    assessment = with_band()  # 18.2 %
    text = patient_page(assessment)
    assert (
        "Of 100 people with these values, about: 18 will have an invented illness 82 will not, within 10 years" in text
    )
    assert "Filled dots are the 18. Nobody can say which of the 100 dots is you." in text
    dots = [shape for shape in laid_out(assessment)[-1].shapes if isinstance(shape, Dot)]
    assert sum(dot.fill is Tone.ACCENT for dot in dots) == 18
    assert sum(dot.outline is Tone.EDGE for dot in dots) == 82
    assert {2 * dot.radius for dot in dots} == {21.0}  # 28 px of 1/96 inch


@pytest.mark.parametrize(
    ("intercept", "counts", "opening"),
    [
        (-30.0, ("fewer than 1", "more than 999"), "Of 1000 people with these values:"),
        (30.0, ("more than 999", "fewer than 1"), "Of 1000 people with these values:"),
    ],
)
def test_it_never_says_nobody_and_never_all(intercept: float, counts: tuple[str, str], opening: str) -> None:
    assessment = with_intercept(intercept)
    sheet = sheet_of(assessment)
    assert sheet.opening == opening
    assert tuple(count.figure for count in sheet.counts) == counts
    text = patient_page(assessment)
    assert "leaves room for" in text
    assert not re.search(r"(?<![\d.])0(?!\d| \d)", text.split("Tiny logistic")[0])
    assert "1000 will" not in text


def test_how_sure_it_is_stands_in_whole_people() -> None:
    # band of the worked example: 13.8 to 23.7 %
    assert "How well that is known leaves room for 14 to 24 of 100." in patient_page(with_band())
    assert "How sure is this? The source does not say how precisely this is known." in patient_page(without_band())


def test_a_rebuilt_band_is_only_roughly_known() -> None:
    # rebuilt from printed intervals, 8.33 to 13.15 %
    text = patient_page(run("general-cvd-2008-lipids", WOMAN_61))
    assert "leaves room for 8 to 13 of 100. That room is itself only roughly known." in text
    assert "roughly" not in patient_page(with_band())


@pytest.mark.parametrize(("name", "recalibration"), CASES)
def test_it_has_no_decimals_no_percentage_no_ruler_and_all_plain_cautions(name: str, recalibration: str | None) -> None:
    assessment = run(name, FULL[name], recalibration=recalibration)
    text = patient_page(assessment).split("What we agreed")[0]
    assert "%" not in text
    assert not re.search(r"\d[.,]\d", text)
    assert "wide scale" not in text
    assert "band" not in text
    assert "people like you" not in text
    for caution in assessment.model.content.use.plain.cautions:
        assert caution in text
    assert f"for the patient, page {len(laid_out(assessment))}" in text.lower()
    assert "Not vetted: for trying out, not for a patient" in text


def test_the_cautions_of_the_values_are_said_in_plain_words() -> None:
    # the range of the file is 80 to 204 mmHg, and it does not stop beyond it
    text = patient_page(run("tarnwick-cvd-10y", DEMO, systolic_bp="215"))
    assert (
        "Systolic blood pressure is higher than in the people the number was made from, so take it with care." in text
    )
    low = patient_page(run("tarnwick-cvd-10y", DEMO, systolic_bp="78"))
    assert "Systolic blood pressure is lower than in the people the number was made from" in low
    unusual = patient_page(run("general-cvd-2008-lipids", WOMAN_61, hdl_cholesterol="15 mg/dL"))
    assert "HDL cholesterol is an unusual value." in unusual
    assert "as if nobody died of anything else first" in patient_page(without_band())
    assert "as if nobody died of anything else first" not in patient_page(with_band())


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize(("name", "recalibration"), CASES)
def test_there_are_lines_to_write_on_and_the_page_is_one(name: str, recalibration: str | None, paper: Paper) -> None:
    pages = laid_out(run(name, FULL[name], recalibration=recalibration), paper)
    texts = [[s.text for s in page.shapes if isinstance(s, Text)] for page in pages]
    assert sum("For the patient" in " ".join(page) for page in texts) == 1
    assert "What we agreed" in texts[-1]
    ruled = [s for s in pages[-1].shapes if isinstance(s, Line) and s.tone is Tone.EDGE and s.y == s.to_y]
    assert 3 <= len(ruled) <= 7
    assert all((page.width, page.height) == (paper.width, paper.height) for page in pages)


def test_words_too_long_for_a_page_go_on_over_the_next() -> None:
    content = with_plain("an invented illness", *(f"Caution {n}: {'many words ' * 40}end {n}." for n in range(9)))
    pages = pages_of(printed(with_band(content=content)))
    mine = [page for page in pages if "For the patient" in page]
    assert len(mine) >= 2
    assert all(f"end {n}." in " ".join(mine) for n in range(9))
    assert "What we agreed" in mine[-1]


def test_it_is_left_out_where_it_is_not_wanted_and_where_there_is_no_number() -> None:
    pages = pages_of(
        make_report(with_band(), practice=PRACTICE, printed_at=PRINTED, parts=PrintParts(patient_page=False))
    )
    assert len(pages) == 1
    assert "For the clinician, page 1 of 1" in pages[0]
    assert not any("For the patient" in page for page in pages_of(printed(without_band(age="abc"))))


def test_a_count_from_a_file_that_is_not_vetted_is_soft() -> None:
    figure = next(s for s in laid_out(with_band())[-1].shapes if isinstance(s, Text) and s.text == "18")
    assert figure.tone is Tone.SOFT
