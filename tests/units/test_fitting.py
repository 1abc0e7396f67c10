"""The unit somebody may have meant, and the pairs of units that no check can tell apart."""

from itertools import permutations
from math import log, sqrt

import pytest

from clinicalc.errors import UnitError
from clinicalc.units import (
    Range,
    all_quantities,
    fitting_units,
    overlapping_units,
    possible_in,
    quantity,
    unit,
    usual_in,
)

# the analytes and measurements where the wrong unit must never give a number
NEVER_TAKEN = ["total_cholesterol", "hdl_cholesterol", "ldl_cholesterol", "non_hdl_cholesterol", "creatinine"]
NEVER_TAKEN += ["systolic_bp", "diastolic_bp", "apolipoprotein_b", "temperature"]


def _inside(range_: Range | None) -> Range:
    assert range_ is not None
    return range_


def test_the_slip_of_a_cholesterol() -> None:
    total = quantity("total_cholesterol")
    assert not _inside(possible_in(total, "mg/dL")).contains(5.2)
    assert fitting_units(total, 5.2, "mg/dL") == ("mmol/L",)
    assert not _inside(possible_in(total, "mmol/L")).contains(200)
    assert fitting_units(total, 200, "mmol/L") == ("mg/dL",)
    assert fitting_units(total, 5_000_000, "mg/dL") == ()
    assert fitting_units(total, 5.2, "mg/dL", factor=0.0259) == ("mmol/L",)


@pytest.mark.parametrize(
    ("id", "number", "typed_in", "offer"),
    [
        ("height", 1.75, "cm", "m"),
        ("height", 70, "cm", "[in_i]"),
        ("height", 175, "m", "cm"),
        ("systolic_bp", 16, "mm[Hg]", "kPa"),
        ("systolic_bp", 120, "kPa", "mm[Hg]"),
        ("creatinine", 80, "mg/dL", "umol/L"),
        ("creatinine", 1.1, "umol/L", "mg/dL"),
        ("glucose", 5.6, "mg/dL", "mmol/L"),
        ("glucose", 110, "mmol/L", "mg/dL"),
        ("hba1c", 48, "%", "mmol/mol"),
        ("hba1c", 6.5, "mmol/mol", "%"),
        ("temperature", 98.6, "Cel", "[degF]"),
        ("haemoglobin", 140, "g/dL", "g/L"),
        ("weight", 11, "kg", "[stone_av]"),
    ],
)
def test_a_slip_is_a_stop_with_the_offer(id: str, number: float, typed_in: str, offer: str) -> None:
    assert not _inside(possible_in(quantity(id), typed_in)).contains(number)
    assert offer in fitting_units(quantity(id), number, typed_in)


@pytest.mark.parametrize("id", NEVER_TAKEN)
def test_no_usual_value_is_possible_in_the_other_unit(id: str) -> None:
    entry = quantity(id)
    for meant, typed_in in permutations(entry.units, 2):
        usual, possible = _inside(usual_in(entry, meant)), _inside(possible_in(entry, typed_in))
        assert usual.high < possible.low or usual.low > possible.high


@pytest.mark.parametrize("id", [entry.id for entry in all_quantities() if len(entry.units) > 1])
def test_a_slip_is_noticed_unless_the_pair_is_named_as_overlapping(id: str) -> None:
    entry = quantity(id)
    named = {frozenset((overlap.one, overlap.other)) for overlap in overlapping_units() if overlap.quantity == id}
    for meant, typed_in in permutations(entry.units, 2):
        usual, wrong = _inside(usual_in(entry, meant)), _inside(usual_in(entry, typed_in))
        if usual == wrong or frozenset((meant, typed_in)) in named:
            continue
        for number in (usual.low, sqrt(max(usual.low, 0) * usual.high), usual.high):
            assert not wrong.contains(number)
            assert meant in fitting_units(entry, number, typed_in)


def test_the_pairs_no_check_can_tell_apart() -> None:
    pairs = {(overlap.quantity, overlap.one, overlap.other) for overlap in overlapping_units()}
    assert pairs == {
        ("weight", "kg", "[lb_av]"),
        ("waist", "cm", "[in_i]"),
        ("lipoprotein_a", "nmol/L", "mg/dL"),
        ("urine_acr", "mg/g", "mg/mmol"),
        ("c_reactive_protein", "mg/L", "mg/dL"),
        ("urea", "mmol/L", "mg/dL"),
        ("urea_nitrogen", "mg/dL", "mmol/L"),
        ("bilirubin", "umol/L", "mg/dL"),
        ("alcohol_intake", "g/wk", "g/d"),
        *(
            ("duration", *pair)
            for pair in (("a", "mo"), ("a", "wk"), ("a", "d"), ("mo", "wk"), ("mo", "d"), ("wk", "d"))
        ),
    }


def test_shares_are_shares_of_the_narrower_range() -> None:
    shares = [overlap.share for overlap in overlapping_units()]
    assert all(0 < share <= 1 for share in shares)
    assert shares == sorted(shares, reverse=True)
    (weight,) = [overlap for overlap in overlapping_units() if overlap.quantity == "weight"]
    # usual 35 to 200 kg are 77.2 to 440.9 lb: 77.2 to 200 is shared, on the logarithmic scale
    assert weight.share == pytest.approx(log(200 / (35 / 0.45359237)) / log(200 / 35), rel=1e-9)


def test_units_of_the_same_size_are_no_overlap() -> None:
    assert usual_in(quantity("sodium"), "meq/L") == usual_in(quantity("sodium"), "mmol/L")
    assert "sodium" not in {overlap.quantity for overlap in overlapping_units()}


def test_ranges_in_another_unit() -> None:
    total = quantity("total_cholesterol")
    assert possible_in(total, "mg/dL") == Range(40, 800)
    assert _inside(possible_in(total, "mmol/L")).low == pytest.approx(40 * 0.02586)
    assert _inside(possible_in(total, "mmol/L", 0.0259)).high == pytest.approx(800 * 0.0259)
    lipoprotein = quantity("lipoprotein_a")
    assert possible_in(lipoprotein, "nmol/L") == lipoprotein.possible
    assert usual_in(lipoprotein, "mg/dL") == lipoprotein.apart[0].usual
    assert usual_in(quantity("number"), "1") is None
    assert fitting_units(quantity("number"), 5, "1") == ()


def test_a_foreign_unit_has_no_range() -> None:
    with pytest.raises(UnitError, match="not indexed to body surface"):
        possible_in(quantity("egfr_indexed"), "mL/min")
    assert unit("mL/min").code == "mL/min"
