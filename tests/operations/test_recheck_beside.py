"""Old prints with figures beside the number: every part is asked for again, and any change to one is named."""

from pathlib import Path
from typing import Any

import pytest

from clinicalc.assessment.result import Assessment
from clinicalc.errors import ClinicalcError
from clinicalc.operations.old_print import read_old_print
from clinicalc.operations.recheck import Recheck, recheck, report_recheck
from clinicalc.report.paper import Paper
from clinicalc.report.parts import USUAL_PARTS, PrintParts
from clinicalc.report.pdf import make_report
from tests.operations.forging import Change, with_changed_record, without_page
from tests.report.beside import EVERYTHING, LIPIDS, PRACTICE_POINT, estimate_of, full
from tests.report.printing import PRACTICE, PRINTED

OPEN = {"hdl_cholesterol": "not measured", "systolic_bp": "124 of 2 visits of 2 readings"}
WHOLE = full(points=(PRACTICE_POINT,), label="Ottilie Fenn")


def print_of(assessment: Assessment, parts: PrintParts = EVERYTHING, paper: Paper = Paper.A4) -> bytes:
    """The PDF at a fixed time."""
    return make_report(assessment, practice=PRACTICE, printed_at=PRINTED, parts=parts, paper=paper)


def checked(pdf: bytes, folder: Path, assessment: Assessment) -> Recheck:
    """The print worked out again with the model of the assessment."""
    path = folder / "old.pdf"
    path.write_bytes(pdf)
    return recheck(read_old_print(path), assessment.model)


@pytest.mark.parametrize("paper", Paper)
@pytest.mark.parametrize("matching_age", [True, False])
@pytest.mark.parametrize("shares", [True, False])
@pytest.mark.parametrize("comparison", [True, False])
def test_every_choice_of_parts_agrees(
    comparison: bool, shares: bool, matching_age: bool, paper: Paper, tmp_path: Path
) -> None:
    parts = PrintParts(comparison=comparison, shares=shares, matching_age=matching_age, assumptions=shares)
    assert checked(print_of(WHOLE, parts, paper), tmp_path, WHOLE).differences == ()


@pytest.mark.parametrize("parts", [USUAL_PARTS, EVERYTHING, PrintParts(assumptions=False)])
@pytest.mark.parametrize(
    "assessment",
    [
        full(LIPIDS),
        full(LIPIDS, (), values=OPEN),
        full(LIPIDS, (), values={"systolic_bp": "124 of 3 visits"}),
        full(changes=("smoker=perhaps",)),
        full(changes=("smoker=yes",)),
        full(changes=("total_cholesterol=190 mg/dL on 2026-11-30",)),
        full(changes=(), matching_age=False),
    ],
    ids=["rebuilt", "open", "mean", "refused", "unchanged", "other unit", "nothing asked"],
)
def test_what_was_typed_and_asked_for_comes_out_again(
    assessment: Assessment, parts: PrintParts, tmp_path: Path
) -> None:
    estimate_of(assessment)
    assert checked(print_of(assessment, parts), tmp_path, assessment).differences == ()


def test_the_practices_decision_points_are_those_of_the_print(tmp_path: Path) -> None:
    found = checked(print_of(WHOLE), tmp_path, WHOLE)
    assert found.agrees
    assert [p.point.label for p in estimate_of(found.now).decision_points] == ["Practice setting", "Second look"]


def _spread(record: Any) -> None:
    record["spread"]["upper"] += 1e-6


def _part(record: Any) -> None:
    record["spread"]["parts"][0]["source"] = "me"


def _no_spread(record: Any) -> None:
    record["spread"] = None


def _changed(record: Any) -> None:
    record["comparison"]["changes"][0]["typed"] = "130 mm[Hg]"


def _own(record: Any) -> None:
    record["comparison"]["changes"][0]["own"] = 150.0


def _difference(record: Any) -> None:
    record["comparison"]["difference"] = -0.1


def _share(record: Any) -> None:
    record["shares"]["steps"][0]["amount"] = 0.5


