"""Cells read once a text: numbers as texts, many plain decimals at once, sets of findings."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.assessment.fields import NumberField
from clinicalc.assessment.findings import FindingCode, Grade
from clinicalc.scoring.cell_texts import text_of
from clinicalc.scoring.field_texts import MOST_KEPT, TEXT_RECORD, FieldTexts
from clinicalc.scoring.finding_sets import FindingSets, SaidCode
from tests.assessment.cases import NOW, shipped


@pytest.mark.parametrize(
    ("cell", "text"),
    [
        ("5,2", "5,2"),
        (None, ""),
        (float("nan"), ""),
        (55.0, "55"),
        (5.2, "5.2"),
        (np.float32(5.2), "5.2"),
        (-0.5, "-0.5"),
        (1e-7, "0.0000001"),
        (1e22, "10000000000000000000000"),
        (float("inf"), "inf"),
        (7, "7"),
        (np.int64(7), "7"),
        (True, "yes"),
        (np.False_, "no"),
    ],
)
def test_a_cell_that_is_no_text_stands_for_its_digits(cell: object, text: str) -> None:
    assert text_of(cell) == text


@given(st.floats(allow_nan=False, allow_infinity=False, min_value=1e-12, max_value=1e15))
def test_the_digits_of_a_number_give_it_back(number: float) -> None:
    assert float(text_of(number)) == number
    assert "e" not in text_of(number)


def _texts(id: str, unit: str | None = None, missing: tuple[str, ...] = ()) -> FieldTexts:
    model = shipped("general-cvd-2008-lipids")
    return FieldTexts(
        model,
        model.by_id[id],
        FindingSets(field.id for field in model.fields),
        unit=unit,
        answers={"5.00": "6"},
        missing=missing,
        at=NOW,
    )


@pytest.mark.parametrize(
    ("id", "unit", "low", "high"),
    [("total_cholesterol", "mmol/L", 1.0, 22.0), ("total_cholesterol", None, 40.0, 800.0), ("age", None, 10.0, 120.0)],
)
def test_many_plain_decimals_at_once_are_what_each_is_alone(id: str, unit: str | None, low: float, high: float) -> None:
    draw = np.random.default_rng(3)
    texts = [f"{value:.{place % 4}f}" for place, value in enumerate(draw.uniform(low, high, 2000))]
    texts = list(dict.fromkeys([*texts, "5.00", "4.00", "007", "1e3", "6.", "30", "74", "-5", "5.2 mmol/L"]))
    at_once, alone = _texts(id, unit, ("4.00",)), _texts(id, unit, ("4.00",))
    together = at_once.read(texts).table
    for text in texts:
        alone.read([text])
    apart = alone.read(texts).table
    for name in TEXT_RECORD.names or ():
        if name in ("unit", "said"):
            continue
        np.testing.assert_array_equal(getattr(together, name), getattr(apart, name), err_msg=name)
    assert [together.units[place] for place in together.unit] == [apart.units[place] for place in apart.unit]
    assert at_once.read(["4.00", "5.00"]).state.tolist() == [0, at_once.read(["6"]).state[0]]


def test_texts_are_forgotten_when_there_are_too_many() -> None:
    texts = _texts("systolic_bp")
    for start in range(0, MOST_KEPT + 100_000, 100_000):
        read = texts.read([f"{120 + place / 1e7:.7f}" for place in range(start, start + 100_000)])
        assert read.value[0] == 120 + start / 1e7
    assert len(read.table.texts) <= MOST_KEPT + 100_000
    assert texts.read(["130"]).table.texts == ["130"]


def test_sets_of_findings_join_and_are_written_in_page_order() -> None:
    sets = FindingSets(["age", "sex"])
    said = np.zeros(5, dtype=np.intp)
    sets.add(said, np.array([0, 1]), SaidCode(Grade.STOP, FindingCode.MISSING, "sex"))
    sets.add(said, np.array([1, 2]), SaidCode(Grade.STOP, FindingCode.UNREADABLE, "age"))
    sets.add(said, np.array([2, 3]), SaidCode(Grade.CAUTION, FindingCode.UNCONFIRMED))
    sets.add(said, np.array([3]), SaidCode(Grade.CAUTION, FindingCode.NEAR_CUT, "age"))
    sets.add(said, np.array([3]), SaidCode(Grade.CAUTION, FindingCode.NEAR_CUT, "age"))
    used, at = sets.used(said)
    assert [(used[place].stops, used[place].cautions) for place in at] == [
        ("missing:sex", ""),
        ("unreadable:age missing:sex", ""),
        ("unreadable:age", "unconfirmed"),
        ("", "near_cut:age unconfirmed"),
        ("", ""),
    ]
    assert sets.stops[said].tolist() == [True, True, True, False, False]


def test_a_field_of_numbers_says_where_it_stands() -> None:
    read = _texts("age").read(["61", "61.5", "25", "", "unknown"])
    assert isinstance(read.field, NumberField)
    assert read.state.tolist() == [1, 1, 2, 0, 3]
    assert read.table.whole_years[read.at].tolist() == [True, False, False, False, False]
