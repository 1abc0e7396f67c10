"""Units by code and by typed spelling."""

import json
from collections import defaultdict
from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from clinicalc.errors import UnitError
from clinicalc.resources import read_shipped
from clinicalc.units import Unit, all_quantities, all_units, find_unit, unit
from clinicalc.units.unit import find_close_spellings

NOTICE = (
    "UCUM codes: copyright Regenstrief Institute, Inc. and the UCUM Organization; "
    "used under the UCUM copyright notice and licence, version 2.2 (2024-06-17)"
)


@pytest.mark.parametrize("name", ["resources/units.json", "resources/quantities.json"])
def test_tables_carry_the_ucum_notice(name: str) -> None:
    assert json.loads(read_shipped(name))["notice"] == NOTICE


@pytest.mark.parametrize("entry", all_units(), ids=lambda entry: entry.code)
def test_every_spelling_finds_its_unit(entry: Unit) -> None:
    for typed in (entry.code, entry.spelling, *entry.typed_as):
        if typed:
            assert find_unit(typed) == entry
            assert find_unit(f" {typed} ") == entry


def test_no_spelling_is_claimed_by_two_units() -> None:
    claims: defaultdict[str, set[str]] = defaultdict(set)
    for entry in all_units():
        for typed in {entry.code, entry.spelling, *entry.typed_as} - {""}:
            claims["".join(typed.split()).casefold()].add(entry.code)
    assert {typed: codes for typed, codes in claims.items() if len(codes) > 1} == {}
    assert len({entry.code for entry in all_units()}) == len(all_units())


def test_trade_spellings_are_all_different() -> None:
    spellings = [entry.spelling for entry in all_units()]
    assert len(set(spellings)) == len(spellings)


@pytest.mark.parametrize(
    ("typed", "code"),
    [
        ("mg/dl", "mg/dL"),
        ("MG/DL", "mg/dL"),
        ("mmol/l", "mmol/L"),
        ("µmol/L", "umol/L"),  # U+00B5 micro sign
        ("μmol/l", "umol/L"),  # U+03BC Greek mu
        ("umol/l", "umol/L"),
        ("mcmol/L", "umol/L"),
        ("mm Hg", "mm[Hg]"),
        ("mmhg", "mm[Hg]"),
        ("mL/min/1.73 m²", "mL/min/{1.73_m2}"),
        ("ml/min/1,73m2", "mL/min/{1.73_m2}"),
        ("mL/min per 1.73 m^2", "mL/min/{1.73_m2}"),
        ("kg/m²", "kg/m2"),
        ("kg/m^2", "kg/m2"),
        ("10⁹/L", "10*9/L"),
        ("x10^9/L", "10*9/L"),
        ("× 10⁹ / l", "10*9/L"),
        ("years", "a"),
        ("yrs", "a"),
        ("lbs", "[lb_av]"),
        ("st", "[stone_av]"),
        ("inches", "[in_i]"),
        ("per cent", "%"),
        ("°F", "[degF]"),
        ("ºC", "Cel"),  # the masculine ordinal sign that many keyboards give
        ("beats per minute", "/min"),
        ("mEq/L", "meq/L"),
        ("mg/dL", "mg/dL"),
    ],
)
def test_spellings_people_type(typed: str, code: str) -> None:
    assert find_unit(typed) == unit(code)


@pytest.mark.parametrize("typed", ["", " ", "mmol/K", "mL/min/1.73.m2", "1.73 m2", "x" * 10_000, "\u202e", "٣"])
def test_what_is_no_unit(typed: str) -> None:
    assert find_unit(typed) is None


@given(st.text(max_size=80))
@settings(deadline=None)
def test_finding_never_raises(typed: str) -> None:
    found = find_unit(typed)
    assert found is None or found in all_units()
    assert len(find_close_spellings(typed)) <= 3


@pytest.mark.parametrize(
    ("wrong", "meant"),
    [
        ("mmHg", "mm[Hg]"),
        ("mg/dl", "mg/dL"),
        ("mm[hg]", "mm[Hg]"),
        ("years", "a"),
        ("mL/min/1.73.m2", "mL/min/{1.73_m2}"),
        ("mL/min/1.73m2", "mL/min/{1.73_m2}"),
        ("umol/l", "umol/L"),
    ],
)
def test_a_code_must_be_exact_and_the_error_names_the_one_meant(wrong: str, meant: str) -> None:
    with pytest.raises(UnitError) as caught:
        unit(wrong)
    assert meant in caught.value.do
    assert wrong in str(caught.value)


def test_an_unheard_of_code_is_answered_without_a_match() -> None:
    with pytest.raises(UnitError, match=r"resources/units\.json"):
        unit("§§§§")


def test_scales_are_exact_and_every_dimension_has_a_base() -> None:
    assert unit("g/d").scale == 7 * unit("g/wk").scale
    assert unit("a").scale == Fraction("365.25") * unit("d").scale
    assert unit("mo").scale * 12 == unit("a").scale
    for entry in all_units():
        assert entry.scale > 0
        assert any(other.dimension == entry.dimension and other.scale == 1 for other in all_units())


def test_horizons_can_be_told_in_four_units() -> None:
    assert {unit(code).dimension for code in ("a", "mo", "wk", "d")} == {"time"}


def test_every_code_that_a_quantity_names_is_in_the_table() -> None:
    named = {code for entry in all_quantities() for code in (entry.unit, *entry.units)}
    named |= {refused.unit for entry in all_quantities() for refused in entry.refused}
    assert {unit(code).code for code in named} == named
