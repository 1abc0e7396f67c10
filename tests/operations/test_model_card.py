"""The card of a model: its checks are those of the file, and what is not there is said."""

import json
from pathlib import Path
from typing import Any

import pytest

from clinicalc.library.key_files import open_key
from clinicalc.operations import practice_founding
from clinicalc.operations.course import Course
from clinicalc.operations.model_card import Check, ModelCard
from clinicalc.operations.publishing import prepare_signing, write_signed
from tests.library.keys_at_hand import PASSPHRASE
from tests.operations.practice_kit import Room, shipped

LIPIDS = "general-cvd-2008-lipids"
REGIONAL = "cvd-2021-regional"


def checks_of(card: ModelCard) -> dict[str, Check]:
    """The checks by name."""
    return {check.name: check for check in card.checks}


def changed(room: Room, id: str, **model: Any) -> Path:
    """A shipped file with other values in its model."""
    tree = json.loads(shipped(id).read_bytes())
    tree["model"] |= model
    file = room.folder / f"changed-{id}.json"
    file.write_text(json.dumps(tree), encoding="utf-8")
    return file


def test_the_checks_of_the_shipped_invented_file(room: Room) -> None:
    """8 examples, all computed from the fit; 6,000 people and 567 events: as its make script prints them."""
    card = room.look()
    checks = checks_of(card)
    assert list(checks) == ["Worked examples", "Signature", "Uncertainty", "Documentation", "Source", "Made from"]
    assert checks["Worked examples"] == Check(
        "Worked examples", "8 of 8 recomputed within tolerance (8 computed)", True
    )
    unsigned = "nobody signed it; who approves needs the whole fingerprint"
    assert checks["Signature"] == Check("Signature", unsigned, False)
    assert checks["Uncertainty"] == Check("Uncertainty", "full covariance, model-based", True)
    assert checks["Documentation"].says.startswith("15 items: data source and eligibility, outcome,")
    assert checks["Source"].says.startswith("local: Invented: a cohort of the Tarnwick practices")
    assert checks["Made from"] == Check("Made from", "6000 people, 567 events", True)
    assert card.horizons == "10 years"
    assert card.title == "Tarnwick cardiovascular disease, invented example"
    assert card.unconfirmed == ()
    assert card.row is None


@pytest.mark.parametrize(
    ("id", "name", "says", "ok"),
    [
        (LIPIDS, "Uncertainty", "approximate, rebuilt from printed intervals", True),
        (REGIONAL, "Uncertainty", "no band: The covariance matrix", False),
        (LIPIDS, "Worked examples", "13 of 13 recomputed within tolerance (2 from memory, 11 computed)", True),
        (REGIONAL, "Worked examples", "16 of 16 recomputed within tolerance (4 printed, 12 computed)", True),
        ("diabetes-2007-clinical", "Made from", "not stated", False),
        ("general-cvd-2008-lipids", "Source", "published: D'Agostino RB Sr", True),
    ],
)
def test_checks_of_other_shipped_files(room: Room, id: str, name: str, says: str, ok: bool) -> None:
    check = checks_of(room.look(shipped(id)))[name]
    assert check.says.startswith(says)
    assert check.ok is ok


def test_a_file_without_documentation_says_so(room: Room) -> None:
    check = checks_of(room.look(changed(room, "tarnwick-cvd-10y", documentation=[])))["Documentation"]
    assert (check.says, check.ok) == ("none", False)


def test_equations_that_differ_in_their_bands_are_named(room: Room) -> None:
    equations = json.loads(shipped(LIPIDS).read_bytes())["model"]["equations"]
    equations[1]["uncertainty"] = {"basis": "none", "because": "Nobody printed it."}
    examples = json.loads(shipped(LIPIDS).read_bytes())["model"]["worked_examples"]
    without = [
        {key: value for key, value in one.items() if one["values"]["sex"] == "female" or key not in ("lower", "upper")}
        for one in examples
    ]
    entries = json.loads(shipped(LIPIDS).read_bytes())["model"]["unconfirmed"]
    kept = [entry for entry in entries if entry["at"] != "/equations/1/uncertainty"]
    file = changed(room, LIPIDS, equations=equations, worked_examples=without, unconfirmed=kept)
    check = checks_of(room.look(file))["Uncertainty"]
    assert check.says == "women: approximate, rebuilt from printed intervals; men: no band: Nobody printed it."
    assert not check.ok


def test_signatures_trusted_unknown_and_revoked(room: Room) -> None:
    file = room.folder / "signed.json"
    write_signed(prepare_signing(shipped(), file), open_key(room.key("press"), PASSPHRASE), file)
    card = practice_founding.look_at_key(room.card_file("press"))
    unknown = room.look(file)
    assert not unknown.is_trusted
    assert checks_of(unknown)["Signature"] == Check(
        "Signature",
        f"not checked: this machine does not know the key {card.id[:4]} {card.id[4:8]} {card.id[8:12]}",
        False,
    )
    practice_founding.trust_publisher(room.card_file("press"), card.id)
    trusted = room.look(file)
    assert trusted.is_trusted
    assert checks_of(trusted)["Signature"] == Check("Signature", "Tarnwick Press, valid", True)
    practice_founding.revoke_publisher(card.id)
    revoked = checks_of(room.look(file))["Signature"]
    assert revoked.says == "Tarnwick Press, does not count: the key was revoked on this machine"
    assert not revoked.ok


def test_recalibrations_each_once_and_whether_one_is_required(room: Room) -> None:
    card = room.look(shipped(REGIONAL))
    assert card.recalibration_required
    assert card.recalibrations == (
        ("low", "Low-risk region"),
        ("moderate", "Moderate-risk region"),
        ("high", "High-risk region"),
        ("very-high", "Very-high-risk region"),
    )
    assert not room.look().recalibration_required


def test_an_installed_model_has_the_card_of_its_file(room: Room) -> None:
    looked, row = room.look(shipped(LIPIDS)), room.install(shipped(LIPIDS))
    card = room.card(row.fingerprint)
    assert card.row == row
    for name in ("fingerprint", "title", "version", "id", "outcome", "horizons", "checks", "documentation", "cautions"):
        assert getattr(card, name) == getattr(looked, name), name
    assert card.unconfirmed == looked.unconfirmed
    assert card.history == (
        "1 December 2026, Cleo Fell (Practice manager): installed (unsigned), from handed over on a stick",
    )
    assert card.faults == ()


def test_a_file_without_a_record_has_a_row_and_a_card(room: Room) -> None:
    row = room.install()
    for record in (room.place / "records").glob(f"{row.fingerprint}-*"):
        record.unlink()
    view = room.desk.read(Course())
    assert view.rows[0].says == "Refused: a record seen here is gone"  # and not that nobody ever brought it
    card = room.desk.card(view, row.fingerprint, Course())
    assert card.title == row.title  # this machine has seen what it is called
    assert card.faults
