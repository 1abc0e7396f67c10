"""The practice's decision points and a comparison, on the command line."""

from pathlib import Path

import pytest

from clinicalc.settings import FILE_NAME
from clinicalc.settings.folder import VARIABLE
from tests.assessment.cases import DEMO
from tests.cli.calling import call, example

VALUES = (example("tarnwick-cvd-10y"), *(f"{id}={text}" for id, text in DEMO.items()))
POINT = """[[decision_points]]
model = "tarnwick-cvd-10y"
years = 10
probability = 0.123
label = "Talk about tablets"
source = "Practice meeting, March 2026"
"""


@pytest.fixture(autouse=True)
def settings(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """The settings file of the test's own; it does not exist yet."""
    monkeypatch.setenv(VARIABLE, str(tmp_path))
    return tmp_path / FILE_NAME


def said(text: str) -> str:
    """The output with its folded lines joined and its narrow spaces made plain."""
    return text.replace("\n  ", " ").replace("\u202f", " ")


def test_the_points_of_file_and_practice_stand_beside_the_number(settings: Path) -> None:
    settings.write_text(POINT, encoding="utf-8")
    ended = call("assess", *VALUES)
    assert (ended.status, ended.err) == (0, "")
    out = said(ended.out)
    assert "\n12.29 % within 10 years\n" in out
    assert "\n12.29 %, above the decision point 10.0 % (Practice setting; invented for the demonstration; no" in out
    assert "\n12.29 %, below this practice’s decision point 12.3 % (Talk about tablets; Practice meeting, March" in out
    assert "very probably above 10.0 % (about 95 of 100)" in out
    assert "This is about the model’s coefficients, not about this patient’s event." in out
    assert out.count("Caution: The band 9.7–15.5 % reaches across the decision point ") == 2


def test_without_settings_only_the_files_points_stand() -> None:
    out = said(call("assess", *VALUES).out)
    assert "\n12.3 % within 10 years\n" in out
    assert "this practice’s" not in out


def test_points_of_another_model_or_horizon_are_not_shown(settings: Path) -> None:
    others = POINT.replace("10y", "5y") + POINT.replace("years = 10", "years = 5")
    settings.write_text(others, encoding="utf-8")
    assert "this practice’s" not in call("assess", *VALUES).out


def test_a_point_that_cannot_be_taken_is_said_and_the_number_stands(settings: Path) -> None:
    settings.write_text(POINT.replace("0.123", "1.2"), encoding="utf-8")
    ended = call("assess", *VALUES)
    assert ended.status == 0
    assert ended.err.startswith(f"clinicalc: {FILE_NAME}, line 1: decision point 1: 1.2 is a probability above 1; did")


def test_a_comparison_stands_below_the_number() -> None:
    out = said(call("assess", *VALUES, "--change", "smoker=no", "--change", "systolic_bp=230").out)
    assert "\nChanged: Systolic blood pressure, 230 mmHg instead of 142 mmHg; Smokes now, No instead of Yes.\n" in out
    assert "\nOf 1000 people: 123 as entered, 146 with the changes, 23 more. This compares people who differ" in out
    assert "\nDifference +2.3 points, 95 % band −4.1 to +12.6 points.\n" in out
    assert "\nCaution: With changes: Systolic blood pressure 230 mmHg is unusual;" in out


def test_a_change_that_cannot_be_used_leaves_the_number() -> None:
    ended = call("assess", *VALUES, "--change", "total_cholesterol=52")
    assert ended.status == 0
    assert "\nNo comparison: Total cholesterol 52 mmol/L is not possible;" in said(ended.out)
    assert "12.3 % within 10 years" in said(ended.out)
