"""Changes as they were entered: what can be typed again says the same, whatever it says."""

from datetime import date

import pytest

from clinicalc.assessment.entered_change import EnteredChange, entered_changes
from clinicalc.assessment.entry import Typed
from clinicalc.units.averaged import Averaged
from tests.assessment.cases import shipped

TODAY = date(2026, 12, 1)
MODEL = shipped("tarnwick-cvd-10y")


def entered(id: str, typed: Typed) -> EnteredChange:
    """The one change."""
    (change,) = entered_changes(MODEL, {id: typed}, TODAY)
    return change


@pytest.mark.parametrize(
    ("id", "typed", "expected"),
    [
        ("systolic_bp", Typed("128"), ("128 mm[Hg]", 128.0, "mm[Hg]")),
        ("total_cholesterol", Typed("5,2"), ("5.2 mmol/L", 5.2, "mmol/L")),
        ("systolic_bp", Typed("128", averaged=Averaged(2, 1)), ("128 mm[Hg] of 2 visits", 128.0, "mm[Hg]")),
        ("total_cholesterol", Typed("900", unit="mmol/L"), ("900 mmol/L", None, None)),
        ("systolic_bp", Typed("high"), ("high", None, None)),
        ("smoker", Typed(" No "), ("No", "no", None)),
        ("smoker", Typed("perhaps"), ("perhaps", None, None)),
        ("shoe", Typed("44"), ("44", None, None)),
    ],
)
def test_each_change_with_what_it_says(id: str, typed: Typed, expected: tuple[str, object, object]) -> None:
    change = entered(id, typed)
    assert (change.typed, change.value, change.unit) == expected
    again = entered(id, Typed(change.typed))
    assert again == change


def test_page_order_strangers_last_and_nothing_without_text() -> None:
    changes = {"shoe": Typed("44"), "smoker": Typed("no"), "age": Typed(" "), "systolic_bp": Typed("120")}
    assert [change.field for change in entered_changes(MODEL, changes, TODAY)] == ["systolic_bp", "smoker", "shoe"]
