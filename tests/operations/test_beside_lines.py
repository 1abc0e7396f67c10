"""The figures beside the number in the summary and in copied text: what stands there, in which order, and when."""

import re

from clinicalc.assessment.band_assumptions import band_assumptions
from clinicalc.operations.beside_lines import SHARES_ON_LINK, assumption_lines, share_lines
from clinicalc.operations.copying import copy_text
from clinicalc.operations.folding import WIDTH
from clinicalc.operations.summary import summarise
from clinicalc.report.matching_age_words import MATCHING_AGE_MEANING
from clinicalc.report.phrases_comparison import NO_PROMISE
from tests.assessment.cases import DEMO, run
from tests.report.beside import LIPIDS, PRACTICE_POINT, TARNWICK, estimate_of, full

ORDER = (
    "Of 100 people with these values",
    "95\u202f% band 9.7–15.5\u202f%.",
    "Re-measurement spread 9.8–15.3\u202f%: how far",
    "above the decision point 10.0\u202f%",
    "below this practice’s decision point 12.5\u202f%",
    "Difference −",
    SHARES_ON_LINK[:60],
    "The reference person would have this number at 77.2 years",
    "Note: About this model",
    "Systolic blood pressure",
)


def test_everything_stands_in_a_calm_order() -> None:
    assessment = full(points=(PRACTICE_POINT,))
    for text in (summarise(assessment, with_shares=True), copy_text(assessment)):
        text = re.sub(r"[ \n]+", " ", text)
        places = [text.find(words) for words in ORDER[:-1]]
        assert -1 not in places
        assert places == sorted(places)
        assert text.rfind(ORDER[-1]) > places[-1]
        assert NO_PROMISE in text
        assert MATCHING_AGE_MEANING in text


def test_a_usual_summary_fits_on_a_screen_and_has_no_shares() -> None:
    text = summarise(run(TARNWICK, DEMO))
    lines = text.splitlines()
    assert len(lines) <= 40
    assert max(map(len, lines)) <= WIDTH
    for words in ("Shares", "Matching age", "Comparison", "Changed"):
        assert words not in text


def test_shares_are_a_table_with_the_patients_own_values() -> None:
    head, reference, *rows = share_lines(full())
    assert head == SHARES_ON_LINK
    assert reference.startswith("Reference person: 5.0\u202f%. Systolic blood pressure 120 mmHg; ")
    assert rows == [
        "Smokes now               Yes         +0.66",
        "Systolic blood pressure  142 mmHg    +0.22",
        "HDL cholesterol          1.3 mmol/L  +0.08",
        "Total cholesterol        5.2 mmol/L  +0.03",
    ]
    assert share_lines(full(), as_table=False)[2] == "Smokes now: Yes, +0.66"


def test_shares_that_are_not_there_are_explained_to_those_who_ask() -> None:
    assessment = full(LIPIDS, (), values={"hdl_cholesterol": "not measured"})
    because = estimate_of(assessment).shares_absent_because
    assert f"No shares: {because}" in summarise(assessment, with_shares=True)
    assert "No shares" not in copy_text(assessment)


def test_assumptions_are_listed_where_nothing_else_lists_them() -> None:
    assessment = full(LIPIDS, ())
    copied = copy_text(assessment)
    assert all(f"\n- {assumption}\n" in copied for assumption in band_assumptions(assessment))
    assert "clinicalc inspect lists what was assumed" in " ".join(summarise(assessment).split())
    assert "The band assumes" not in summarise(assessment)
    assert assumption_lines(full()) == []


def test_what_is_to_be_said_about_changed_values_stands_with_them() -> None:
    text = copy_text(full(changes=("systolic_bp=230",)))
    assert "\nCaution: With changes: Systolic blood pressure 230 mmHg is unusual" in text
