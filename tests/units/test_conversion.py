"""Conversions within one quantity, and the refusals."""

from fractions import Fraction
from itertools import permutations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from clinicalc.errors import UnitError
from clinicalc.units import Conversion, all_quantities, conversion, possible_in, quantity, unit, usual_in

EVERY_PAIR = [(entry.id, one, other) for entry in all_quantities() for one, other in permutations(entry.units, 2)]


def _apply(id: str, value: float, from_code: str, to_code: str, factor: float | None = None) -> float:
    return conversion(quantity(id), from_code, to_code, factor).apply(value)


@pytest.mark.parametrize(("id", "one", "other"), EVERY_PAIR)
def test_every_pair_of_units_goes_there_and_back_or_says_why_not(id: str, one: str, other: str) -> None:
    entry = quantity(id)
    if entry.no_conversion:
        with pytest.raises(UnitError) as caught:
            conversion(entry, one, other)
        assert caught.value.why == entry.no_conversion
        assert caught.value.why.endswith(".")
        return
    there, back = conversion(entry, one, other), conversion(entry, other, one)
    usual, possible = usual_in(entry, one), possible_in(entry, one)
    assert usual is not None
    assert possible is not None
    for value in (usual.low, usual.high, possible.high, (usual.low + usual.high) / 3):
        assert back.apply(there.apply(value)) == pytest.approx(value, rel=1e-12, abs=1e-300)


def test_only_lipoprotein_a_never_converts() -> None:
    assert [entry.id for entry in all_quantities() if entry.no_conversion] == ["lipoprotein_a"]


# Factors: university and SI tables (csmu.edu.tw, IASRI), consistent with the JAMA list of SI conversion factors;
# molar masses in g/mol: cholesterol, triglycerides, glucose and creatinine as printed with the factors, the others
# from memory. Albumin, haemoglobin, CRP and apolipoprotein B are pure units (haemoglobin and CRP from memory).
@pytest.mark.parametrize(
    ("id", "mass", "molar", "factor"),
    [
        ("total_cholesterol", "mg/dL", "mmol/L", "0.02586"),
        ("hdl_cholesterol", "mg/dL", "mmol/L", "0.02586"),
        ("ldl_cholesterol", "mg/dL", "mmol/L", "0.02586"),
        ("non_hdl_cholesterol", "mg/dL", "mmol/L", "0.02586"),
        ("triglycerides", "mg/dL", "mmol/L", "0.01129"),
        ("glucose", "mg/dL", "mmol/L", "0.05551"),
        ("creatinine", "mg/dL", "umol/L", "88.4"),
        ("urea_nitrogen", "mg/dL", "mmol/L", "0.357"),
        ("urea", "mg/dL", "mmol/L", "0.1665"),
        ("urate", "mg/dL", "umol/L", "59.48"),
        ("bilirubin", "mg/dL", "umol/L", "17.1"),
        ("calcium", "mg/dL", "mmol/L", "0.2495"),
        ("albumin", "g/dL", "g/L", "10"),
        ("haemoglobin", "g/dL", "g/L", "10"),
        ("c_reactive_protein", "mg/dL", "mg/L", "10"),
        ("apolipoprotein_b", "mg/dL", "g/L", "0.01"),
        ("urine_acr", "mg/g", "mg/mmol", "0.1131"),  # from creatinine's molar mass
    ],
)
def test_published_factors(id: str, mass: str, molar: str, factor: str) -> None:
    assert conversion(quantity(id), mass, molar) == Conversion(float(factor), 0.0)
    assert conversion(quantity(id), molar, mass).scale == float(1 / Fraction(factor))


@pytest.mark.parametrize(
    ("id", "molar_mass", "per_molecule"),
    [
        ("total_cholesterol", 386.65, 1),
        ("triglycerides", 885.7, 1),
        ("glucose", 180.156, 1),
        ("creatinine", 113.12, 1),
        ("urea", 60.06, 1),  # from memory
        ("urea_nitrogen", 14.007, 2),  # from memory; urea molecules, two nitrogen atoms in each
        ("urate", 168.11, 1),  # from memory
        ("bilirubin", 584.66, 1),  # from memory
        ("calcium", 40.08, 1),  # from memory
    ],
)
def test_factors_follow_from_molar_masses(id: str, molar_mass: float, per_molecule: int) -> None:
    molar = quantity(id).molar
    assert molar is not None
    millimoles = float(molar.factor * unit(molar.molar_unit).scale)
    assert millimoles == pytest.approx(10 / molar_mass / per_molecule, rel=1e-3)


def test_urea_nitrogen_is_not_urea() -> None:
    # 28 mg/dL of urea nitrogen and 60 mg/dL of urea are the same 10 mmol/L of urea
    assert _apply("urea_nitrogen", 28, "mg/dL", "mmol/L") == pytest.approx(10.0, abs=0.01)
    assert _apply("urea", 60, "mg/dL", "mmol/L") == pytest.approx(10.0, abs=0.01)


def test_a_files_own_factor_replaces_the_tables() -> None:
    # 213 mg/dL is 5.508 mmol/L with 0.02586 and 5.517 with 0.0259
    assert _apply("total_cholesterol", 213, "mg/dL", "mmol/L") == pytest.approx(5.508, abs=5e-4)
    assert _apply("total_cholesterol", 213, "mg/dL", "mmol/L", 0.0259) == pytest.approx(5.517, abs=5e-4)
    assert conversion(quantity("creatinine"), "mg/dL", "umol/L", 88.42) == Conversion(88.42, 0.0)
    assert conversion(quantity("creatinine"), "umol/L", "mg/dL", 88.42).scale == float(1 / Fraction("88.42"))
    assert conversion(quantity("glucose"), "mg/dL", "mg/dL", 0.0555) == Conversion(1.0, 0.0)


