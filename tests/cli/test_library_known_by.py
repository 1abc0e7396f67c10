"""An approval says by what the file was known: a typed fingerprint, a trusted publisher's signature, or both."""

from pathlib import Path

import pytest

from clinicalc.coefficients.shape import find_shape_problems
from clinicalc.coefficients.strict_json import parse
from clinicalc.library.records import RecordFile
from tests.cli.calling import call, example
from tests.cli.practices import FINGERPRINT, TARNWICK, Desk
from tests.library.records_kit import practice

TYPED = "The file was known by its whole fingerprint, which was typed"
SIGNED = "The file was known by the signature of a publisher trusted there"


def known_by(desk: Desk) -> str | None:
    """By what the one model was known, as `list` tells a program."""
    (model,) = desk.library("list", "--json").record["models"]
    said: str | None = model["approval"]["known_by"]
    return said


def told(desk: Desk) -> str:
    """What `show` says of the one model, on one line."""
    return " ".join(desk.library("show", TARNWICK).out.split())


@pytest.fixture
def signed(desk: Desk) -> Desk:
    """A desk with the model installed, signed by a publisher who is trusted here."""
    file = desk.folder / "signed.json"
    file.write_bytes(Path(example(TARNWICK)).read_bytes())
    assert call("sign", str(file), "--key", desk.key("press")).status == 0
    id = call("trust", "card", desk.key("press"), "--json").record["id"]
    assert call("trust", "add", desk.card("press"), "--id", id).status == 0
    assert desk.install(str(file)).status == 0
    return desk


def test_a_typed_fingerprint_is_said_and_carried_on_by_an_extension(approved: Desk) -> None:
    assert known_by(approved) == "fingerprint"
    assert TYPED in told(approved)
    words = ("--key", approved.key("ada"), "--reason", "Reviewed", "--review-until", "2028-06-30")
    assert approved.library("extend", TARNWICK, *words).status == 0
    assert known_by(approved) == "fingerprint"
    assert told(approved).count(TYPED) == 2
    assert approved.library("history").out.count("typed") == 2


def test_a_trusted_signature_is_said(signed: Desk) -> None:
    assert signed.approve().status == 0
    assert known_by(signed) == "signature"
    assert SIGNED in told(signed)


def test_both_are_said(signed: Desk) -> None:
    assert signed.approve("--fingerprint", FINGERPRINT).status == 0
    assert known_by(signed) == "fingerprint_and_signature"
    assert f"{TYPED}, and by the signature of a publisher trusted there" in told(signed)


def test_a_record_of_before_says_nothing_and_stays_as_it_is() -> None:
    old = practice()
    old.install()
    sealed = old.approve()
    assert b"known_by" not in sealed.content
    assert list(find_shape_problems(parse(sealed.content).value, RecordFile)) == []
    approval = old.replay().approval
    assert approval is not None
    assert approval.known_by is None
