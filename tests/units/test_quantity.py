"""Quantities, their limits and the cross-checks between them."""

from itertools import chain

import pytest

from clinicalc.errors import UnitError
from clinicalc.units import Quantity, Range, all_quantities, cross_checks, quantity, unit

# what other rooms and the shipped coefficient files name
NAMED = [
    "age",
    "total_cholesterol",
    "hdl_cholesterol",
    "ldl_cholesterol",
    "non_hdl_cholesterol",
    "triglycerides",
    "glucose",
    "systolic_bp",
    "diastolic_bp",
    "creatinine",
    "egfr_indexed",
    "creatinine_clearance",
    "body_mass_index",
    "weight",
    "height",
    "waist",
    "hba1c",
    "lipoprotein_a",
    "c_reactive_protein",
    "urea",
    "urea_nitrogen",
    "urate",
    "albumin",
    "haemoglobin",
    "bilirubin",
    "calcium",
    "potassium",
    "sodium",
    "platelets",
    "white_cells",
    "heart_rate",
    "temperature",
    "urine_acr",
    "apolipoprotein_b",
    "fev1",
    "oxygen_saturation",
    "cigarettes_per_day",
    "pack_years",
    "duration",
    "score",
    "number",
]


@pytest.mark.parametrize("id", NAMED)
def test_named_quantities_are_there(id: str) -> None:
    assert quantity(id).id == id


@pytest.mark.parametrize("entry", all_quantities(), ids=lambda entry: entry.id)
def test_usual_lies_inside_possible_and_both_have_a_source(entry: Quantity) -> None:
    if entry.id == "number":
        assert (entry.unit, entry.possible, entry.usual) == ("1", None, None)
        return
    pairs = [(entry.possible, entry.usual), *((apart.possible, apart.usual) for apart in entry.apart)]
    for possible, usual in pairs:
        assert possible is not None
        assert usual is not None
        assert possible.low <= usual.low < usual.high <= possible.high
    assert entry.source == "common practice"  # none of the ranges is taken from a paper


@pytest.mark.parametrize("entry", all_quantities(), ids=lambda entry: entry.id)
def test_units_are_distinct_and_hold_the_base(entry: Quantity) -> None:
    assert entry.unit in entry.units
    assert len(set(entry.units)) == len(entry.units)
    assert entry.label.strip() == entry.label != ""
    assert not {refused.unit for refused in entry.refused} & set(entry.units)


@pytest.mark.parametrize("entry", all_quantities(), ids=lambda entry: entry.id)
def test_factors_stand_between_permitted_units_of_two_kinds(entry: Quantity) -> None:
    if entry.molar:
        assert {entry.molar.mass_unit, entry.molar.molar_unit} <= set(entry.units)
        assert unit(entry.molar.mass_unit).dimension != unit(entry.molar.molar_unit).dimension
        assert entry.molar.source
    if entry.equation:
        assert {entry.equation.from_unit, entry.equation.to_unit} <= set(entry.units)
        assert entry.equation.source
    if entry.no_conversion:
        assert {apart.unit for apart in entry.apart} == set(entry.units) - {entry.unit}
    else:
        assert entry.apart == ()


def test_ids_and_labels_are_unique() -> None:
    for names in ([entry.id for entry in all_quantities()], [entry.label for entry in all_quantities()]):
        assert len(set(names)) == len(names)


def test_a_misspelt_quantity_is_answered_with_the_close_match() -> None:
    with pytest.raises(UnitError, match="total_cholesterol"):
        quantity("total_cholestrol")
    with pytest.raises(UnitError, match="number"):
        quantity("§§§")


def test_a_range_is_inclusive_and_forgives_the_last_bit_only() -> None:
    ages = Range(0, 120)
    assert ages.contains(0)
    assert ages.contains(120)
    assert ages.contains(120.00000000000001)
    assert Range(0, 100 / 3).contains(33.33333333333334)
    assert not ages.contains(120.001)
    assert not ages.contains(-0.001)
    assert not ages.contains(float("nan"))
    assert not ages.contains(float("inf"))


def test_cross_checks_compare_quantities_with_the_same_base() -> None:
    for check in cross_checks():
        assert quantity(check.lower).unit == quantity(check.upper).unit
        assert check.lower != check.upper
        assert check.message.endswith(".")
    pairs = [(check.lower, check.upper) for check in cross_checks()]
    assert len(set(pairs)) == len(pairs)


def test_the_cross_checks_that_stop() -> None:
    stops = {(check.lower, check.upper) for check in cross_checks() if check.grade == "stop"}
    assert stops == {
        ("hdl_cholesterol", "total_cholesterol"),
        ("ldl_cholesterol", "total_cholesterol"),
        ("non_hdl_cholesterol", "total_cholesterol"),
        ("diastolic_bp", "systolic_bp"),
    }


def test_what_a_cross_check_lets_through() -> None:
    by_pair = {(check.lower, check.upper): check for check in cross_checks()}
    hdl = by_pair["hdl_cholesterol", "total_cholesterol"]
    assert hdl.holds(47, 180)
    assert hdl.holds(180, 180)
    assert not hdl.holds(181, 180)
    pressure = by_pair["diastolic_bp", "systolic_bp"]
    assert pressure.holds(80, 120)
    assert not pressure.holds(120, 120)
    assert not pressure.holds(120, 80)


def test_the_units_of_the_shipped_models_are_permitted_somewhere() -> None:
    codes = list(chain.from_iterable(entry.units for entry in all_quantities()))
    assert {"mg/dL", "mmol/L", "umol/L", "mm[Hg]", "kPa", "a", "%", "mmol/mol", "mL/min/{1.73_m2}"} <= set(codes)
