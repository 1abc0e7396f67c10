"""The hazard log: every hazard has a control and a test that exists, and the pairs no check can tell are all named."""

import ast

import msgspec
import pytest

from clinicalc.resources import read_shipped
from clinicalc.units.fitting import overlapping_units
from tests.packaging.checkout import ROOT


class Hazard(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """One line of the log."""

    id: str
    hazard: str
    cause: str
    harm: str
    control: str
    proof: tuple[str, ...]
    left: str


class Overlap(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """Two units of a quantity in which some of the same digits are believable."""

    quantity: str
    units: tuple[str, str]


class HazardLog(msgspec.Struct, frozen=True, forbid_unknown_fields=True):
    """The log as it ships."""

    hazards: tuple[Hazard, ...]
    overlaps: tuple[Overlap, ...]


LOG = msgspec.json.decode(read_shipped("resources/hazards.json"), type=HazardLog)


@pytest.mark.parametrize("hazard", LOG.hazards, ids=lambda hazard: hazard.id)
def test_every_hazard_has_cause_harm_control_and_tests_that_exist(hazard: Hazard) -> None:
    assert all((hazard.hazard, hazard.cause, hazard.harm, hazard.control))
    assert hazard.proof
    for proof in hazard.proof:
        file, name = proof.split("::")
        tree = ast.parse((ROOT / file).read_text(encoding="utf-8"))
        assert name in {node.name for node in ast.walk(tree) if isinstance(node, ast.FunctionDef)}, proof


def test_ids_are_unique() -> None:
    ids = [hazard.id for hazard in LOG.hazards]
    assert len(ids) == len(set(ids))


def test_the_pairs_of_units_that_no_check_can_tell_are_named() -> None:
    named = {(overlap.quantity, *sorted(overlap.units)) for overlap in LOG.overlaps}
    assert named == {(pair.quantity, *sorted((pair.one, pair.other))) for pair in overlapping_units()}
