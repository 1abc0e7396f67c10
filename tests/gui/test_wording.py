"""What the sheet says to do about the stops: the unit, the value or only the date."""

from datetime import UTC, datetime

import pytest

from clinicalc.assessment.assess import assess
from clinicalc.assessment.decision import points_for
from clinicalc.assessment.entry import entry_from_texts
from clinicalc.assessment.model import Model
from clinicalc.gui.wording import explain_no_number, longest_decision_words
from clinicalc.operations.beside_lines import decision_lines
from tests.assessment.cases import DEMO, run
from tests.gui.bedside_hands import ANSWERS_2008, NUMBERS_2008

NOW = datetime(2026, 12, 1, 9, 30, tzinfo=UTC)
CHOLESTEROL, HDL, PRESSURE = "total_cholesterol", "hdl_cholesterol", "systolic_bp"


@pytest.mark.parametrize(
    ("changed", "sentence"),
    [
        ({CHOLESTEROL: "180 on 2126-12-02"}, "Total cholesterol stops it. Correct its date"),
        ({CHOLESTEROL: "180 on last week"}, "Total cholesterol stops it. Correct its date"),
        ({CHOLESTEROL: "180 on 2026-02-30"}, "Total cholesterol stops it. Correct its date"),
        ({CHOLESTEROL: "5.2"}, "Total cholesterol stops it. Change its unit or its value"),
        ({CHOLESTEROL: "180 mmHg"}, "Total cholesterol stops it. Change its unit or its value"),
        ({CHOLESTEROL: "nan"}, "Total cholesterol stops it. Change its value"),
        ({CHOLESTEROL: "9000"}, "Total cholesterol stops it. Change its value"),
        (
            {CHOLESTEROL: "5.2", HDL: "1.2"},
            "Total cholesterol and HDL cholesterol stop it. Change their units or values",
        ),
        (
            {CHOLESTEROL: "180 on 2126-12-02", HDL: "47 on 2126-12-02"},
            "Total cholesterol and HDL cholesterol stop it. Correct their dates",
        ),
        (
            {CHOLESTEROL: "9000", HDL: "47 on 2126-12-02"},
            "Total cholesterol and HDL cholesterol stop it. Correct these entries",
        ),
        (
            {CHOLESTEROL: "9000", HDL: "nan"},
            "Total cholesterol and HDL cholesterol stop it. Change these values",
        ),
        ({CHOLESTEROL: "9000 on 2126-12-02"}, "Total cholesterol stops it. Correct its value and its date"),
    ],
)
def test_what_is_wrong_is_what_is_to_be_changed(lipids: Model, changed: dict[str, str], sentence: str) -> None:
    assessment = assess(lipids, entry_from_texts(NUMBERS_2008 | ANSWERS_2008 | changed), at=NOW)
    assert assessment.estimate is None
    assert explain_no_number(assessment) == ("No number", f"{sentence} and the number comes back.")


@pytest.mark.parametrize("systolic", ["100", "120", "142", "160", "200"])
def test_room_for_words_about_decision_points_is_enough(systolic: str) -> None:
    assessment = run("tarnwick-cvd-10y", DEMO | {"systolic_bp": systolic})
    assert assessment.span is not None
    longest = longest_decision_words(assessment.model, points_for(assessment.model, assessment.span))
    assert len(longest) >= len("\n".join(decision_lines(assessment))) > 0
    assert longest_decision_words(assessment.model, ()) == ""
