"""The unit table against an independent reading of UCUM (ucumvert 0.3.2 over pint)."""

from fractions import Fraction
from typing import Any

import pytest
from ucumvert import PintUcumRegistry

from clinicalc.units import Unit, all_units, find_unit, unit

# Handled apart, each with the reason:
#   Cel, [degF]   pint keeps offset units out of products, so the affine test below takes them
#   mm[Hg]        UCUM 2.2 fixes m[Hg] = 133.3220 kPa; pint carries the conventional 133.322387415 Pa
#   {score}       an annotation alone; ucumvert parses it to a bare token without a magnitude
APART = frozenset({"Cel", "[degF]", "mm[Hg]", "{score}"})


@pytest.fixture(scope="module")
def registry() -> Any:
    return PintUcumRegistry()


def _base_of(entry: Unit) -> Unit:
    (first, *_) = [other for other in all_units() if other.dimension == entry.dimension and other.scale == 1]
    return first


@pytest.mark.parametrize("code", [entry.code for entry in all_units()])
def test_every_code_is_ucum(registry: Any, code: str) -> None:
    assert registry.from_ucum(code) is not None


@pytest.mark.parametrize("bad", ["mmHg", "years", "[st_av]", "mm[hg]"])
def test_the_independent_reader_refuses_what_is_not_ucum(registry: Any, bad: str) -> None:
    # so that the test above can fail
    with pytest.raises(Exception):  # noqa: B017, PT011  (lark's own error types)
        registry.from_ucum(bad)


@pytest.mark.parametrize("code", [entry.code for entry in all_units() if entry.code not in APART])
def test_every_scale_is_derived_again(registry: Any, code: str) -> None:
    entry = unit(code)
    ratio = registry.from_ucum(code) / registry.from_ucum(_base_of(entry).code)
    assert ratio.to("dimensionless").magnitude == pytest.approx(float(entry.scale), rel=1e-12)
    assert entry.offset == 0


def test_mercury_column_is_ucums_own_figure(registry: Any) -> None:
    assert unit("mm[Hg]").scale == Fraction("0.1333220")  # kPa; ucum-essence.xml 2.2: m[Hg] = 133.3220 kPa
    assert registry.from_ucum("mm[Hg]").to("kPa").magnitude == pytest.approx(0.133322, rel=5e-6)


@pytest.mark.parametrize("fahrenheit", [-40.0, 32.0, 98.6, 212.0])
def test_temperatures_against_pint(registry: Any, fahrenheit: float) -> None:
    entry = unit("[degF]")
    celsius = float(Fraction(fahrenheit) * entry.scale + entry.offset)
    assert celsius == pytest.approx(registry.Quantity(fahrenheit, "degF").to("degC").magnitude, abs=1e-9)
    assert (unit("Cel").scale, unit("Cel").offset) == (Fraction(1), Fraction(0))


def test_annotations_separate_what_a_parser_makes_equal(registry: Any) -> None:
    # UCUM: text in braces carries no meaning; so the table gives each annotated code a dimension of its own
    indexed, plain = registry.from_ucum("mL/min/{1.73_m2}"), registry.from_ucum("mL/min")
    assert (indexed / plain).to("dimensionless").magnitude == 1
    assert unit("mL/min/{1.73_m2}").dimension != unit("mL/min").dimension
    annotated = [entry.dimension for entry in all_units() if "{" in entry.code]
    assert all([entry.dimension for entry in all_units()].count(dimension) == 1 for dimension in annotated)


def test_arbitrary_units_convert_to_nothing_else() -> None:
    # UCUM: international units have no relation to any other unit, enzyme units (U = umol/min) included
    assert {entry.code for entry in all_units() if entry.dimension == unit("[IU]/L").dimension} == {
        "[IU]/L",
        "m[IU]/L",
        "u[IU]/mL",
        "k[IU]/L",
    }


def test_unbraced_body_surface_is_no_code() -> None:
    # parsers take "mL/min/1.73.m2" as 73 square metres times something
    assert find_unit("mL/min/1.73.m2") is None
