"""What a print must carry, read back from the PDF."""

import re

import msgspec
import pytest

from clinicalc import __version__
from clinicalc.assessment.findings import Grade
from clinicalc.assessment.result import Assessment
from clinicalc.coefficients.fingerprint import group_fingerprint
from clinicalc.report.pdf import make_report
from clinicalc.report.phrases import NOT_VETTED
from tests.assessment.cases import WOMAN_61, WOMAN_EGFR_90, run
from tests.coefficients.tiny_model import tiny_logit_model
from tests.report.printing import PRACTICE, PRINTED, pages_of, printed, text_of, with_band, without_band


def woman_61(**changed: str) -> Assessment:
    return run("general-cvd-2008-lipids", WOMAN_61 | changed)


def test_every_value_stands_as_typed_with_its_unit_and_as_used() -> None:
    text = text_of(printed(without_band()))
    assert "derivation range Age 55 years Total" in text  # typed in the file's own unit: said once
    assert "Sex Male Takes tablets No The model" in text  # the answers stand at the right of the numbers
    assert "Total cholesterol 200 mg/dL, of 2 October 2026 5.172 mmol/L" in text  # 200 * 0.02586


def test_a_shipped_model_prints_every_line_of_its_assessment() -> None:
    assessment = woman_61(total_cholesterol="4.655 mmol/L")
    text = text_of(printed(assessment))
    assert assessment.values
    for line in assessment.values:
        used = "" if line.used == line.shown else f" {line.used}"
        assert f"{line.label} {line.shown}{used}" in text
    for finding in assessment.findings:
        assert finding.message in text


def test_the_number_is_said_as_a_percentage_and_in_people() -> None:
    pages = pages_of(printed(with_band()))
    assert "18.2\u202f% An invented event within 10 years" in pages[0]
    assert "Of 100 people with these values, about 18 have the event within 10 years and about 82 do not." in pages[0]


def test_where_other_deaths_were_censored_the_sentence_says_so() -> None:
    text = text_of(printed(without_band()))
    assert "about 89 do not, if no other cause of death came first." in text  # 11.07 %, worked out by hand


def test_age_and_sex_stand_near_the_top() -> None:
    assert "Age 55 years · Sex Male" in pages_of(printed(without_band()))[0][:300]
    assert "Age 50 years · Sex not asked by this model" in pages_of(printed(with_band()))[0][:300]
    assert "Age abc (not used) · Sex not given" in pages_of(printed(without_band(age="abc", sex="")))[0][:300]


def test_the_band_stands_with_its_level_and_its_meaning() -> None:
    text = text_of(printed(with_band()))
    assert "95\u202f% band 13.8–23.7\u202f%" in text
    assert "Band: how precisely the model’s coefficients are known for people with these values." in text
    assert "It is not this patient’s range and covers no other population." in text


def test_without_a_band_the_reason_stands_in_its_place() -> None:
    text = text_of(printed(without_band()))
    assert re.search(r"95\u202f% band no band (?:Re-measurement spread [0-9.–]+\u202f% )?% within 10 years", text)
    assert "No band: It is invented." in text


def test_the_recalibration_is_named_or_said_to_be_none() -> None:
    assert "Recalibration North of Tarnwick. invented" in text_of(printed(without_band("north")))
    assert "Recalibration none" in text_of(printed(without_band()))


def test_findings_carry_number_grade_and_text_and_are_named_at_their_value() -> None:
    assessment = run("general-cvd-2008-lipids", WOMAN_61, age="73", hdl_cholesterol="2 mg/dL", prior_cvd="")
    text = text_of(printed(assessment))
    assert f"{len(assessment.findings)} findings" in text
    assert {finding.grade for finding in assessment.findings} >= {Grade.STOP}
    for number, finding in enumerate(assessment.findings, 1):
        assert f"{number} {finding.grade.value.capitalize()} {finding.message}" in text
    place = next(n for n, f in enumerate(assessment.findings, 1) if f.field == "hdl_cholesterol")
    assert f"HDL cholesterol 2 mg/dL (not used) – {place}" in text


def test_a_derived_value_says_whether_it_was_typed_or_worked_out() -> None:
    typed = run("total-cvd-2024-base", WOMAN_EGFR_90)
    # nothing stands in the column after it: the next row or, where the page ends there, its foot comes next
    assert re.search(r"eGFR 90 mL/min/1\.73 m² \(typed\) (?:Non-HDL|Fingerprint)", text_of(printed(typed)))
    computed = run("total-cvd-2024-base", WOMAN_EGFR_90, egfr="", creatinine="0.9 mg/dL")
    assert re.search(r"eGFR worked out [0-9.]+ mL/min/1.73 m²", text_of(printed(computed)))


