"""Each step of the closed vocabulary, and cuts that do not feel the last bits of a conversion."""

from decimal import ROUND_HALF_EVEN, Context, Decimal
from math import e, inf

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from clinicalc.coefficients.schema import Spline, Step
from clinicalc.covariates.transforms import StepKind, apply_transform, compile_step, kind_of, round_significant
from clinicalc.units import conversion, quantity


def after(step: Step, *values: float, codes: dict[str, float] | None = None) -> list[float]:
    with np.errstate(all="ignore"):
        return [float(v) for v in apply_transform(compile_step(step, codes or {}), np.array(values))]


STEPS = {
    StepKind.SUBTRACT: (Step(subtract=2.5), [1.0, 4.0], [-1.5, 1.5]),
    StepKind.DIVIDE: (Step(divide=4.0), [1.0, -8.0], [0.25, -2.0]),
    StepKind.MULTIPLY: (Step(multiply=-3.0), [1.0, -2.0], [-3.0, 6.0]),
    StepKind.LOG: (Step(log="natural"), [1.0, e, e * e], [0.0, 1.0, 2.0]),
    StepKind.POWER: (Step(power=-2.0), [2.0, -4.0], [0.25, 0.0625]),
    StepKind.CLIP_LOW: (Step(clip_low=3.0), [2.0, 3.0, 4.0], [3.0, 3.0, 4.0]),
    StepKind.CLIP_HIGH: (Step(clip_high=3.0), [2.0, 3.0, 4.0], [2.0, 3.0, 3.0]),
    StepKind.SPLINE: (Step(spline=Spline((0.0, 1.0, 2.0), 1)), [-1.0, 1.0, 2.0, 3.0], [0.0, 0.25, 1.5, 3.0]),
    StepKind.ABOVE: (Step(above=3.0), [2.0, 3.0, 4.0], [0.0, 0.0, 1.0]),
    StepKind.FROM: (Step(from_=3.0), [2.0, 3.0, 4.0], [0.0, 1.0, 1.0]),
    StepKind.BELOW: (Step(below=3.0), [2.0, 3.0, 4.0], [1.0, 0.0, 0.0]),
    StepKind.UP_TO: (Step(up_to=3.0), [2.0, 3.0, 4.0], [1.0, 1.0, 0.0]),
    StepKind.IS: (Step(is_=("b", "c")), [0.0, 1.0, 2.0], [0.0, 1.0, 1.0]),
}
"""Worked by hand. The spline: x = 1: 1/4; x = 2: (8 - 2)/4; x = 3: (27 - 16 + 1)/4."""


@pytest.mark.parametrize("kind", StepKind)
def test_step(kind: StepKind) -> None:
    step, values, expected = STEPS[kind]
    assert kind_of(step) is kind
    codes = {"a": 0.0, "b": 1.0, "c": 2.0}
    assert after(step, *values, codes=codes) == pytest.approx(expected, rel=1e-15, abs=1e-15)


def test_powers() -> None:
    assert after(Step(power=2.0), -3.0) == [9.0]
    assert after(Step(power=0.5), 2.25) == [1.5]
    assert after(Step(power=3.0), -2.0) == [-8.0]


def test_steps_that_have_no_value() -> None:
    assert after(Step(log="natural"), 0.0) == [-inf]
    assert np.isnan(after(Step(log="natural"), -1.0)).all()
    assert after(Step(power=-1.0), 0.0) == [inf]
    assert np.isnan(after(Step(power=0.5), -1.0)).all()


# ---------------------------------------------------------------- cuts and rounding

# less than half a unit of the ninth digit beside the cut counts as the cut, more does not
NEAR = [
    (100.0, True),
    (100.0000004, True),
    (99.99999996, True),
    (99.9999996, False),
    (100.000001, False),
    (99.999999, False),
]


@pytest.mark.parametrize(("value", "same"), NEAR)
def test_cuts_compare_at_nine_digits(value: float, same: bool) -> None:
    over, under = value > 100 and not same, value < 100 and not same
    assert after(Step(above=100.0), value) == [float(over)]
    assert after(Step(from_=100.0), value) == [float(same or over)]
    assert after(Step(below=100.0), value) == [float(under)]
    assert after(Step(up_to=100.0), value) == [float(same or under)]


MASS_AND_MOLAR = [
    ("total_cholesterol", 100.0, None),
    ("total_cholesterol", 200.0, 0.02586),
    ("hdl_cholesterol", 40.0, 0.02586),
    ("triglycerides", 150.0, None),
    ("glucose", 126.0, None),
    ("creatinine", 1.3, None),
]


@pytest.mark.parametrize(("name", "cut", "factor"), MASS_AND_MOLAR)
def test_a_cut_survives_the_way_there_and_back(name: str, cut: float, factor: float | None) -> None:
    """100 mg/dL by way of the molar unit is still 100: not above, not below."""
    molar = "umol/L" if name == "creatinine" else "mmol/L"
    there = conversion(quantity(name), "mg/dL", molar, factor)
    back = conversion(quantity(name), molar, "mg/dL", factor)
    value = back.apply(there.apply(cut))
    assert after(Step(above=cut), value) == [0.0]
    assert after(Step(from_=cut), value) == [1.0]
    assert after(Step(below=cut), value) == [0.0]
    assert after(Step(up_to=cut), value) == [1.0]


def test_some_way_back_does_miss_in_binary() -> None:
    """Without the rounding the test above would prove nothing."""
    missed = []
    for tenths in range(10, 5000):
        cut = tenths / 10
        there, back = (conversion(quantity("glucose"), a, b) for a, b in (("mg/dL", "mmol/L"), ("mmol/L", "mg/dL")))
        missed.append(back.apply(there.apply(cut)) != cut)
        assert after(Step(from_=cut), back.apply(there.apply(cut))) == [1.0]
        assert after(Step(up_to=cut), back.apply(there.apply(cut))) == [1.0]
    assert any(missed)


@given(st.floats(1e-200, 1e200), st.sampled_from([1, -1]))
def test_rounding_is_that_of_decimal_arithmetic(size: float, sign: int) -> None:
    value = sign * size
    nine = Context(prec=9, rounding=ROUND_HALF_EVEN).create_decimal(Decimal(value))
    ninth = Decimal(10) ** (nine.adjusted() - 8)
    # a value within a rounding error of a tie may go either way
    assume(abs(2 * abs(Decimal(value) - nine) - ninth) > abs(nine) * Decimal("1e-14"))
    assert round_significant(np.array([value]))[0] == pytest.approx(float(nine), rel=1e-15)


def test_rounding_leaves_nought_and_infinity() -> None:
    assert list(round_significant(np.array([0.0, inf, -inf]))) == [0.0, inf, -inf]


@given(st.decimals(-10_000, 10_000, places=4), st.decimals(-10_000, 10_000, places=4), st.floats(1e-3, 1e3))
def test_cuts_agree_with_the_decimals_that_were_typed(value: Decimal, cut: Decimal, factor: float) -> None:
    """A value of up to eight digits, converted and back, falls on the side of the cut where its decimals are."""
    column = float(value) * factor / factor
    assert after(Step(above=float(cut)), column) == [float(value > cut)]
    assert after(Step(from_=float(cut)), column) == [float(value >= cut)]
    assert after(Step(below=float(cut)), column) == [float(value < cut)]
    assert after(Step(up_to=float(cut)), column) == [float(value <= cut)]