@pytest.mark.parametrize("id", [entry.id for entry in all_quantities() if entry.molar])
def test_the_tables_factor_given_by_a_file_changes_no_bit(id: str) -> None:
    # 1 / 0.05551 rounds differently when 0.05551 is taken as its nearest double instead of as the decimals that stand
    entry = quantity(id)
    assert entry.molar is not None
    factor = float(entry.molar.factor)
    for one, other in permutations(entry.units, 2):
        assert conversion(entry, one, other, factor) == conversion(entry, one, other)


@pytest.mark.parametrize("factor", [0.0, -0.02586, float("nan"), float("inf")])
def test_a_factor_must_be_positive_and_finite(factor: float) -> None:
    with pytest.raises(UnitError, match=r"0\.02586"):
        conversion(quantity("total_cholesterol"), "mg/dL", "mmol/L", factor)


def test_a_factor_without_use_is_refused() -> None:
    with pytest.raises(UnitError, match="takes no factor"):
        conversion(quantity("systolic_bp"), "mm[Hg]", "kPa", 0.1333)


def test_hba1c_goes_by_the_master_equation() -> None:
    # ngsp.org: NGSP = 0.09148 x IFCC + 2.152; 6.5 % is 48 mmol/mol as displayed, 53 mmol/mol is 7.0 %
    assert _apply("hba1c", 6.5, "%", "mmol/mol") == pytest.approx(47.5, abs=0.05)
    assert round(_apply("hba1c", 6.5, "%", "mmol/mol")) == 48
    assert _apply("hba1c", 48, "mmol/mol", "%") == pytest.approx(6.54, abs=0.005)
    # a plain change of units would give 5.3 %
    assert _apply("hba1c", 53, "mmol/mol", "%") == pytest.approx(7.0, abs=0.005)


@pytest.mark.parametrize(("one", "other"), [("mg/dL", "nmol/L"), ("nmol/L", "mg/dL")])
def test_lipoprotein_a_is_refused_both_ways(one: str, other: str) -> None:
    with pytest.raises(UnitError, match="no single factor"):
        conversion(quantity("lipoprotein_a"), one, other)
    assert conversion(quantity("lipoprotein_a"), one, one) == Conversion(1.0, 0.0)


@pytest.mark.parametrize(
    ("id", "from_code", "to_code", "why"),
    [
        ("egfr_indexed", "mL/min", "mL/min/{1.73_m2}", "not indexed to body surface"),
        ("creatinine_clearance", "mL/min/{1.73_m2}", "mL/min", "indexed to body surface"),
        ("total_cholesterol", "mm[Hg]", "mg/dL", "mmHg measures pressure"),
        ("total_cholesterol", "mg/dL", "kPa", "kPa measures pressure"),
        ("total_cholesterol", "umol/L", "mg/dL", "not offered for this quantity"),
        ("hba1c", "1", "%", "a bare number is not offered"),
        ("alanine_aminotransferase", "[IU]/L", "U/L", "arbitrary"),
        ("age", "{score}", "a", "points measures score"),
    ],
)
def test_refusals_say_why_and_name_the_units_to_use(id: str, from_code: str, to_code: str, why: str) -> None:
    with pytest.raises(UnitError) as caught:
        conversion(quantity(id), from_code, to_code)
    assert why in caught.value.why
    assert caught.value.what.startswith(quantity(id).label)
    assert unit(quantity(id).unit).spelling in caught.value.do


def test_an_unknown_code_is_refused() -> None:
    with pytest.raises(UnitError, match=r"mm\[Hg\]"):
        conversion(quantity("systolic_bp"), "mmHg", "kPa")


@pytest.mark.parametrize(
    ("id", "value", "from_code", "to_code", "expected"),
    [
        ("weight", 70.0, "kg", "[lb_av]", 154.3236),  # 1 lb = 0.45359237 kg (UCUM)
        ("weight", 11.0, "[stone_av]", "kg", 69.85322),  # 1 st = 6.35029318 kg (UCUM)
        ("height", 70.0, "[in_i]", "cm", 177.8),  # 1 in = 2.54 cm (UCUM)
        ("height", 1.75, "m", "cm", 175.0),
        ("systolic_bp", 120.0, "mm[Hg]", "kPa", 15.99864),  # m[Hg] = 133.3220 kPa (UCUM)
        ("temperature", 98.6, "[degF]", "Cel", 37.0),
        ("temperature", 37.0, "Cel", "[degF]", 98.6),
        ("duration", 1.0, "a", "mo", 12.0),
        ("duration", 1.0, "a", "d", 365.25),
        ("potassium", 4.2, "meq/L", "mmol/L", 4.2),
        ("platelets", 250.0, "10*3/uL", "10*9/L", 250.0),
        ("fev1", 2800.0, "mL", "L", 2.8),
    ],
)
def test_plain_units(id: str, value: float, from_code: str, to_code: str, expected: float) -> None:
    assert _apply(id, value, from_code, to_code) == pytest.approx(expected, rel=1e-6)


@given(st.floats(allow_nan=False))
def test_a_unit_and_itself_keep_every_bit(value: float) -> None:
    kept = conversion(quantity("hba1c"), "%", "%").apply(value)
    assert kept.hex() == value.hex()


def test_an_array_goes_the_same_way_as_one_value() -> None:
    values = np.linspace(2.5, 15.0, 1000)
    for id, one, other in (
        ("hba1c", "%", "mmol/mol"),
        ("glucose", "mmol/L", "mg/dL"),
        ("temperature", "Cel", "[degF]"),
    ):
        change = conversion(quantity(id), one, other)
        together = change.apply(values)
        assert [value.hex() for value in together.tolist()] == [change.apply(value).hex() for value in values.tolist()]