def test_exclusions_are_shown_with_their_answers() -> None:
    assert "Has it happened before? No" in text_of(printed(with_band()))
    assert "Has it happened before? not given 1" in text_of(printed(with_band(prior_event="")))


def test_the_model_is_identified_whole() -> None:
    assessment = woman_61()
    text = text_of(printed(assessment))
    content = assessment.model.content
    assert group_fingerprint(assessment.model.fingerprint) in text
    assert len(group_fingerprint(assessment.model.fingerprint).replace(" ", "")) == 64
    headline, detail = content.outcome.split(": ")
    wanted = [f"{content.title} {content.version}", f"{headline} within 10 years {detail} Of 100 people"]
    wanted += [content.source.citation, f"DOI {content.source.doi}"]
    wanted += [content.use.population, content.use.setting]
    wanted += [*content.use.cautions, "; ".join(content.use.not_for), "; ".join(content.use.not_used)]
    for words in wanted:
        assert words in text


def test_every_page_says_which_page_which_model_and_that_it_is_not_vetted() -> None:
    assessment = woman_61()
    pages = pages_of(printed(assessment))
    readers = ["clinician", "clinician", "patient"]  # the second has what the band assumes
    assert len(pages) == len(readers)
    for number, (reader, page) in enumerate(zip(readers, pages, strict=True), 1):
        assert f"For the {reader}, page {number} of 3" in page
        assert NOT_VETTED in page
        assert f"{assessment.model.content.title} {assessment.model.content.version}" in page
        assert group_fingerprint(assessment.model.fingerprint, 3) in page
        assert page.count(f"clinicalc {__version__}") == 1
        assert "Printed 1 December 2026, 14:20" in page


def test_practice_time_cautions_and_signature_stand_there() -> None:
    text = text_of(printed(with_band()))
    assert PRACTICE in text
    assert "assessed 1 December 2026, 14:18 UTC+00:00" in text
    assert "For qualified clinicians only." in text
    assert "not for emergencies" in text
    assert "Practitioner’s signature Name Date" in text


def test_the_first_page_carries_the_whole_fingerprint_and_whom_the_number_is_for() -> None:
    assessment = woman_61()
    first = pages_of(printed(assessment))[0]
    assert f"Fingerprint {group_fingerprint(assessment.model.fingerprint)}" in first
    assert "For qualified clinicians only. The number supports their judgement and never takes its place." in first


def test_a_first_page_without_the_place_to_sign_says_in_short_whom_the_number_is_for() -> None:
    first, second, _ = pages_of(make_report(with_cautions(20), practice=PRACTICE, printed_at=PRINTED))
    assert "For qualified clinicians: supports judgement, does not replace it." in first
    assert "Fingerprint " in first
    assert "For qualified clinicians only." not in first
    assert "For qualified clinicians only." in second
    assert "Practitioner’s signature" in second


def with_cautions(count: int) -> Assessment:
    """An assessment by a model with so many cautions of its own, each of two lines."""
    content = tiny_logit_model()
    cautions = tuple(f"Caution {n} of this model, {'which is said in many words, ' * 4}ends." for n in range(count))
    use = msgspec.structs.replace(content.use, cautions=cautions)
    return with_band(content=msgspec.structs.replace(content, use=use))


def test_a_stopped_assessment_prints_no_percentage() -> None:
    assessment = without_band(age="abc", total_cholesterol="")
    text = text_of(printed(assessment))
    assert assessment.estimate is None
    assert "No number" in text
    assert "Horizon 10 years" in text
    assert "1 stop and 1 entry still to be made." in text
    assert "%" not in text
    assert "people with these values" not in text


@pytest.mark.parametrize(("intercept", "wanted"), [(-30.0, "<0.1\u202f%"), (30.0, ">99.9\u202f%")])
def test_the_ends_are_never_nought_or_a_hundred(intercept: float, wanted: str) -> None:
    content = tiny_logit_model()
    horizon = msgspec.structs.replace(content.equations[0].horizons[0], intercept=intercept)
    equation = msgspec.structs.replace(content.equations[0], horizons=(horizon,))
    text = text_of(printed(with_band(content=msgspec.structs.replace(content, equations=(equation,)))))
    assert f"{wanted} An invented event within 10 years" in text
    assert "fewer than 1 ha" in text