def _step_less(record: Any) -> None:
    del record["shares"]["steps"][0]


def _matching_age(record: Any) -> None:
    record["matching_age"]["age"] = 61.0


def _confidence(record: Any) -> None:
    record["decision_points"][0]["confidence"] = 0.5


def _side(record: Any) -> None:
    record["decision_points"][1]["above"] = True


def _point_less(record: Any) -> None:
    del record["decision_points"][1]


def _assumes(record: Any) -> None:
    record["band"]["assumptions"] = ["Nothing."]


CHANGES: dict[str, tuple[Change, str]] = {
    "spread": (_spread, "Re-measurement spread, upper end: 0.1525938"),
    "part": (_part, "Re-measurement spread, value 1, source: me → Keenan"),
    "no spread": (_no_spread, "Re-measurement spread: nothing → worked out"),
    "changed": (_changed, "Comparison, probability: 0.05"),
    "own": (_own, "Comparison, change 1, the patient’s own: 150 → 142"),
    "difference": (_difference, "Comparison, difference: −0.1 → −0.06"),
    "share": (_share, "Shares, share 1, amount: 0.5 → 0.659"),
    "step less": (_step_less, "Shares, share, how many: 3 → 4"),
    "age": (_matching_age, "Matching age, age: 61 → 77.2"),
    "confidence": (_confidence, "Decision point 1, confidence: 0.5 → 0.954"),
    "side": (_side, "Decision point 2, number above it: yes → no"),
    "point less": (_point_less, "Page 1:"),
    "assumptions": (_assumes, "What the band assumes: Nothing. → nothing"),
}


@pytest.mark.parametrize("name", CHANGES)
def test_a_changed_record_is_caught_and_the_change_named(name: str, tmp_path: Path) -> None:
    change, said = CHANGES[name]
    found = checked(with_changed_record(print_of(WHOLE), change), tmp_path, WHOLE)
    assert not found.agrees
    assert said in "\n".join(report_recheck(found))


def test_last_digits_of_figures_that_are_searched_for_may_differ(tmp_path: Path) -> None:
    def nudge(record: Any) -> None:
        record["matching_age"]["age"] += 1e-9
        record["spread"]["link_sd"] += 1e-11

    assert checked(with_changed_record(print_of(WHOLE), nudge), tmp_path, WHOLE).agrees


def test_a_page_taken_out_is_noticed(tmp_path: Path) -> None:
    assert not checked(without_page(print_of(full(LIPIDS)), 1), tmp_path, full(LIPIDS)).agrees


def _age(record: Any) -> None:
    """The records of the first version had none of these keys, and no list under the band."""
    for key in ("spread", "not_measured", "comparison", "shares", "matching_age", "decision_points"):
        del record[key]
    del record["band"]["assumptions"]


def test_a_record_of_an_earlier_version_is_compared_in_what_it_has(tmp_path: Path) -> None:
    assessment = full(LIPIDS, (), matching_age=False)
    assert checked(with_changed_record(print_of(assessment, USUAL_PARTS), _age), tmp_path, assessment).differences == ()


def test_what_this_version_says_more_than_an_earlier_one_is_explained(tmp_path: Path) -> None:
    assessment = full(changes=(), matching_age=False)

    def as_it_was(record: Any) -> None:
        _age(record)
        record["findings"] = [finding for finding in record["findings"] if finding["code"] != "decision_point"]

    found = checked(with_changed_record(print_of(assessment, USUAL_PARTS), as_it_was), tmp_path, assessment)
    assert [difference.what for difference in found.differences] == ["A finding is new"]
    assert "An earlier version of the program made this print" in " ".join(report_recheck(found))


def test_a_decision_point_that_cannot_be_one_is_refused(tmp_path: Path) -> None:
    def impossible(record: Any) -> None:
        record["decision_points"][1]["probability"] = 12.5

    with pytest.raises(ClinicalcError, match=r"12\.5 is a probability above 1") as refused:
        checked(with_changed_record(print_of(WHOLE), impossible), tmp_path, WHOLE)
    assert "old.pdf" in str(refused.value)
